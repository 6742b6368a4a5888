-- What the dashboard shows: models of cost, over all and by district, and quarterly rates.
--
-- Needs:  repair, district_year (make_database.sql), the tables of sql/keep_models.sql, and the
--         extension. Meant for a copy of the demo database: fits kept so far are forgotten.
-- Leaves: district_fit, district_cases, model_district, model_source, rate_source,
--         the trigger hidden_district_goes, and one refresh.

DELETE FROM model_fit;

DROP VIEW IF EXISTS district_fit;
CREATE VIEW district_fit AS
SELECT district,
       ols_model('cost (EUR) | log_offset 20', cost, 'dwellings | log_offset', dwellings,
                 'building age (years)', building_age, 'trade | category Plumbing', trade,
                 'errors | option', 'hc3',
                 'name | option', 'cost of a repair in ' || district) AS model
FROM repair GROUP BY district;

-- The districts whose own model is published. Each model tells how many cases it was fitted to, so
-- these are counts of a table that is shown with its total, the model over all. Were one district
-- alone without a model, its count would be the total less the others; suppression_floor takes the
-- next smallest with it. A district whose model may not be given away counts as 1, so that it is
-- hidden whatever the reason.
-- This guards districts, not a trade within a district: where a trade may be rare in one district
-- alone, put trades together before fitting, or publish the model over all only.
DROP VIEW IF EXISTS district_cases;
CREATE VIEW district_cases AS
SELECT district, CASE WHEN model_problem(model_for_release(model, floor)) IS NULL
                      THEN fact(model, 'rows_fitted') ELSE 1 END AS cases
FROM district_fit CROSS JOIN release_rule;

DROP VIEW IF EXISTS model_district;
CREATE VIEW model_district AS
SELECT d.district AS district
FROM district_cases AS d
CROSS JOIN (SELECT suppression_floor(c.cases, r.floor) AS least
            FROM district_cases AS c CROSS JOIN release_rule AS r) AS t
WHERE d.cases >= t.least;

DROP VIEW IF EXISTS model_source;
CREATE VIEW model_source AS
SELECT 'cost' AS name,
       ols_model('cost (EUR) | log_offset 20', cost, 'dwellings | log_offset', dwellings,
                 'building age (years)', building_age, 'trade | category Plumbing', trade,
                 'errors | option', 'hc3', 'name | option', 'cost of a repair') AS model
FROM repair
UNION ALL
SELECT 'cost in ' || district, model
FROM district_fit WHERE district IN (SELECT district FROM model_district);

-- The last fit of a name that is given no more would stay published; that of a district that has to
-- be hidden from now on must not.
DROP TRIGGER IF EXISTS hidden_district_goes;
CREATE TRIGGER hidden_district_goes BEFORE INSERT ON model_refresh
BEGIN
  DELETE FROM model_fit
  WHERE name LIKE 'cost in %'
    AND name NOT IN (SELECT 'cost in ' || district FROM model_district);
END;

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
