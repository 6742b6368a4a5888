-- What the dashboard shows: models of cost, over all and by district, and quarterly rates.
--
-- Needs:  repair, district_year (make_database.sql), the tables of sql/keep_models.sql, and the
--         extension. Meant for a copy of the demo database: fits kept so far are forgotten.
-- Leaves: model_source, rate_source and one refresh.

DELETE FROM model_fit;

DROP VIEW IF EXISTS model_source;
CREATE VIEW model_source AS
SELECT 'cost' AS name,
       ols_model('cost (EUR) | log_offset 20', cost, 'dwellings | log_offset', dwellings,
                 'building age (years)', building_age, 'trade | category Plumbing', trade,
                 'errors | option', 'hc3', 'name | option', 'cost of a repair') AS model
FROM repair
UNION ALL
SELECT 'cost in ' || district,
       ols_model('cost (EUR) | log_offset 20', cost, 'dwellings | log_offset', dwellings,
                 'building age (years)', building_age, 'trade | category Plumbing', trade,
                 'errors | option', 'hc3', 'name | option', 'cost of a repair')
FROM repair GROUP BY district;

DROP VIEW IF EXISTS rate_source;
CREATE VIEW rate_source AS
-- From the list of districts, so that a quarter without cases has a row with 0.
SELECT y.district AS area, y.year || '-Q' || q.quarter AS period, coalesce(c.cases, 0) AS events,
       y.dwellings AS base, 1000 AS per
FROM district_year AS y
CROSS JOIN (SELECT 1 AS quarter UNION ALL SELECT 2 UNION ALL SELECT 3 UNION ALL SELECT 4) AS q
LEFT JOIN (SELECT district, CAST(substr(reported, 1, 4) AS INTEGER) AS year,
                  (CAST(substr(reported, 6, 2) AS INTEGER) + 2) / 3 AS quarter, count(*) AS cases
           FROM repair GROUP BY 1, 2, 3) AS c
  ON c.district = y.district AND c.year = y.year AND c.quarter = q.quarter;

INSERT INTO model_refresh DEFAULT VALUES;
