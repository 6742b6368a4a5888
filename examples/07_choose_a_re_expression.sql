-- From the shape of three measures to a model of each: which re-expression, how sure, what it costs.
--
-- Needs:  repair (make_database.sql) and the extension.
-- Leaves: choice (one row for each measure, column scan) and re_expressed_model (one row for each
--         measure: raw is the model of the measure as it stands, model that of the re-expressed one).

.print
.print 'Three measures that a straight line does not suit as they stand: costs with a long right tail'
.print 'and some free repairs, scores that crowd under a ceiling of 100, and counts of visits.'
SELECT 'cost' AS measure, fact(shape_summary(cost), 'reading') AS shape FROM repair UNION ALL
SELECT 'score', fact(shape_summary(inspection_score), 'reading') FROM repair UNION ALL
SELECT 'visits', fact(shape_summary(visits), 'reading') FROM repair;

.print
.print 'In a model the shape matters of what the predictors leave over. So each scan is given the'
.print 'predictors: the measure comes first, raw, and the rest is labelled as in a model. The scan'
.print 'tries what suits the measure and says in one sentence what it comes to.'
DROP TABLE IF EXISTS choice;
CREATE TABLE choice(measure TEXT PRIMARY KEY, scan TEXT);
INSERT INTO choice
SELECT 'cost', re_expression_scan('cost (EUR)',                cost,
                                  'dwellings | log_offset',    dwellings,
                                  'building age (years)',      building_age,
                                  'trade | category Plumbing', trade) FROM repair UNION ALL
SELECT 'score', re_expression_scan('score (points)',            inspection_score,
                                   'dwellings | log_offset',    dwellings,
                                   'building age (years)',      building_age,
                                   'trade | category Plumbing', trade) FROM repair UNION ALL
SELECT 'visits', re_expression_scan('visits',                    visits,
                                    'dwellings | log_offset',    dwellings,
                                    'building age (years)',      building_age,
                                    'trade | category Plumbing', trade) FROM repair;
SELECT measure, fact(scan, 'reading') AS reading FROM choice;

.print
.print 'The same in figures: the first three of each, the measure left alone, and the plain logarithm.'
.print 'AIC is on the scale of the measure itself, so that candidates compare: lower fits better, and'
.print 'a difference of 2 is nothing. A candidate that loses rows has none and never comes first. For'
.print 'scores, log_reflected comes second and is easier to explain; that may be worth its AIC.'
SELECT measure, rank, spec, rows_outside AS rows_lost, round(skewness, 2) AS skewness,
       round(aic) AS aic
FROM choice, re_expression_rows(scan)
WHERE rank <= 3 OR spec IN ('identity', 'log_offset') ORDER BY measure, rank;

.print
.print 'How sure is the power? Visits are never 0, so the profile gives theirs, with limits. Two thirds'
.print 'of the visits are 1, and no power can part values that are equal: even the best one leaves a'
.print 'skewness of 0.7.'
WITH profile(found) AS (
  SELECT box_cox_profile('visits', visits, 'dwellings | log_offset', dwellings,
                         'building age (years)', building_age,
                         'trade | category Plumbing', trade) FROM repair
)
SELECT fact(found, 'rows') AS rows, round(fact(found, 'lambda'), 2) AS best_power,
       round(fact(found, 'low'), 2) AS low, round(fact(found, 'high'), 2) AS high
FROM profile;

.print
.print 'Now fit. A label takes a spec from the scan, or leaves its numbers to the rows that are fitted:'
.print 'log_offset auto, box_cox. The model keeps them, and model_columns shows them. Where the scan'
.print 'says that the spread still changes, ask for errors that hold all the same: hc3.'
DROP TABLE IF EXISTS re_expressed_model;
CREATE TABLE re_expressed_model(measure TEXT PRIMARY KEY, raw TEXT, model TEXT);
INSERT INTO re_expressed_model
SELECT 'cost',
       ols_model('cost (EUR)', cost, 'dwellings | log_offset', dwellings,
                 'building age (years)', building_age, 'trade | category Plumbing', trade,
                 'errors | option', 'hc3'),
       ols_model('cost (EUR) | log_offset auto', cost, 'dwellings | log_offset', dwellings,
                 'building age (years)', building_age, 'trade | category Plumbing', trade,
                 'errors | option', 'hc3')
FROM repair UNION ALL
SELECT 'score',
       ols_model('score (points)', inspection_score, 'dwellings | log_offset', dwellings,
                 'building age (years)', building_age, 'trade | category Plumbing', trade,
                 'errors | option', 'hc3'),
       ols_model('score (points) | logit 0 100 0.005', inspection_score,
                 'dwellings | log_offset', dwellings,
                 'building age (years)', building_age, 'trade | category Plumbing', trade,
                 'errors | option', 'hc3')
FROM repair UNION ALL
SELECT 'visits',
       ols_model('visits', visits, 'dwellings | log_offset', dwellings,
                 'building age (years)', building_age, 'trade | category Plumbing', trade,
                 'errors | option', 'hc3'),
       ols_model('visits | box_cox', visits, 'dwellings | log_offset', dwellings,
                 'building age (years)', building_age, 'trade | category Plumbing', trade,
                 'errors | option', 'hc3')
FROM repair;
SELECT measure, transform, note FROM re_expressed_model, model_columns(model) WHERE role = 'response';

.print
.print 'What was it good for? A damp case in a building of 4 dwellings and 40 years, and where nine in'
.print 'ten such cases should lie. The raw models reach below a cost of 0 and beyond a score of 100; the'
.print 're-expressed ones keep to what can occur, or nearly. For scores and visits both give the same'
.print 'mean, but typical is another matter. For costs the means differ too: the raw line adds up what'
.print 'really goes by percent.'
SELECT measure, 'raw' AS fitted, round(typical, 1) AS typical, round(mean, 1) AS mean,
       round(case_low, 1) AS case_low, round(case_high, 1) AS case_high
FROM re_expressed_model,
     model_predictions(raw, 0.9, 'dwellings', 4, 'building age', 40, 'trade', 'Damp')
UNION ALL
SELECT measure, 're-expressed', round(typical, 1), round(mean, 1), round(case_low, 1),
       round(case_high, 1)
FROM re_expressed_model,
     model_predictions(model, 0.9, 'dwellings', 4, 'building age', 40, 'trade', 'Damp')
ORDER BY measure, fitted;
