-- A model of the cost of a repair, over all and by district.
--
-- Needs:  repair (make_database.sql) and the extension.
-- Leaves: cost_model (one row) and district_model (one row for each district), column model.

DROP TABLE IF EXISTS cost_model;
CREATE TABLE cost_model AS
SELECT ols_model('cost (EUR) | log_offset 20',   cost,
                 'dwellings | log_offset',       dwellings,
                 'building age (years)',         building_age,
                 'trade | category Plumbing',    trade,
                 'district | category Ashquill', district,
                 'certainty | weight',           iif(cost_source = 'estimate', 0.5, 1),
                 'case | key',                   case_id,
                 'errors | option',              'hc3',
                 'name | option',                'cost of a repair') AS model
FROM repair;

.print
.print 'One statement fits cost against dwellings, age, trade and district. Raw values go in; the words'
.print 'after the bar say what each is: a logarithm, a category with its reference level, a weight'
.print '(estimates count half), the key that names a case. What was fitted, and how well:'
SELECT fact, CASE typeof(value) WHEN 'real' THEN round(value, 3) ELSE value END AS value
FROM cost_model, model_facts(model)
WHERE fact IN ('status', 'response', 'rows_offered', 'rows_fitted', 'rows_left_out', 'terms',
               'residual_sd', 'median_absolute_error', 'r_squared');

.print
.print 'The columns, with what was missing (open cases have no cost yet):'
SELECT column_name, role, kind, transform, observed_low AS low, observed_high AS high, reference,
       missing
FROM cost_model, model_columns(model);

.print
.print 'The terms. On a log scale a coefficient is close to a relative change: 0.005 for a year of age'
.print 'goes with about half a percent more. For a category, percent says it exactly: how cost + 20 at'
.print 'that level compares with the reference, other columns being equal.'
SELECT term, round(coefficient, 4) AS coefficient, round(low, 4) AS low, round(high, 4) AS high,
       CASE WHEN category_level IS NOT NULL THEN round(100 * (exp(coefficient) - 1), 1) END AS percent
FROM cost_model, model_terms(model);

.print
.print 'Could a whole column be left out? Each is tested jointly.'
SELECT column_name, parameters, round(f, 1) AS f,
       iif(p_value < 0.001, 'below 0.001', round(p_value, 3)) AS p_value
FROM cost_model, model_tests(model);

.print
.print 'The five cases that pull hardest on the fit:'
SELECT key AS case_id, round(cooks_distance, 5) AS cooks_distance, round(leverage, 5) AS leverage,
       round(studentized_residual, 1) AS studentized_residual
FROM cost_model, model_influence(model) LIMIT 5;

DROP TABLE IF EXISTS district_model;
CREATE TABLE district_model(district TEXT PRIMARY KEY, model TEXT);
INSERT INTO district_model
SELECT district,
       ols_model('cost (EUR) | log_offset 20', cost,
                 'dwellings | log_offset',     dwellings,
                 'building age (years)',       building_age,
                 'trade | category Plumbing',  trade,
                 'certainty | weight',         iif(cost_source = 'estimate', 0.5, 1),
                 'case | key',                 case_id) AS model
FROM repair GROUP BY district;

.print
.print 'The same for each district with GROUP BY. A district with too few cases does not stop the'
.print 'rest: its model is refused, and says why.'
SELECT district, fact(model, 'rows_fitted') AS rows, round(fact(model, 'r_squared'), 3) AS r_squared,
       round(coefficient(model, 'dwellings'), 3) AS dwellings,
       round(coefficient(model, 'building age'), 4) AS per_year,
       model_problem(model) AS problem
FROM district_model;
