// The dashboard example as a person uses it, in a browser that reaches nothing but its server:
// node dashboard_test.mjs MODULE DATABASE   (a demo database; it is copied)
import assert from 'node:assert/strict';
import { spawn } from 'node:child_process';
import { copyFileSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import test from 'node:test';
import { fileURLToPath } from 'node:url';
import { liveFigures, plainFigures } from '../../examples/dashboard/figures.mjs';
import { openBrowser, Sqlite, temporaryFolder } from './support.mjs';

const [module, demo] = process.argv.slice(2);
const root = new URL('../../', import.meta.url);
const database = join(temporaryFolder(), 'dashboard.db');
const browser = await openBrowser();

// A prepared copy.
copyFileSync(demo, database);
{
  const db = new Sqlite(database);
  db.loadExtension(module);
  for (const script of ['sql/keep_models.sql', 'examples/dashboard/prepare.sql'])
    db.exec(readFileSync(new URL(script, root), 'utf8'));
  db.close();
}
const asPrepared = readFileSync(database);

const server = spawn(process.execPath,
                     [fileURLToPath(new URL('examples/dashboard/server.mjs', root)), database, module, '0'],
                     { stdio: ['ignore', 'pipe', 'inherit'] });
const address = await new Promise((resolve, reject) => {
  server.stdout.on('data', (text) => resolve(/http:\S+/.exec(text)[0]));
  server.on('exit', (code) => reject(new Error(`the server ended with ${code}`)));
});

// Opens the page; every request that leaves the server is refused and remembered.
const strayed = [];
const context = await browser.newContext();
await context.route('**', (route) => {
  if (route.request().url().startsWith(address)) return route.continue();
  strayed.push(route.request().url());
  return route.abort();
});
const page = await context.newPage();
const complaints = [];
page.on('console', (message) => complaints.push(message.text()));
page.on('pageerror', (error) => complaints.push(error.message));
await page.goto(address);
await page.waitForSelector('body[data-shown=all]');

async function choose(area) {
  await page.selectOption('#area', area);
  await page.waitForSelector(`body[data-shown="${area || 'all'}"]`);
}

// The texts of a table's cells, row by row.
const cells = (table) => page.$$eval(`#${table} tbody tr`, (rows) =>
  rows.map((row) => [...row.cells].map((cell) => cell.textContent)));

const tables = new Sqlite(database, { readonly: true });  // no extension
const plain = plainFigures(database);
const live = liveFigures(database, module);

test.after(async () => {
  server.removeAllListeners('exit');
  server.kill();
  await browser.close();
});

test('the page shows what the tables hold, and the filter changes it', async () => {
  const shown = {};
  for (const area of ['Ashquill', 'Grenholt']) {
    await choose(area);
    shown[area] = await cells('rates');
    const expected = tables.prepare(`
        SELECT period, CASE WHEN hidden THEN 'hidden' ELSE printf('%.1f', rate) END AS rate
        FROM published_rates WHERE area = ? ORDER BY period`).all(area);
    assert.equal(expected.length, 12);
    assert.deepEqual(shown[area].map((row) => ({ period: row[0], rate: row[2] })), expected);
    const sentences = tables.prepare(`
        SELECT sentence FROM published_effects
        WHERE name = 'cost in ' || ? AND kind <> 'rule_of_thumb' ORDER BY position`).pluck().all(area);
    assert.ok(sentences.length > 5);
    assert.deepEqual(await page.locator('#sentences li').allTextContents(), sentences);
  }
  assert.notDeepEqual(shown.Ashquill, shown.Grenholt);
  await choose('');
  assert.equal((await cells('rates')).length, 12);
  assert.notDeepEqual(await cells('rates'), shown.Ashquill);
});

test('plain tables and live views agree, to the last bit and on the page', async () => {
  for (const area of ['', ...plain.areas()]) {
    const refreshed = plain.of(area), fresh = live.of(area);
    assert.deepEqual(refreshed.rates, fresh.rates, area);
    // What the form for release rounds are ranges, so the steps from quartile to quartile.
    const levels = (figures) => figures.effects
      .filter((row) => row.kind === 'level')
      .map(({ column_name, to_value, effect, low, high }) => [column_name, to_value, effect, low, high]);
    assert.deepEqual(levels(refreshed), levels(fresh), area);
    if (area !== 'Saltspur Isle') assert.equal(levels(refreshed).length, 7);

    await choose(area);
    for (const row of await cells('rates')) assert.deepEqual(row.slice(1, 4), row.slice(4, 7));
    assert.equal(await page.locator('#rates .differs').count(), 0);
  }
});

test('live figures follow the records, refreshed ones wait for the refresh', async () => {
  const copy = join(temporaryFolder(), 'changed.db');
  copyFileSync(database, copy);
  const db = new Sqlite(copy);
  db.exec("DELETE FROM repair WHERE district = 'Ashquill' AND reported >= '2024-10-01' AND case_id % 2");
  db.close();
  const before = plainFigures(copy).of('Ashquill').rates.at(-1);
  const now = liveFigures(copy, module).of('Ashquill').rates.at(-1);
  assert.equal(before.events, plain.of('Ashquill').rates.at(-1).events);
  assert.ok(now.events < before.events && now.rate < before.rate);
});

test('small cells are shown as hidden, and a refused model with its reason', async () => {
  await choose('Saltspur Isle');
  for (const row of await cells('rates')) {
    assert.deepEqual(row.slice(1), ['hidden', 'hidden', 'few cases', 'hidden', 'hidden', 'few cases']);
  }
  assert.equal(await page.textContent('#problem'), 'No new model (refused): too few rows');
  assert.equal(await page.locator('#rates_box').isVisible(), false);
  // Nor do they come over the wire.
  for (const path of ['plain', 'live']) {
    const { rates } = await (await fetch(`${address}${path}?area=Saltspur%20Isle`)).json();
    for (const row of rates) assert.deepEqual([row.hidden, row.events, row.rate], [1, null, null]);
  }
});

test('the cautions of the model are on the page', async () => {
  await choose('Corvane');
  const cautions = tables.prepare(
      "SELECT caution FROM published_cautions WHERE name = 'cost in Corvane' ORDER BY position")
    .pluck().all();
  assert.ok(cautions.length > 3);
  assert.deepEqual(await page.locator('#cautions li').allTextContents(), cautions);
});

test('an unknown or hostile district gives an empty page and no error', async () => {
  for (const area of ["' OR 1 --", '<script>', 'Nowhere']) {
    const answer = await fetch(`${address}plain?area=${encodeURIComponent(area)}`);
    assert.equal(answer.status, 200);
    const { model, effects, rates } = await answer.json();
    assert.deepEqual({ model, effects, rates }, { model: null, effects: [], rates: [] });
  }
});

test('both connections are read-only, and the file stays as it was', () => {
  for (const { db } of [plain, live]) {
    for (const statement of ["UPDATE published_model SET reason = NULL", 'DELETE FROM repair',
                             'INSERT INTO release_rule VALUES (1, 1)', 'CREATE TABLE t(x)']) {
      assert.throws(() => db.exec(statement), { code: 'SQLITE_READONLY' }, statement);
    }
  }
  assert.throws(() => plain.db.prepare('SELECT ladderline_version()'), /no such function/);
  assert.ok(readFileSync(database).equals(asPrepared));
});

test('nothing is fetched from elsewhere, nothing fails, and a phone shows it without scrolling sideways',
     async () => {
  assert.deepEqual(strayed, []);
  assert.deepEqual(complaints, []);
  await page.setViewportSize({ width: 360, height: 740 });
  await choose('Ashquill');
  assert.equal(await page.evaluate(() => document.documentElement.scrollWidth), 360);
  // Something is drawn in both charts.
  for (const id of ['rates_chart', 'effects_chart']) {
    const colors = await page.$eval(`#${id}`, (canvas) => {
      const { data } = canvas.getContext('2d').getImageData(0, 0, canvas.width, canvas.height);
      return new Set(new Uint32Array(data.buffer)).size;
    });
    assert.ok(colors > 10, id);
  }
});
