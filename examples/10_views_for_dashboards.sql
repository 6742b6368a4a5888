-- Views that a dashboard reads: re-expressed columns, weekly alerts, rates with small cells hidden;
-- and an index on a re-expression, where it does no harm.
--
-- Needs:  repair, week, district_year (make_database.sql) and the extension. A dashboard that reads
--         the views needs the extension on its own connection, read-only is enough.
-- Leaves: repair_scaled  the cases with re-expressed measures beside the raw ones
--         week_count     cases by trade and week, weeks without cases included
--         week_alert     each week against the 52 before it, and against its season in other years
--         district_rate  rates by district and year with limits, ratio to the year before, and small
--                        cells hidden so that the yearly total does not give them away

-- Nothing here asks for trust in the database's schema.
PRAGMA trusted_schema = OFF;

-- ---- Re-expressed columns ----

DROP VIEW IF EXISTS repair_scaled;
CREATE VIEW repair_scaled AS
SELECT repair.*,
       log_offset(cost, 20)                AS log_cost,
       log_offset(days_open)               AS log_days,
       logit(inspection_score, 0, 100, 0.005) AS score_logit
FROM repair;

.print
.print 'A view with re-expressed columns. Averages on the scale of the view, and the way back to euros:'
SELECT trade, count(log_cost) AS cases, round(mean(log_cost), 3) AS mean_log,
       round(log_offset_inverse(mean(log_cost), 20)) AS typical_eur, round(mean(cost)) AS mean_eur
FROM repair_scaled GROUP BY trade ORDER BY typical_eur DESC;

-- ---- An index on a re-expression ----

-- A generated column or an expression index makes its table unwritable for programs without the
-- extension, and its whole file unreadable for SQLite older than 3.31 or 3.9. So never on the
-- agency's own records: on a table derived from them, in a file of its own.
-- In earnest: ATTACH 'derived.db' AS derived
ATTACH ':memory:' AS derived;
CREATE TABLE derived.repair_cost(
  case_id  INTEGER PRIMARY KEY,
  district TEXT NOT NULL,
  cost     REAL,
  log_cost REAL GENERATED ALWAYS AS (log_offset(cost, 1)) VIRTUAL
);
INSERT INTO derived.repair_cost SELECT case_id, district, cost FROM repair;
CREATE INDEX derived.repair_cost_log ON repair_cost(log_cost);
CREATE INDEX derived.repair_cost_district ON repair_cost(district, log_offset(cost, 1));

.print
.print 'A generated column with an index, and an index on the expression itself: the planner uses both.'
EXPLAIN QUERY PLAN SELECT case_id, cost FROM derived.repair_cost WHERE log_cost > 7;
EXPLAIN QUERY PLAN
SELECT case_id, cost FROM derived.repair_cost
WHERE district = 'Corvane' AND log_offset(cost, 1) > 7;

.print
.print 'The dearest cases of a district, by that index:'
SELECT case_id, round(cost) AS cost, round(log_offset(cost, 1), 2) AS log_cost
FROM derived.repair_cost WHERE district = 'Corvane' AND log_offset(cost, 1) > 7
ORDER BY log_offset(cost, 1) DESC LIMIT 5;
DETACH derived;

-- ---- Weekly alerts ----

DROP VIEW IF EXISTS week_count;
CREATE VIEW week_count AS
SELECT trade, monday, coalesce(cases, 0) AS cases
FROM (SELECT DISTINCT trade FROM repair)
CROSS JOIN week
LEFT JOIN (SELECT trade, date(reported, 'weekday 0', '-6 days') AS monday, count(*) AS cases
           FROM repair GROUP BY 1, 2) USING (trade, monday);

