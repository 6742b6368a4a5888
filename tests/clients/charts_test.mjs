// Charts in a browser: nothing clipped, nothing on top of another, every figure as it was given.
// node charts_test.mjs MODULE
import assert from 'node:assert/strict';
import test, { after, before } from 'node:test';
import { onEveryScreen } from './layout.mjs';
import { openBrowser, Sqlite } from './support.mjs';

const [module] = process.argv.slice(2);
const db = new Sqlite(':memory:');
db.loadExtension(module);

let browser;
before(async () => { browser = await openBrowser(); });
after(() => browser?.close());

// The chart that a function draws of rows, each an array of its arguments behind the texts.
function chart(name, texts, rows) {
  const columns = rows[0].map((_, i) => `json_extract(value, '$[${i}]')`).join(', ');
  return db.prepare(`SELECT ${name}(${texts.map(() => '?').join(', ')}, ${columns}) FROM json_each(?)`)
    .pluck().get(...texts, JSON.stringify(rows));
}

const page = (charts) => `<!DOCTYPE html><html lang="en"><head><meta charset="utf-8">
  <meta name="viewport" content="width=device-width"><style>:root { color-scheme: light dark }</style>
  <title>Charts</title></head><body>${charts.join('\n')}</body></html>`;

// As parts of a page, and each as a document of its own, which must be XML.
const show = (charts, ask) => onEveryScreen(browser, (tab) => tab.setContent(page(charts)), async (tab) => {
  const broken = await tab.evaluate((texts) => texts.map((text) => (
    new DOMParser().parseFromString(text, 'image/svg+xml').querySelector('parsererror')?.textContent)).filter(Boolean), charts);
  assert.deepEqual(broken, []);
  await ask(tab);
});

const hostile = [
  '<script>alert(1)</script>', '"><img src=x onerror=alert(2)>', "it's \"quoted\" & <b>bold</b>", ']]>',
  'W'.repeat(2000), 'word '.repeat(400), '🏚️🔧👩‍🔧 Reparatur', 'אבגדה וזחט 12', 'عربي نص طويل', '漢字'.repeat(40),
  'control \u0001\u0008\u001f\u007f\u0085', 'turned \u202eabc', 'a\nb\tc', '', '\ufdfd'.repeat(9), '&amp;&#0;', 'e\u0301'.repeat(40),
];

test('names of any kind are shown as text', async () => {
  const charts = [
    ...hostile.map((text) => chart('chart_points', [text, text, text], [[1, 2], [3, 4]])),
    ...hostile.map((text) => chart('chart_histogram', [text, text], [[0, 1, 5], [1, 2, 9]])),
    chart('chart_intervals', ['Any names', 'x'], hostile.map((text, i) => [text, i, i - 1.5, i + 123.456])),
    chart('chart_intervals', ['Wide figures', 'x'], hostile.map((text, i) => [text, i * 1e14, i * 1e14 - 1.5e13, i * 1e14 + 1])),
  ];
  await show(charts, async (tab) => {
    const elements = await tab.evaluate(() => [...new Set([...document.querySelectorAll('body *')].map((e) => e.localName))]);
    assert.deepEqual(elements.sort(), ['circle', 'desc', 'g', 'line', 'polyline', 'rect', 'svg', 'text', 'title'].filter((name) => elements.includes(name)));
    const shown = (text) => text.replace(/[\t\n]/g, ' ').replace(/[\u0000-\u001f\u007f-\u009f\u202a-\u202e]/g, '\ufffd');
    const names = await tab.evaluate(() => [...document.querySelectorAll('svg')].slice(-2)
      .map((svg) => [...svg.querySelectorAll('circle')].map((mark) => mark.dataset.name)));
    for (const of_chart of names) assert.deepEqual(of_chart, hostile.map(shown));
    const titles = await tab.evaluate(() => [...document.querySelectorAll('svg > title')].map((title) => title.textContent));
    assert.deepEqual(titles.slice(0, hostile.length), hostile.map(shown));
  });
});

