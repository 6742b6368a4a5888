-- The main job on the demo database, told to the last bit, whatever program runs it.
--
-- Needs:  the demo database (examples/make_database.sql), which is only read, and the extension.
-- Leaves: temp.told(line): one line for each figure, as
--             part | item | number of the figure | value
--         with reals as sign, whole number and power of two (3 * 2^-1 for 1.5), so that no line
--         depends on how the host prints a real. Every step in making them is exact.

-- Figures side by side, as each statement below finds them.
CREATE TEMP TABLE found(part, item, v1, v2, v3, v4, v5, v6, v7, v8, v9, v10);

INSERT INTO found(part, item, v1, v2)
SELECT 'audit', kind, rows, example
FROM (SELECT value_audit(building_age) AS audit FROM raw_import), value_audit_rows(audit);

-- Numbers read from text.
INSERT INTO found(part, item, v1, v2, v3)
SELECT 'text', ward, value_sum(number_or_null(building_age, '-99')),
       value_sum(number_or_null(replace(cost, ',', ''))), median(number_or_null(cost))
FROM raw_import GROUP BY ward;

INSERT INTO found(part, item, v1, v2, v3, v4, v5, v6, v7, v8, v9, v10)
SELECT 'rates', district, rate_per(cases, b.dwellings, 1000), rate_low(cases, b.dwellings, 1000),
       rate_high(cases, b.dwellings, 1000, 0.9), percent_of(damp, cases), percent_low(damp, cases),
       percent_high(damp, cases), rate_ratio(cases, b.dwellings, earlier, a.dwellings),
       rate_ratio_low(cases, b.dwellings, earlier, a.dwellings),
       rate_ratio_high(cases, b.dwellings, earlier, a.dwellings),
       rate_ratio_p(cases, b.dwellings, earlier, a.dwellings)
FROM (SELECT district, count(*) FILTER (WHERE reported >= '2024-01-01') AS cases,
             count(*) FILTER (WHERE reported < '2024-01-01')            AS earlier,
             count(*) FILTER (WHERE reported >= '2024-01-01' AND trade = 'Damp') AS damp
      FROM repair WHERE reported >= '2023-01-01' GROUP BY district)
JOIN district_year AS a USING (district) JOIN district_year AS b USING (district)
WHERE a.year = 2023 AND b.year = 2024;

INSERT INTO found(part, item, v1, v2, v3, v4, v5, v6, v7, v8, v9, v10)
SELECT 're-expression', case_id, log_offset(cost, 20), log_offset_inverse(log_offset(cost, 20), 20),
       sqrt_offset(cost), box_cox(cost, 0.25, 1), box_cox_inverse(box_cox(cost, 0.25, 1), 0.25, 1),
       yeo_johnson(cost - 100, 0.5), asinh_scaled(cost, 0.01), logit(inspection_score, 0, 100, 0.005),
       re_express(dwellings, 'power_of 0.3333333333333333'),
       z_score(cost, mean(cost) OVER (), stddev_samp(cost) OVER ())
FROM repair WHERE case_id BETWEEN 12000 AND 12050;

INSERT INTO found(part, item, v1, v2, v3, v4, v5, v6, v7, v8, v9, v10)
SELECT 'shape', trade, mean(cost), stddev_samp(cost), skewness(cost), excess_kurtosis(cost),
       median(cost), percentile_cont(cost, 0.9), corr(cost, dwellings), zero_share(cost),
       shape_summary(cost), jarque_bera(cost)
FROM repair GROUP BY trade;

INSERT INTO found(part, item, v1, v2)
SELECT 'weekly', monday, cases, z_against_earlier(cases) OVER (ORDER BY monday ROWS 52 PRECEDING)
FROM (SELECT date(reported, 'weekday 0', '-6 days') AS monday, count(*) AS cases
      FROM repair WHERE district = 'Corvane' GROUP BY monday);

INSERT INTO found(part, item, v1, v2, v3)
SELECT 'choice', trade, box_cox_lambda(visits), yeo_johnson_lambda(cost), log_offset_choice(cost)
FROM repair WHERE trade IN ('Damp', 'Roofing') GROUP BY trade;

INSERT INTO found(part, item, v1, v2)
SELECT 'choice', 'given predictors',
       box_cox_profile('cost', cost, 'dwellings | log_offset', dwellings, 'age', building_age),
       re_expression_scan('cost', cost, 'dwellings | log_offset', dwellings, 'age', building_age)
FROM repair WHERE trade = 'Roofing' AND cost > 0;

