-- Keep two models, let a month of cases come in, refresh, and read what changed.
--
-- Needs:  repair, district_year (make_database.sql), sql/keep_models.sql and the extension. Run it
--         from the top of the repository.
-- Leaves: what sql/keep_models.sql leaves, with two refreshes; repair_2025, the month that came in;
--         every_repair, all cases together; district_month, what rates are counted per; model_source
--         and rate_source over them.

.mode box --wordwrap on

.print
.print 'The tables and views that keep models are made by one script. It may run twice.'
.read sql/keep_models.sql

-- New months are imported into a table of their own; models and rates read both through a view. It
-- names its columns: with * it would no longer work once one of the tables gets another column.
DROP TABLE IF EXISTS repair_2025;
CREATE TABLE repair_2025 AS SELECT * FROM repair WHERE 0;
DROP VIEW IF EXISTS every_repair;
CREATE VIEW every_repair AS
SELECT case_id, reported, closed, district, trade, dwellings, building_age, visits, days_open, cost,
       cost_source, inspection_score
FROM repair
UNION ALL
SELECT case_id, reported, closed, district, trade, dwellings, building_age, visits, days_open, cost,
       cost_source, inspection_score
FROM repair_2025;

-- The models to keep: a name and a model each.
DROP VIEW IF EXISTS model_source;
CREATE VIEW model_source AS
SELECT 'cost of a repair' AS name,
       ols_model('cost (EUR) | log_offset 20',   cost,
                 'dwellings | log_offset',       dwellings,
                 'building age (years)',         building_age,
                 'trade | category Plumbing',    trade,
                 'district | category Ashquill', district,
                 'errors | option',              'hc3',
                 'name | option',                'What goes with the cost of a repair',
                 'case | key',                   case_id) AS model
FROM every_repair
UNION ALL
SELECT 'days to close',
       ols_model('days open (days) | log_offset', days_open,
                 'dwellings | log_offset',        dwellings,
                 'trade | category Plumbing',     trade,
                 'district | category Ashquill',  district,
                 'errors | option',               'hc3',
                 'name | option',                 'What goes with the days a case stays open',
                 'case | key',                    case_id)
FROM every_repair;

-- The rates to publish, by month, so that one month of a year is compared with the same month of the
-- year before. Districts and months come from a table of their own, so that one without cases has a
-- 0; a month that is not in it has no rates.
DROP TABLE IF EXISTS district_month;
CREATE TABLE district_month(district TEXT, month TEXT, dwellings INTEGER NOT NULL, PRIMARY KEY (district, month));
INSERT INTO district_month
WITH RECURSIVE m(m) AS (SELECT 1 UNION ALL SELECT m + 1 FROM m WHERE m < 12)
SELECT district, printf('%d-%02d', year, m), dwellings FROM district_year, m;

DROP VIEW IF EXISTS rate_source;
CREATE VIEW rate_source AS
SELECT m.district AS area, m.month AS period, count(r.case_id) AS events, m.dwellings AS base, 1000 AS per
FROM district_month AS m
LEFT JOIN every_repair AS r ON r.district = m.district AND substr(r.reported, 1, 7) = m.month
GROUP BY m.district, m.month;

.print
.print 'One statement fits every model of model_source, keeps the fits and writes the plain tables.'
INSERT INTO model_refresh(at) VALUES ('2025-01-02');
SELECT name, status, fitted_at, response, rows, rows_left_out, round(r_squared, 3) AS r_squared
FROM published_model;

-- The cases of January 2025, made from those of the January before: a cold snap, in which heating
-- repairs cost two and a half times as much, and a trade that was not there before.
INSERT INTO repair_2025
SELECT case_id + 30000, date(reported, '366 days'), date(closed, '366 days'), district,
       CASE WHEN case_id % 40 = 7 THEN 'Scaffolding' ELSE trade END,
       dwellings, building_age, visits, days_open,
       CASE WHEN trade = 'Heating' AND case_id % 40 <> 7 THEN round(2.5 * cost, 2) ELSE cost END,
       cost_source, inspection_score
FROM repair WHERE reported BETWEEN '2024-01-01' AND '2024-01-31';

.print
.print 'A month of cases comes in, with dear heating repairs and a trade that was not there before:'
SELECT count(*) AS cases, min(reported) AS first, max(reported) AS last,
       sum(trade = 'Heating') AS heating, sum(trade = 'Scaffolding') AS scaffolding
FROM repair_2025;

-- The month needs its rows in what rates are counted per; without them its cases are in no rate.
INSERT INTO district_month SELECT district, '2025-01', dwellings FROM district_year WHERE year = 2024;

INSERT INTO model_refresh(at) VALUES ('2025-02-03');

.print
.print 'Refreshed. What changed since the fit before: how many coefficients stayed inside the limits'
.print 'they had, and which did not.'
SELECT name, status, count(*) AS coefficients
FROM published_changes AS c JOIN published_terms AS t USING (name, term) GROUP BY name, status;
SELECT name, sentence FROM published_changes WHERE status IN ('moved', 'new', 'gone');

.print
.print 'Every fit is kept, so that any two can be compared and any one asked again:'
SELECT refresh, at, name, status, fact(model, 'rows_fitted') AS rows,
       round(coefficient(model, 'trade is Heating'), 3) AS heating
FROM model_fit JOIN model_refresh USING (refresh);

.print
.print 'The plain tables need no extension. What the first model says of trades, and the rates of the month:'
SELECT column_name, from_value, to_value, round(effect, 1) AS effect, round(low, 1) AS low,
       round(high, 1) AS high, unit
FROM published_effects WHERE name = 'cost of a repair' AND column_name = 'trade';
SELECT area, hidden, events, round(rate, 1) AS per_1000, round(low, 1) AS low, round(high, 1) AS high,
       round(ratio, 2) AS ratio, round(ratio_low, 2) AS ratio_low, round(ratio_high, 2) AS ratio_high
FROM published_rates WHERE period = '2025-01';
SELECT period, areas, hidden_areas, events, round(rate, 1) AS per_1000
FROM published_totals ORDER BY period DESC LIMIT 13;