const figures = {
  plain: [[1, 2], [2.5, -3], [4, 0.125]],
  'one point': [[5, 7]],
  'no spread': [[5, 7], [5, 7]],
  huge: [[-1.7e308, 1e-300], [1.7e308, 2e-300]],
  tiny: [[5e-324, 1e-310], [1e-323, 2e-310]],
  close: [[1e9, 1e9], [1e9 + 1e-6, 1e9 + 1e-6]],
  wide: [[1e-6, 1], [1e12, 2e7]],
  negative: [[-12345678, -0.001], [-12345670, -0.002]],
};

test('figures of any size have their axes', async () => {
  const names = Object.keys(figures);
  await show(names.map((name) => chart('chart_points', [name, 'x', 'y'], figures[name].map(([x, y]) => [x, y, y, y, y]))), async (tab) => {
    const drawn = await tab.evaluate(() => [...document.querySelectorAll('svg')].map((svg) => (
      [...svg.querySelectorAll('circle')].map((mark) => [+mark.dataset.x, +mark.dataset.y]))));
    names.forEach((name, i) => assert.deepEqual(drawn[i], [...figures[name]].sort((a, b) => a[0] - b[0]), name));
  });
  await show(names.map((name) => chart('chart_intervals', [name, 'x'], figures[name].map(([x, y], i) => (
    [`row ${i}`, x, Math.min(x, y), i === 0 ? Math.max(x, y) : null])))), async (tab) => {
    const drawn = await tab.evaluate(() => [...document.querySelectorAll('svg')].map((svg) => (
      [...svg.querySelectorAll('circle')].map((mark) => +mark.dataset.middle))));
    names.forEach((name, i) => assert.deepEqual(drawn[i], figures[name].map(([x]) => x), name));
  });
});

test('bars stand on their bins', async () => {
  const bins = [[0, 100, 50], [100, 200, 40], [200, 1000, 30], [1000, 1000.5, 0]];
  await show([
    chart('chart_histogram', ['Unequal', 'cost'], bins),
    chart('chart_histogram', ['Constant', 'score'], [[7, 7, 12]]),
    chart('chart_histogram', ['Many', 'n'], [...Array(1000).keys()].map((n) => [n, n + 1, (n * 7919) % 101])),
    chart('chart_histogram', ['Huge', 'x'], [[-1e308, 0, 1e15], [0, 1e308, 1]]),
  ], async (tab) => {
    const bars = await tab.evaluate(() => [...document.querySelector('svg').querySelectorAll('rect')].map((bar) => (
      [bar.dataset.low, bar.dataset.high, bar.dataset.rows].map(Number))));
    assert.deepEqual(bars, bins);
  });
});

test('ten thousand points and many intervals stay readable', async () => {
  const points = [...Array(10000).keys()].map((n) => [Math.sin(n) * n, Math.cos(n * 1.7) * n]);
  const intervals = [...Array(500).keys()].map((n) => [`area ${n}`, n, n - 1, n + 1]);
  await show([
    chart('chart_points', ['Many points', 'x', 'y'], points),
    chart('chart_intervals', ['Many areas', 'rate'], intervals),
  ], async (tab) => {
    assert.ok(await tab.locator('circle[data-x]').count() <= 1000);
    assert.equal(await tab.locator('circle[data-middle]').count(), 100);
    assert.match(await tab.locator('desc').first().textContent(), /^10000 points: .* are drawn/);
  });
});

test('a screen reader has the title and what the chart says', async () => {
  await show([chart('chart_intervals', ['Rates in 2024', 'per 1000'], [['Northfold', 12.5, 9.1, 16.8], ['Saltby', 20.25, 15, null]])], async (tab) => {
    const image = tab.getByRole('img', { name: /^Rates in 2024\. 2 figures of per 1000\. Largest: Saltby, 20\.2 \(from 15\)/ });
    assert.equal(await image.count(), 1);
    assert.ok(await tab.getByText('12.5 (9.1 to 16.8)', { exact: true }).isVisible());
  });
});
