// Serves the dashboard on this machine: node server.mjs [DATABASE [MODULE [PORT]]]
//
// Needs a database that prepare.sql has prepared; run.sh makes one. Writes nothing.
import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { serve } from '@hono/node-server';
import { Hono } from 'hono';
import { liveFigures, plainFigures } from './figures.mjs';

const [database = 'examples/out/dashboard.db', module = 'build/release/ladderline', port = '8017'] =
  process.argv.slice(2);
const plain = plainFigures(database);
const live = liveFigures(database, module);

const app = new Hono();
app.use(async (c, next) => {
  await next();
  // The page may fetch from this server alone.
  c.header('Content-Security-Policy', "default-src 'self'; style-src 'self' 'unsafe-inline'");
});

const file = (url, type) => {
  const text = readFileSync(url, 'utf8');
  return (c) => c.body(text, 200, { 'Content-Type': `${type}; charset=utf-8` });
};
// The build for browsers lies beside the one for Node.js.
const chart = join(dirname(createRequire(import.meta.url).resolve('chart.js')), 'chart.umd.js');
app.get('/', file(new URL('page.html', import.meta.url), 'text/html'));
app.get('/page.js', file(new URL('page.js', import.meta.url), 'text/javascript'));
app.get('/chart.js', file(chart, 'text/javascript'));

app.get('/favicon.ico', (c) => c.body(null, 204));

app.get('/areas', (c) => c.json(plain.areas()));
app.get('/plain', (c) => c.json(plain.of(c.req.query('area'))));
app.get('/live', (c) => c.json(live.of(c.req.query('area'))));

serve({ fetch: app.fetch, hostname: '127.0.0.1', port: Number(port) }, (address) =>
  console.log(`The dashboard is at http://127.0.0.1:${address.port}/ (Ctrl-C ends it)`));
