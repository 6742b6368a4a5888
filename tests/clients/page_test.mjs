// The page of sql/page.sql in a browser, made as a user makes it: for the demo, and for a database
// whose names are as bad as names can be.
// node page_test.mjs MODULE
import assert from 'node:assert/strict';
import { execFileSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import test, { after, before } from 'node:test';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { onEveryScreen } from './layout.mjs';
import { openBrowser, Sqlite, temporaryFolder } from './support.mjs';

const [module] = process.argv.slice(2);
const root = fileURLToPath(new URL('../..', import.meta.url));

let browser;
before(async () => { browser = await openBrowser(); });
after(() => browser?.close());

const shell = (file, script, options = {}) => execFileSync(
  'sqlite3', ['-batch', '-bail', '-cmd', `.load ${module}`, file],
  { input: readFileSync(join(root, script)), stdio: ['pipe', 'pipe', 'pipe'], ...options });

// The page of a database file, as a URL.
function pageOf(folder, file) {
  const said = shell(file, 'sql/page.sql', { cwd: folder });
  assert.equal(String(said), 'Written: models_and_rates.html\n');
  return pathToFileURL(join(folder, 'models_and_rates.html')).href;
}

function open(file) {
  const db = new Sqlite(file);
  db.loadExtension(module);
  return db;
}

// What the charts under a selector hold, as numbers; null where a limit is open.
const marks = (tab, selector, keys) => tab.evaluate(([where, names]) => (
  [...document.querySelectorAll(where)].map((mark) => names.map((name) => (
    name in mark.dataset ? Number(mark.dataset[name]) : null)))), [selector, keys]);

// The numbers of each row of a table or a list, exact and as they are shown.
const cells = (tab, selector) => tab.evaluate((where) => (
  [...document.querySelectorAll(`${where} tbody tr, ${where} li`)].map((row) => (
    [...row.querySelectorAll('data')].map((cell) => [Number(cell.value), Number(cell.textContent)])))), selector);

const close = (exact, shown) => Math.abs(shown - exact) <= Math.max(0.005 * Math.abs(exact), 0);

function sameNumbers(found, rows) {
  assert.deepEqual(found.map((row) => row.map(([exact]) => exact)), rows.map((row) => row.filter((x) => x !== null)));
  for (const [exact, shown] of found.flat()) assert.ok(close(exact, shown), `${exact} is shown as ${shown}`);
}

// Levels of headings in order: none is skipped on the way down.
const headings = (tab) => tab.evaluate(() => [...document.querySelectorAll('h1, h2, h3, h4')].map((h) => Number(h.localName[1])));

async function isWellFormed(tab) {
  const levels = await headings(tab);
  assert.equal(levels[0], 1);
  assert.equal(levels.filter((level) => level === 1).length, 1);
  levels.slice(1).forEach((level, i) => assert.ok(level <= levels[i] + 1, `heading ${i + 1}`));
  assert.equal(await tab.getAttribute('html', 'lang'), 'en');
  assert.equal(await tab.title(), 'Models and rates');
  assert.equal(await tab.locator('main').count(), 1);
  assert.equal(await tab.evaluate(() => document.scripts.length), 0);
  for (const link of await tab.locator('nav a').all())
    assert.equal(await tab.locator(await link.getAttribute('href')).count(), 1);
}

test('every figure of the demo\'s page is that of the tables', async () => {
  const folder = temporaryFolder();
  const file = join(folder, 'repairs.db');
  shell(file, 'examples/make_database.sql', { cwd: root });
  shell(file, 'examples/11_keep_models.sql', { cwd: root });
  const url = pageOf(folder, file);
  const db = open(file);
  const all = (sql, ...values) => db.prepare(sql).raw().all(...values);

  await onEveryScreen(browser, (tab) => tab.goto(url), async (tab, screen) => {
    await isWellFormed(tab);
    const names = all('SELECT name FROM published_model ORDER BY name').flat();
    assert.equal(names.length, 2);
    for (const [i, name] of names.entries()) {
      const part = `#part-${i + 1}`;
      const [[model]] = all('SELECT model FROM published_text WHERE name = ?', name);
      assert.equal(await tab.textContent(`${part} > h2`), name);
      assert.deepEqual(
        await marks(tab, `${part} circle[data-middle]`, ['middle', 'low', 'high']),
        all(`SELECT effect, low, high FROM published_effects WHERE name = ? AND kind IN ('quartiles', 'level')
             ORDER BY kind = 'level', position`, name));
      assert.deepEqual(
        await marks(tab, `${part} rect[data-rows]`, ['low', 'high', 'rows']),
        all('SELECT low, high, rows FROM model_histogram(?)', model));
      assert.deepEqual(
        await marks(tab, `${part} circle[data-x]`, ['x', 'y', 'low', 'high']),
        [...all(`SELECT fitted_low + (fitted_high - fitted_low) / 2, mean, mean - sd, mean + sd
                 FROM model_residual_bins(?) WHERE rows > 0`, model),
        ...all('SELECT normal_score, residual, NULL, NULL FROM model_residual_quantiles(?)', model)]);
      const tables = `${part} details:nth-of-type`;
      const checks = await cells(tab, `${tables}(1)`);
      sameNumbers(checks.filter((row) => row.length), all('SELECT p_value FROM published_checks WHERE name = ? AND p_value IS NOT NULL ORDER BY position', name));
      assert.deepEqual(await tab.evaluate((where) => [...document.querySelectorAll(`${where} li b`)].map((e) => e.textContent).sort(), `${tables}(1)`),
        all('SELECT check_name FROM published_checks WHERE name = ? ORDER BY 1', name).flat());
      sameNumbers(await cells(tab, `${tables}(2)`), all('SELECT coefficient, low, high, p_value FROM published_terms WHERE name = ? ORDER BY position', name));
      // The words are those of the brief, block by block.
      const words = await tab.evaluate((where) => [...document.querySelectorAll(`${where} > h2, ${where} > p, ${where} > ul > li`)].map((e) => e.textContent), part);
      const [[brief]] = all('SELECT model_brief(?)', model);
      const plain = (text) => text.replace(/[^\p{L}\p{N}]/gu, '');
      for (const line of brief.split('\n').filter((text) => text && !text.startsWith('## ')))
        assert.ok(line.startsWith('# ') ? words.some((text) => plain(text).startsWith(plain(line))) : words.map(plain).includes(plain(line)), line);
      const changes = all(`SELECT sentence FROM published_changes WHERE name = ? AND status NOT IN ('steady', 'same')`, name).flat();
      assert.ok(changes.length > 3);
      for (const sentence of changes) assert.ok(words.includes(sentence), sentence);
      // Facts of the whole stand in the table of changes too, and are no coefficients.
      const [[stayed, others]] = all(`SELECT sum(term IN (SELECT term FROM model_terms(?))), count(*)
        FROM published_changes WHERE name = ? AND status IN ('steady', 'same')`, model, name);
      assert.ok(words.includes(`Coefficients that stayed inside the limits they had: ${stayed}.`));
      if (name === 'days to close') assert.ok(stayed < others);
    }
    // Rates: those shown, and no trace of those that are not.
    assert.deepEqual(
      await marks(tab, '#rates circle[data-middle]', ['middle', 'low', 'high']),
      [...all("SELECT rate, low, high FROM published_rates WHERE period = '2025-01' AND hidden = 0 ORDER BY rate DESC"),
      ...all('SELECT rate, low, high FROM published_totals ORDER BY period DESC LIMIT 24')]);
    sameNumbers(await cells(tab, '#rates'),
      all("SELECT events, base, rate, low, high, ratio, ratio_low, ratio_high FROM published_rates WHERE period = '2025-01' ORDER BY area"));
    for (const [area] of all("SELECT area FROM published_rates WHERE period = '2025-01' AND hidden = 1")) {
      const row = tab.getByRole('row').filter({ has: tab.getByRole('rowheader', { name: area, exact: true }) });
      assert.equal(await row.getByText('not shown').count(), 2);
    }
    // A picture for whoever wants to look, and not an empty one.
    const picture = await tab.screenshot({ fullPage: true, path: join(folder, `page-${screen.viewport.width}-${screen.colorScheme}.png`) });
    assert.ok(picture.length > 100_000);
  });
  db.close();
});

const hostile = [
  '<script>alert(1)</script>', '"><img src=x onerror=alert(2)>', "it's \"quoted\" & <b>bold</b>", 'W'.repeat(2000),
  'word '.repeat(400).trim(), '🏚️🔧 Reparatur', 'אבגדה וזחט 12', 'عربي نص طويل', 'turned \u202eabc', 'bell\u0007', '</table></section>',
];

test('names of any kind are text on the page and break nothing', async () => {
  const folder = temporaryFolder();
  const file = join(folder, 'hostile.db');
  const db = open(file);
  db.exec(readFileSync(join(root, 'sql/keep_models.sql'), 'utf8'));
  db.exec('CREATE TABLE visit(minutes REAL, stairs REAL, district TEXT)');
  const add = db.prepare('INSERT INTO visit VALUES (?, ?, ?)');
  for (let i = 0; i < 40 * hostile.length; ++i)
    add.run(10 + 2 * ((i * 7) % 11) + ((i * i) % 13), (i * 7) % 11, hostile[i % hostile.length]);
  const literal = (text) => `'${text.replaceAll("'", "''")}'`;
  const label = (text) => `"${text.replaceAll('"', '""')}"`;
  db.exec(`
    CREATE VIEW model_source AS
    ${hostile.map((name) => `SELECT ${literal(name)} AS name, ols_model(${literal(`${label(`minutes ${name}`)} | log_offset 1`)}, minutes,
      ${literal(label(`stairs ${name}`))}, stairs, ${literal(`${label(`district ${name}`)} | category`)}, district,
      'name | option', ${literal(name)}) AS model FROM visit`).join(' UNION ALL ')}
    UNION ALL SELECT 'thin', ols_model('y', minutes, 'x', stairs) FROM visit WHERE 0;
    DROP VIEW rate_source;
    CREATE VIEW rate_source AS
    SELECT district AS area, '2024-<i>Q1</i>' AS period, count(*) AS events, 500 AS base, 1000 AS per FROM visit GROUP BY district;
    INSERT INTO model_refresh(at) VALUES ('2025-03-03 09:30');
    INSERT INTO model_refresh(at) VALUES ('2025-03-04 09:30');`);
  const refused = db.prepare("SELECT name, reason FROM published_model WHERE status <> 'fresh'").raw().all();
  assert.deepEqual(refused.map(([name]) => name), ['thin']);
  db.close();
  const url = pageOf(folder, file);
  await onEveryScreen(browser, (tab) => tab.goto(url), async (tab) => {
    await isWellFormed(tab);
    const names = await tab.evaluate(() => [...new Set([...document.querySelectorAll('body *')].map((e) => e.localName))].sort());
    assert.deepEqual(names, ['a', 'b', 'circle', 'data', 'desc', 'details', 'div', 'figcaption', 'figure', 'g', 'h1', 'h2', 'h3', 'li',
      'line', 'main', 'nav', 'p', 'polyline', 'rect', 'section', 'span', 'summary', 'svg', 'table', 'tbody', 'td', 'text', 'th',
      'thead', 'title', 'tr', 'ul']);
    const shown = (text) => text.replace(/[\u0007\u202e]/g, '\ufffd');
    const items = await tab.evaluate(() => [...document.querySelectorAll('nav li')].map((item) => item.textContent));
    for (const name of hostile) assert.ok(items.includes(shown(name)), name);
    const areas = await tab.evaluate(() => [...document.querySelectorAll('#rates tbody th')].map((cell) => cell.textContent));
    assert.deepEqual([...areas].sort(), hostile.map(shown).sort());
    assert.ok((await tab.textContent('main')).includes(`There is no sound fit since 2025-03-03 09:30:00 UTC: ${refused[0][1]}.`));
    await tab.evaluate(() => document.querySelectorAll('details').forEach((details) => { details.open = true; }));
    assert.ok(await tab.evaluate(() => document.documentElement.scrollWidth <= innerWidth), 'opened details fit');
  });
});

test('an empty database has a page that says so, and one without the tables a plain error', async () => {
  const folder = temporaryFolder();
  const file = join(folder, 'empty.db');
  assert.throws(() => shell(file, 'sql/page.sql', { cwd: folder }), /no published tables in this database; is it the right file/);
  shell(file, 'sql/keep_models.sql', { cwd: folder });
  assert.throws(() => execFileSync('sqlite3', ['-batch', '-readonly', file], {
    input: readFileSync(join(root, 'sql/page.sql')), cwd: folder, stdio: ['pipe', 'pipe', 'pipe'] }), /the extension is not loaded/);
  const url = pageOf(folder, file);
  await onEveryScreen(browser, (tab) => tab.goto(url), async (tab) => {
    await isWellFormed(tab);
    assert.ok((await tab.textContent('main')).includes('No model is kept here yet.'));
  });
});
