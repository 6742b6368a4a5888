// Ladderline in Node.js, after sh tests/node_packages.sh: node examples/hosts/node.mjs [DATABASE [MODULE]]
import Database from 'better-sqlite3';
const [database = 'examples/out/repairs.db', module = 'build/release/ladderline'] = process.argv.slice(2);
const db = new Database(database, { readonly: true });
db.loadExtension(module);
for (const row of db.prepare(`
    SELECT district, cases, percent_of(damp, cases) AS share, percent_low(damp, cases) AS low, percent_high(damp, cases) AS high
    FROM (SELECT district, count(*) AS cases, sum(trade = 'Damp') AS damp
          FROM repair WHERE reported >= '2024-01-01' GROUP BY district)`).iterate())
  console.log(`${row.district.padEnd(14)} ${String(row.cases).padStart(4)} cases, ` +
    `${row.share.toFixed(1).padStart(5)}% damp (${row.low.toFixed(1)} to ${row.high.toFixed(1)})`);
