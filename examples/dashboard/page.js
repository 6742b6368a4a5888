// The page: fetches both sets of figures for a district and shows them side by side. Text goes into
// the page as text, never as HTML.
/* global Chart */

const element = (id) => document.getElementById(id);
const number = (value, digits) => value === null || value === undefined ? '–'
  : value.toLocaleString('en-GB', { minimumFractionDigits: digits, maximumFractionDigits: digits });
const limits = (row, digits) => `${number(row.low, digits)} to ${number(row.high, digits)}`;

// Digits that give the distance of the limits to two figures, and one at least.
const digitsOf = (row) => (row.high > row.low
  ? Math.min(9, Math.max(1, 1 - Math.floor(Math.log10(row.high - row.low)))) : 1);

// Replaces the rows of a table; each is a name and the texts of both sides, in bold where the texts
// differ.
function fill(table, rows) {
  const body = element(table).tBodies[0];
  body.replaceChildren(...rows.map(({ name, plain, live }) => {
    const line = document.createElement('tr');
    line.classList.toggle('differs', plain.some((text, i) => text !== live[i]));
    line.insertCell().textContent = name;
    for (const [kind, texts] of [['plain', plain], ['live', live]]) {
      for (const text of texts) {
        const cell = line.insertCell();
        cell.textContent = text;
        cell.className = kind;
      }
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
  const texts = (row) => !row ? ['–', '–', '–'] : row.hidden ? ['hidden', 'hidden', 'hidden']
    : [number(row.events, 0), number(row.rate, 1), limits(row, 1)];
  fill('rates', plain.map((row) => (
    { name: row.period, plain: texts(row), live: texts(fresh.get(row.period)) })));
  element('rates_hidden').hidden = ![...plain, ...live].some((row) => row.hidden);
  element('rates_box').hidden = plain.every((row) => row.rate === null);
  draw('rates_chart', 'x', plain.map((row) => ({ ...row, middle: row.rate })),
       (row) => row.period, 'per 1,000 dwellings');
}

function showEffects(plain, live) {
  const end = (value) => (typeof value === 'number' ? Number(value.toPrecision(4)) : value);
  const step = (row) => `${row.column_name}: ${end(row.from_value)} → ${end(row.to_value)}`;
  const fresh = new Map(live.map((row) => [row.kind + step(row), row]));
  const texts = (row, digits) => !row ? ['–', '–']
    : [`${number(row.effect, digits)} ${row.unit ?? ''}`, limits(row, digits)];
  fill('effects', plain.map((row) => {
    const digits = digitsOf(row);
    return { name: step(row), plain: texts(row, digits),
             live: texts(fresh.get(row.kind + step(row)), digits) };
  }));
  list('sentences', plain.map((row) => row.sentence));
  const levels = plain.filter((row) => row.kind === 'level' && row.unit === 'percent');
  element('effects').hidden = plain.length === 0;
  element('effects_box').hidden = levels.length === 0;
  draw('effects_chart', 'y', levels.map((row) => ({ ...row, middle: row.effect })),
       (row) => row.to_value, `percent, against ${levels[0]?.from_value}`);
}

// What there is of a model, and why there is no more.
function standing(model) {
  if (!model) {
    return ['', 'No model of this district is given away: few cases, or it would give such away.'];
  }
  const { status, fitted_at: at, reason } = model;
  const title = model.title ? `Model “${model.title}”` : 'Model';
  const shown = `${title}, fitted ${at} UTC to ${number(model.rows, 0)} cases.`;
  if (status === 'fresh') return [shown];
  if (status === 'withheld') {
    return [`There is a model, fitted ${at} UTC; it is not given away.`, `Why: ${reason}.`];
  }
  const gone = status === 'lost' ? 'This model is no longer made' : 'The newest fit was refused';
  return [model.rows !== null ? shown : at ? 'The last sound model is not given away.'
    : 'There has been no sound model yet.',
          `${gone} (since ${model.refused_since} UTC): ${reason}.`];
}

let asked = 0;
async function show() {
  const turn = ++asked;
  const query = `?area=${encodeURIComponent(element('area').value)}`;
  const [plain, live] = await Promise.all(['/plain', '/live'].map(
    async (path) => (await fetch(path + query)).json()));
  if (turn !== asked) return;  // another district was chosen meanwhile
  const [freshness, problem] = standing(plain.model);
  element('freshness').hidden = !freshness;
  element('freshness').textContent = freshness;
  element('problem').hidden = !problem;
  element('problem').textContent = problem ?? '';
  showRates(plain.rates, live.rates);
  showEffects(plain.effects, live.effects);
  list('cautions', plain.cautions);
  document.body.dataset.shown = element('area').value || 'all';
}

for (const area of await (await fetch('/areas')).json()) element('area').add(new Option(area));
element('area').addEventListener('change', show);
await show();
