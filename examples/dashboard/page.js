// The page: fetches both sets of figures for a district and shows them side by side. Text goes into
// the page as text, never as HTML.
/* global Chart */

const element = (id) => document.getElementById(id);
const number = (value, digits) => value === null || value === undefined ? '–'
  : value.toLocaleString('en-GB', { minimumFractionDigits: digits, maximumFractionDigits: digits });
const limits = (row, digits) => `${number(row.low, digits)} to ${number(row.high, digits)}`;

// Replaces the rows of a table; each row is a list of [text, class], in bold where the paths differ.
function fill(table, rows) {
  const body = element(table).tBodies[0];
  body.replaceChildren(...rows.map(({ cells, differs }) => {
    const line = document.createElement('tr');
    line.classList.toggle('differs', differs);
    for (const [text, kind] of cells) {
      const cell = line.insertCell();
      cell.textContent = text;
      if (kind) cell.className = kind;
    }
    return line;
  }));
}

function list(id, texts) {
  element(id).replaceChildren(...texts.map((text) => {
    const item = document.createElement('li');
    item.textContent = text;
    return item;
  }));
}

// Bars from the lower to the upper limit, with a mark at the figure itself.
const charts = {};
function draw(id, axis, rows, label, unit) {
  const color = (name) => getComputedStyle(document.documentElement).getPropertyValue(name);
  Chart.defaults.color = color('--ink');
  Chart.defaults.borderColor = color('--line');
  const flat = axis === 'y';
  const spot = (row, value) => (flat ? { x: value, y: label(row) } : { x: label(row), y: value });
  charts[id]?.destroy();
  charts[id] = new Chart(element(id), {
    data: {
      labels: rows.map(label),
      datasets: [
        { type: 'scatter', data: rows.map((row) => spot(row, row.middle)),
          backgroundColor: color('--ink'), pointRadius: 4 },
        { type: 'bar', indexAxis: axis, data: rows.map((row) => spot(row, [row.low, row.high])),
          backgroundColor: `${color('--plain')}66`, barPercentage: 0.5 },
      ],
    },
    options: {
      animation: false, maintainAspectRatio: false, indexAxis: axis,
      plugins: { legend: { display: false } },
      scales: {
        [flat ? 'y' : 'x']: { type: 'category', labels: rows.map(label) },
        [flat ? 'x' : 'y']: { title: { display: true, text: unit } },
      },
    },
  });
}

function showRates(plain, live) {
  const fresh = new Map(live.map((row) => [row.period, row]));
  const cells = (row, kind) => !row ? [['–', kind], ['–', kind], ['–', kind]]
    : row.hidden ? [['hidden', kind], ['hidden', kind], ['few cases', kind]]
    : [[number(row.events, 0), kind], [number(row.rate, 1), kind], [limits(row, 1), kind]];
  fill('rates', plain.map((row) => {
    const other = fresh.get(row.period);
    return { cells: [[row.period], ...cells(row, 'plain'), ...cells(other, 'live')],
             differs: JSON.stringify(row) !== JSON.stringify(other) };
  }));
  element('rates_box').hidden = plain.every((row) => row.rate === null);
  draw('rates_chart', 'x', plain.map((row) => ({ ...row, middle: row.rate })),
       (row) => row.period, 'per 1,000 dwellings');
}

function showEffects(plain, live) {
  const end = (value) => (typeof value === 'number' ? Number(value.toPrecision(4)) : value);
  const step = (row) => `${row.column_name}: ${end(row.from_value)} → ${end(row.to_value)}`;
  const fresh = new Map(live.map((row) => [row.kind + step(row), row]));
  const cells = (row, kind) => !row ? [['–', kind], ['–', kind]]
    : [[`${number(row.effect, 1)} ${row.unit ?? ''}`, kind], [limits(row, 1), kind]];
  fill('effects', plain.map((row) => {
    const other = fresh.get(row.kind + step(row));
    return { cells: [[step(row)], ...cells(row, 'plain'), ...cells(other, 'live')],
             differs: !other || ['effect', 'low', 'high'].some((key) => row[key] !== other[key]) };
  }));
  list('sentences', plain.map((row) => row.sentence));
  const levels = plain.filter((row) => row.kind === 'level' && row.unit === 'percent');
  element('effects').hidden = plain.length === 0;
  element('effects_box').hidden = levels.length === 0;
  draw('effects_chart', 'y', levels.map((row) => ({ ...row, middle: row.effect })),
       (row) => row.to_value, `percent, against ${levels[0]?.from_value}`);
}

let asked = 0;
async function show() {
  const turn = ++asked;
  const query = `?area=${encodeURIComponent(element('area').value)}`;
  const [plain, live] = await Promise.all(['/plain', '/live'].map(
    async (path) => (await fetch(path + query)).json()));
  if (turn !== asked) return;  // another district was chosen meanwhile
  const { model } = plain;
  element('freshness').textContent = !model ? 'There is no model of this district.'
    : model.fitted_at ? `Model fitted ${model.fitted_at} UTC to ${number(model.rows, 0)} cases.`
    : 'There has been no sound model of this district yet.';
  element('problem').hidden = !model?.reason;
  element('problem').textContent = model?.reason ? `No new model (${model.status}): ${model.reason}` : '';
  showRates(plain.rates, live.rates);
  showEffects(plain.effects, live.effects);
  list('cautions', plain.cautions);
  document.body.dataset.shown = element('area').value || 'all';
}

for (const area of await (await fetch('/areas')).json()) element('area').add(new Option(area));
element('area').addEventListener('change', show);
await show();
