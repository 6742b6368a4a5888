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

// A copy of `source` with `statements` run on it, the extension loaded.
function copyOf(source, path, ...statements) {
  copyFileSync(source, path);
  const db = new Sqlite(path);
  db.loadExtension(module);
  for (const text of statements) db.exec(text);
  db.close();
  return path;
}

const script = (path) => readFileSync(new URL(path, root), 'utf8');
copyOf(demo, database, script('sql/keep_models.sql'), script('examples/dashboard/prepare.sql'));
const asPrepared = readFileSync(database);

const servers = [];
async function serve(path) {
  const server = spawn(process.execPath,
                       [fileURLToPath(new URL('examples/dashboard/server.mjs', root)), path, module, '0'],
                       { stdio: ['ignore', 'pipe', 'inherit'] });
  servers.push(server);
  return new Promise((resolve, reject) => {
    server.stdout.on('data', (text) => resolve(/http:\S+/.exec(text)[0]));
    server.on('exit', (code) => reject(new Error(`the server ended with ${code}`)));
  });
}
const address = await serve(database);
const ask = async (from, path, area) =>
  (await fetch(`${from}${path}?area=${encodeURIComponent(area)}`)).json();

// Opens the page; every request that leaves this machine is refused and remembered.
const strayed = [];
const context = await browser.newContext();
await context.route('**', (route) => {
  if (new URL(route.request().url()).hostname === '127.0.0.1') return route.continue();
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
const hasModel = new Set(tables.prepare('SELECT name FROM published_model').pluck().all());

test.after(async () => {
  for (const server of servers) server.removeAllListeners('exit').kill();
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
    assert.deepEqual(refreshed.effects, fresh.effects, area);
    const levels = refreshed.effects.filter((row) => row.kind === 'level');
    assert.equal(levels.length, hasModel.has(area ? `cost in ${area}` : 'cost') ? 7 : 0, area);

    await choose(area);
    for (const row of await cells('rates')) assert.deepEqual(row.slice(1, 4), row.slice(4, 7));
    const effects = await cells('effects');
    assert.equal(effects.length, refreshed.effects.length);
    for (const [, effect, limits, ...other] of effects) {
      assert.deepEqual([effect, limits], other);
      const [low, high] = limits.split(' to ');
      assert.notEqual(low, high);
    }
    assert.equal(await page.locator('.differs').count(), 0);
  }
});

test('live figures follow the records, refreshed ones wait, and rows that look different are bold', async () => {
  const copy = copyOf(database, join(temporaryFolder(), 'changed.db'), `
      DELETE FROM repair WHERE district = 'Ashquill' AND reported >= '2024-10-01' AND case_id % 2`);
  const before = plainFigures(copy).of('Ashquill').rates.at(-1);
  const now = liveFigures(copy, module).of('Ashquill').rates.at(-1);
  assert.equal(before.events, plain.of('Ashquill').rates.at(-1).events);
  assert.ok(now.events < before.events && now.rate < before.rate);

  await page.goto(await serve(copy));
  await page.waitForSelector('body[data-shown=all]');
  await choose('Ashquill');
  assert.deepEqual(await page.locator('.differs td:first-child').allTextContents(), ['2024-Q4']);
  await page.goto(address);
});

test('both sides hide the same and total the same where a district has no base', () => {
  const copy = copyOf(database, join(temporaryFolder(), 'base.db'), `
      UPDATE district_year SET dwellings = 0 WHERE district = 'Farrowick' AND year = 2024;
      INSERT INTO model_refresh DEFAULT VALUES`);
  const refreshed = plainFigures(copy), fresh = liveFigures(copy, module);
  for (const area of ['', ...refreshed.areas().filter((name) => name !== 'Farrowick')])
    assert.deepEqual(refreshed.of(area).rates, fresh.of(area).rates, area);
  assert.equal(fresh.of('Farrowick').rates.length, 8);
  const [before, now] = [plain, refreshed].map((side) => side.of('').rates.at(-1).events);
  assert.ok(now < before);
});

// The cases that can be fitted by district, counted without any function of the extension.
const fittedIn = (db) => new Map(db.prepare(`
    SELECT district, sum(cost IS NOT NULL AND building_age IS NOT NULL) FROM repair GROUP BY 1`)
  .raw().all());
const fitted = fittedIn(tables);

test('no hidden district follows from the model over all less those of the others', () => {
  assert.ok(fitted.get('Saltspur Isle') < 5);
  const few = (district, cases) => `
      UPDATE repair SET cost = NULL WHERE district = '${district}' AND case_id NOT IN (
        SELECT case_id FROM repair WHERE district = '${district}' AND cost IS NOT NULL
          AND building_age IS NOT NULL LIMIT ${cases});`;
  const without = "DELETE FROM repair WHERE district = 'Saltspur Isle';";
  // The demo; a second small district; a district with cases enough, but few more than terms; none
  // that is small.
  for (const [change, hidden] of [['', 2], [few('Ashquill', 4), 3], [without + few('Ashquill', 7), 2],
                                  [without, 0]]) {
    const path = change === '' ? database
      : copyOf(database, join(temporaryFolder(), 'few.db'),
               `${change} INSERT INTO model_refresh DEFAULT VALUES`);
    const db = new Sqlite(path, { readonly: true });
    const counts = fittedIn(db);
    const shown = new Map(db.prepare(`
        SELECT substr(name, 9), rows FROM published_model WHERE name LIKE 'cost in %'`).raw().all());
    for (const [district, rows] of shown) assert.equal(rows, counts.get(district), change);
    const away = [...counts].filter(([district]) => !shown.has(district)).map(([, rows]) => rows);
    assert.equal(away.length, hidden, change);
    // What a reader of the published tables works out.
    const difference = db.prepare(`
        SELECT (SELECT rows FROM published_model WHERE name = 'cost') -
               (SELECT sum(rows) FROM published_model WHERE name LIKE 'cost in%')`).pluck().get();
    assert.equal(difference, away.reduce((sum, rows) => sum + rows, 0), change);
    if (hidden) assert.ok(difference >= 2 * 5 && !away.includes(difference), change);
  }
});

test('small cells are shown as hidden, and so are models that would give a small count', async () => {
  for (const area of ['Saltspur Isle', 'Farrowick']) {
    await choose(area);
    for (const row of (await cells('rates')).filter((texts) => texts.includes('hidden')))
      assert.deepEqual(row.slice(1), Array(6).fill('hidden'));
    assert.equal(await page.textContent('#problem'),
                 'No model of this district is given away: few cases, or it would give such away.');
    assert.equal(await page.locator('#freshness').isVisible(), false);
    assert.equal(await page.locator('#rates_hidden').isVisible(), true);
    assert.equal(await page.locator('#effects tbody tr').count(), 0);
    for (const path of ['plain', 'live']) assert.deepEqual((await ask(address, path, area)).effects, []);
  }
  await choose('Ashquill');
  assert.equal(await page.locator('#rates_hidden').isVisible(), false);
  await choose('Saltspur Isle');
  assert.equal(await page.locator('#rates_box').isVisible(), false);
  // Nor do they come over the wire.
  for (const path of ['plain', 'live']) {
    const { rates } = await ask(address, path, 'Saltspur Isle');
    assert.equal(rates.length, 12);
    for (const row of rates) assert.deepEqual([row.hidden, row.events, row.rate], [1, null, null]);
  }
});

test('the server answers nothing of a model that may not be given away, and the page says why', async () => {
  // A model of few cases, one with few cases of a trade, one that is refused after a sound fit, and one
  // that goes missing.
  const model = (columns, rows) => `ols_model('cost | log_offset 20', cost, ${columns}) AS model FROM
      (SELECT * FROM repair WHERE cost IS NOT NULL AND building_age IS NOT NULL ${rows})`;
  const dwellings = "'dwellings | log_offset', dwellings, 'name | option', 'a title'";
  const source = (refused, lost) => `
      DROP VIEW model_source;
      CREATE VIEW model_source AS
      SELECT 'cost' AS name, ${model(dwellings, '')} UNION ALL
      SELECT 'cost in Ashquill', ${model(dwellings, "AND district = 'Ashquill' LIMIT 4")} UNION ALL
      SELECT 'cost in Brindmoor', ${model("'trade | category', trade", `AND district = 'Brindmoor'
        AND (trade IN ('Damp', 'Roofing') OR case_id IN (SELECT case_id FROM repair
             WHERE district = 'Brindmoor' AND trade = 'Glazing' AND cost > 0
               AND building_age IS NOT NULL LIMIT 2))`)} UNION ALL
      SELECT 'cost in Corvane', ${model(dwellings, `AND district = 'Corvane' ${refused}`)} ${lost};
      INSERT INTO model_refresh DEFAULT VALUES;`;
  const copy = copyOf(
    database, join(temporaryFolder(), 'standing.db'), 'DELETE FROM model_fit; DROP TRIGGER hidden_district_goes',
    source('', `UNION ALL SELECT 'cost in Dellhythe', ${model(dwellings, "AND district = 'Dellhythe'")}`),
    source('LIMIT 1', ''));
  const db = new Sqlite(copy, { readonly: true });
  assert.deepEqual(
    db.prepare('SELECT substr(name, 9) AS area, status FROM published_model ORDER BY 1').raw().all(),
    [['', 'fresh'], ['Ashquill', 'withheld'], ['Brindmoor', 'fresh'], ['Corvane', 'refused'],
     ['Dellhythe', 'lost']]);
  const at = await serve(copy);

  for (const path of ['plain', 'live']) {
    assert.deepEqual((await ask(at, path, 'Ashquill')).effects, []);
    const { effects } = await ask(at, path, 'Brindmoor');
    assert.ok(effects.length > 0);
    assert.doesNotMatch(JSON.stringify(effects), /Glazing/);
  }
  assert.match(JSON.stringify(db.prepare("SELECT model FROM model_fit WHERE name LIKE '%Brindmoor'").all()),
               /Glazing/);

  await page.goto(at);
  await page.waitForSelector('body[data-shown=all]');
  const standing = {};
  for (const area of ['', 'Ashquill', 'Corvane', 'Dellhythe']) {
    await choose(area);
    standing[area] = [await page.textContent('#freshness'), await page.textContent('#problem')]
      .map((text) => text.replaceAll(/\d{4}-\d\d-\d\d \d\d:\d\d:\d\d/g, 'THEN'));
  }
  const rows = (area) => fitted.get(area).toLocaleString('en-GB');
  assert.deepEqual(standing.Corvane, [
    `Model “a title”, fitted THEN UTC to ${rows('Corvane')} cases.`,
    'The newest fit was refused (since THEN UTC): too few rows.']);
  assert.equal(standing.Dellhythe[1],
               'This model is no longer made (since THEN UTC): model_source no longer gives this name.');
  assert.deepEqual(standing.Ashquill, [
    'There is a model, fitted THEN UTC; it is not given away.',
    'Why: not released: fewer than 5 rows were fitted.']);
  assert.equal(standing[''][1], '');
  assert.match(await page.textContent('body'), /The live side is for the office alone\./);
  await page.goto(address);
  await page.waitForSelector('body[data-shown=all]');
});

test('models are told apart by their titles', async () => {
  const { title, rows } = tables.prepare("SELECT title, rows FROM published_model WHERE name = 'cost in Corvane'").get();
  assert.equal(title, 'cost of a repair in Corvane');
  await choose('Corvane');
  assert.match(await page.textContent('#freshness'),
               new RegExp(`^Model “${title}”, fitted \\S+ \\S+ UTC to ${rows.toLocaleString('en-GB')} cases\\.$`));
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
