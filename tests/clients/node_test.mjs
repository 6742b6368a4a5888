// The module in Node.js, and the tools that other tests in Node.js rest on.
// node node_test.mjs MODULE
import assert from 'node:assert/strict';
import test from 'node:test';
import { OldSqlite, openBrowser, Sqlite } from './support.mjs';

const [module] = process.argv.slice(2);

test('the module answers in better-sqlite3', () => {
  const db = new Sqlite(':memory:');
  db.loadExtension(module);
  assert.match(db.prepare('SELECT ladderline_version()').pluck().get(), /^ladderline /i);
  db.close();
});

test('the old SQLite is one of 2014, before window functions and upserts', () => {
  const db = new OldSqlite();
  assert.match(db.exec('SELECT sqlite_version()')[0].values[0][0], /^3\.8\.7/);
  assert.throws(() => db.exec('SELECT sum(1) OVER ()'));
  db.close();
});

test('the browser lays out a page', async () => {
  const browser = await openBrowser();
  const page = await browser.newPage({ viewport: { width: 360, height: 640 } });
  await page.setContent('<p style="width: 50%; margin: 0">12 cases</p>');
  assert.equal(await page.textContent('p'), '12 cases');
  assert.equal((await page.locator('p').boundingBox()).width, (360 - 16) / 2);
  await browser.close();
});
