// What a refresh leaves, read and written by an SQLite of 2014 that knows nothing of the extension.
// node plain_tables_test.mjs MODULE
import assert from 'node:assert/strict';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import test from 'node:test';
import { OldSqlite, Sqlite, temporaryFolder } from './support.mjs';

const [module] = process.argv.slice(2);
const script = readFileSync(new URL('../../sql/keep_models.sql', import.meta.url), 'utf8');
const refresh = "INSERT INTO model_refresh(at) VALUES ('2025-01-01')";

function refreshedFile() {
  const path = join(temporaryFolder(), 'kept.db');
  const db = new Sqlite(path);
  db.loadExtension(module);
  db.pragma('trusted_schema = OFF');
  db.exec(script);
  db.exec(`
    CREATE TABLE visit(id INTEGER PRIMARY KEY, district TEXT, minutes REAL, stairs INTEGER);
    INSERT INTO visit
    WITH RECURSIVE i(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM i WHERE i < 60)
    SELECT i, CASE i % 3 WHEN 0 THEN 'North' WHEN 1 THEN 'South' ELSE 'West' END,
           10 + 2 * (i * 7 % 11) + i * i % 13, i * 7 % 11 FROM i;
    CREATE VIEW model_source AS
    SELECT 'time' AS name, ols_model('minutes (min)', minutes, 'stairs', stairs,
                                     'district | category South', district) AS model FROM visit;
    DROP VIEW rate_source;
    CREATE VIEW rate_source AS
    SELECT district AS area, 2024 AS period, count(*) AS events, 500 AS base, 1000 AS per
    FROM visit GROUP BY district;`);
  db.exec(refresh);
  return { path, db };
}

const rows = (old, sql) => (old.exec(sql)[0] ?? { values: [] }).values;

test('every table reads the same in the old SQLite, to the last bit', () => {
  const { path, db } = refreshedFile();
  const tables = db.prepare("SELECT name FROM sqlite_schema WHERE type = 'table'").pluck().all();
  assert.ok(tables.filter((name) => name.startsWith('published_')).length >= 8);
  const old = new OldSqlite(readFileSync(path));
  for (const table of tables) {
    const expected = db.prepare(`SELECT * FROM ${table} ORDER BY rowid`).raw().all();
    assert.deepEqual(rows(old, `SELECT * FROM ${table} ORDER BY rowid`), expected, table);
  }
  assert.deepEqual(rows(old, 'PRAGMA integrity_check'), [['ok']]);
  old.close();
  db.close();
});

test('the old SQLite uses the indexes and keeps the constraints', () => {
  const { path, db } = refreshedFile();
  db.close();
  const old = new OldSqlite(readFileSync(path));
  const plan = rows(old, "EXPLAIN QUERY PLAN SELECT * FROM published_terms WHERE name = 'time'");
  assert.match(plan[0][3], /^SEARCH TABLE published_terms USING INDEX/);
  assert.throws(() => old.run("UPDATE published_checks SET status = 'good'"), /CHECK/);
  old.close();
});

test('the old SQLite writes the records, and is told what it lacks for a refresh', () => {
  const { path, db } = refreshedFile();
  db.close();
  const old = new OldSqlite(readFileSync(path));
  old.run("INSERT INTO visit VALUES (61, 'North', 30, 5)");
  old.run('UPDATE visit SET minutes = 31 WHERE id = 61');
  assert.deepEqual(rows(old, 'SELECT count(*) FROM visit'), [[61]]);
  assert.throws(() => old.exec(refresh), /no such function: ladderline_version/);
  assert.deepEqual(rows(old, 'SELECT count(*) FROM model_refresh'), [[1]]);
  old.close();
});

test('a generated column or an index on an expression shuts the old SQLite out of the file', () => {
  const folder = temporaryFolder();
  for (const [name, sql] of [
    ['column', 'CREATE TABLE d(cost REAL, log_cost REAL AS (log_offset(cost, 1)))'],
    ['index', 'CREATE TABLE d(cost REAL); CREATE INDEX i ON d(log_offset(cost, 1))'],
  ]) {
    const path = join(folder, name);
    const db = new Sqlite(path);
    db.loadExtension(module);
    db.exec(`CREATE TABLE record(id); ${sql}`);
    db.close();
    const old = new OldSqlite(readFileSync(path));
    assert.throws(() => old.exec('SELECT * FROM record'), /malformed database schema/);
    old.close();
  }
});