-- The season of a week: in each earlier year the five weeks nearest to its date.
DROP VIEW IF EXISTS week_alert;
CREATE VIEW week_alert AS
WITH counted AS MATERIALIZED (SELECT *, julianday(monday) AS day FROM week_count),
trailing AS (
  SELECT trade, monday, day, cases,
         mean(cases) OVER before                                   AS usual,
         z_against_earlier(cases) OVER (PARTITION BY trade ORDER BY monday
                                        ROWS 52 PRECEDING)          AS z,
         count(*) OVER before                                      AS weeks_before
  FROM counted
  WINDOW before AS (PARTITION BY trade ORDER BY monday ROWS BETWEEN 52 PRECEDING AND 1 PRECEDING)
)
SELECT t.trade, t.monday, t.cases, t.weeks_before, t.usual, t.z,
       count(s.cases)                                              AS season_weeks,
       mean(s.cases)                                               AS season_usual,
       z_score(t.cases, mean(s.cases), stddev_samp(s.cases))       AS season_z,
       rate_ratio(t.cases, 1, sum(s.cases), count(s.cases))        AS season_ratio,
       rate_ratio_low(t.cases, 1, sum(s.cases), count(s.cases))    AS season_ratio_low,
       rate_ratio_high(t.cases, 1, sum(s.cases), count(s.cases))   AS season_ratio_high
FROM trailing AS t
LEFT JOIN counted AS s
  ON s.trade = t.trade AND s.day < t.day - 300
 AND abs(t.day - s.day - 365.25 * round((t.day - s.day) / 365.25)) <= 17.5
GROUP BY t.trade, t.monday;

.print
.print 'Weekly alerts by trade, weeks without cases counted as 0. A week may be high against the 52 weeks'
.print 'before it (z above 3), against its own season in earlier years (a ratio whose lower limit is above'
.print '1.2), or both. Damp calls in winter are many and usual for winter; the same number in June is not.'
SELECT trade, monday, cases, round(usual, 1) AS usual, round(z, 1) AS z,
       round(season_usual, 1) AS season_usual, round(season_ratio, 2) AS ratio,
       round(season_ratio_low, 2) AS ratio_low,
       CASE WHEN season_ratio_low <= 1.2 THEN 'high against the year alone'
            WHEN z <= 3 THEN 'high for its season alone' ELSE 'high for both' END AS alert
FROM week_alert
WHERE weeks_before = 52 AND season_weeks >= 5 AND (z > 3 OR season_ratio_low > 1.2)
ORDER BY monday DESC;

-- ---- Rates by district ----

-- Districts come from the list of districts, so that one without cases has a row with 0.
DROP VIEW IF EXISTS district_rate;
CREATE VIEW district_rate AS
WITH counted AS (
  SELECT y.district, y.year, y.dwellings, count(r.case_id) AS cases
  FROM district_year AS y
  LEFT JOIN repair AS r ON r.district = y.district AND CAST(substr(r.reported, 1, 4) AS INTEGER) = y.year
  GROUP BY y.district, y.year
),
judged AS (
  SELECT *, cases < suppression_floor(cases, 5) OVER (PARTITION BY year) AS hidden FROM counted
),
shown AS (
  SELECT district, year, dwellings, hidden, iif(hidden, NULL, cases) AS cases FROM judged
)
SELECT district, year, hidden, cases, dwellings,
       rate_per(cases, dwellings, 1000)  AS per_1000,
       rate_low(cases, dwellings, 1000)  AS low,
       rate_high(cases, dwellings, 1000) AS high,
       rate_ratio(cases, dwellings, lag(cases) OVER years, lag(dwellings) OVER years)      AS ratio,
       rate_ratio_low(cases, dwellings, lag(cases) OVER years, lag(dwellings) OVER years)  AS ratio_low,
       rate_ratio_high(cases, dwellings, lag(cases) OVER years, lag(dwellings) OVER years) AS ratio_high
FROM shown
WINDOW years AS (PARTITION BY district ORDER BY year);

.print
.print 'Rates per 1,000 dwellings with 95% limits, and the ratio to the year before. Saltspur Isle has'
.print 'too few cases to be shown, and with it the next smallest district: else the yearly total less'
.print 'the others would give the hidden count.'
SELECT district, hidden, cases, round(per_1000, 1) AS per_1000, round(low, 1) AS low,
       round(high, 1) AS high, round(ratio, 2) AS ratio, round(ratio_low, 2) AS ratio_low,
       round(ratio_high, 2) AS ratio_high
FROM district_rate WHERE year = 2024;