CREATE TEMP TABLE fitted(name TEXT PRIMARY KEY, model TEXT);
INSERT INTO fitted
SELECT 'all', ols_model('cost (EUR) | log_offset 20', cost, 'dwellings | log_offset', dwellings,
                        'building age (years)', building_age, 'trade | category Plumbing', trade,
                        'certainty | weight', iif(cost_source = 'estimate', 0.5, 1),
                        'case | key', case_id, 'errors | option', 'hc3')
FROM repair WHERE reported >= '2024-01-01'
UNION ALL
SELECT district, ols_model('cost (EUR) | log_offset 20', cost, 'dwellings | log_offset', dwellings,
                           'building age (years)', building_age, 'trade | category Plumbing', trade,
                           'certainty | weight', iif(cost_source = 'estimate', 0.5, 1))
FROM repair WHERE reported >= '2024-07-01' GROUP BY district;

-- The text of a model holds every figure of it.
INSERT INTO found(part, item, v1, v2) SELECT 'model', name, model_problem(model), model FROM fitted;

INSERT INTO found(part, item, v1, v2, v3, v4, v5, v6)
SELECT 'terms', name || ', ' || term, coefficient, low, high, standard_error, p_value,
       variance_inflation
FROM fitted AS f JOIN model_terms(f.model);

INSERT INTO found(part, item, v1, v2, v3, v4)
SELECT 'effects', name || ', ' || position, effect, low, high, sentence
FROM fitted AS f JOIN model_effects(f.model);

INSERT INTO found(part, item, v1, v2, v3, v4)
SELECT 'checks', check_name, status, statistic, p_value, finding
FROM fitted AS f JOIN model_checks(f.model) WHERE name = 'all';

INSERT INTO found(part, item, v1, v2, v3, v4, v5, v6, v7, v8)
SELECT 'predictions', case_id, typical, typical_low, typical_high, mean, mean_low, mean_high,
       case_low, case_high
FROM repair, fitted AS f, model_predictions(f.model, 0.9, dwellings, building_age, trade)
WHERE f.name = 'all' AND closed IS NULL;

CREATE TEMP TABLE predicted AS
SELECT fitted_typical(model, dwellings, building_age, trade) AS typical,
       fitted_mean(model, dwellings, building_age, trade) AS mean
FROM repair, fitted WHERE name = 'all' AND closed IS NULL ORDER BY case_id;
INSERT INTO found(part, item, v1, v2, v3)
SELECT 'predictions', 'total', value_count(typical), value_sum(typical), value_sum(mean)
FROM predicted;

-- What the host's own functions make of the same figures. Versions of SQLite add up and print
-- reals in different ways, so hosts may differ here, and here alone.
INSERT INTO found(part, item, v1, v2, v3, v4)
SELECT 'host', 'total', sum(typical), avg(typical), total(mean), printf('%!.17g', max(mean))
FROM predicted;

-- Powers of two, exact, and where the next begins.
CREATE TEMP TABLE power(exponent INTEGER PRIMARY KEY, low REAL, next REAL);
INSERT INTO power
WITH RECURSIVE
  up(e, p) AS (SELECT 0, 1.0 UNION ALL SELECT e + 1, p * 2 FROM up WHERE e < 1022),
  down(e, p) AS (SELECT -1, 0.5 UNION ALL SELECT e - 1, p / 2 FROM down WHERE e > -1022)
SELECT e, p, p * 2 FROM up UNION ALL SELECT e, p, p * 2 FROM down;
CREATE INDEX temp.power_low ON power(low);

-- One line for each figure.
CREATE TEMP TABLE told(line TEXT);
INSERT INTO told
WITH figure(part, item, number, value) AS (
  SELECT part, item, 1, v1 FROM found UNION ALL SELECT part, item, 2, v2 FROM found UNION ALL
  SELECT part, item, 3, v3 FROM found UNION ALL SELECT part, item, 4, v4 FROM found UNION ALL
  SELECT part, item, 5, v5 FROM found UNION ALL SELECT part, item, 6, v6 FROM found UNION ALL
  SELECT part, item, 7, v7 FROM found UNION ALL SELECT part, item, 8, v8 FROM found UNION ALL
  SELECT part, item, 9, v9 FROM found UNION ALL SELECT part, item, 10, v10 FROM found
)
SELECT part || ' | ' || item || ' | ' || number || ' | ' ||
       CASE WHEN typeof(value) <> 'real' THEN quote(value)
            WHEN value = 0 THEN '0.0'
            ELSE coalesce((SELECT CAST(value / low * 4503599627370496.0 AS INTEGER) || ' * 2^' ||
                                  (exponent - 52)
                           FROM power WHERE low <= abs(value) ORDER BY low DESC LIMIT 1),
                          'too small') END
FROM figure
WHERE value IS NOT NULL
ORDER BY part, item, number;
