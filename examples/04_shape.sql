-- The shape of a measure before and after it is re-expressed.
--
-- Needs:  repair (make_database.sql) and the extension.
-- Leaves: nothing.

.print
.print 'Skewness is 0 for an even shape, above 1 or below -1 when a few values dominate. Costs and'
.print 'durations have a long right tail, scores out of 100 a long left one. rows_lost are the rows'
.print 'that a re-expression has no value for, such as a cost of 0 under a plain logarithm.'
WITH tried(measure, re_expression, raw, value) AS (
  SELECT 'cost', 'none', cost, cost FROM repair UNION ALL
  SELECT 'cost', 'sqrt_offset', cost, sqrt_offset(cost) FROM repair UNION ALL
  SELECT 'cost', 'log_offset', cost, log_offset(cost) FROM repair UNION ALL
  SELECT 'cost', 'log_offset 20', cost, log_offset(cost, 20) FROM repair UNION ALL
  SELECT 'days open', 'none', days_open, days_open FROM repair UNION ALL
  SELECT 'days open', 'log_offset', days_open, log_offset(days_open) FROM repair UNION ALL
  SELECT 'score', 'none', inspection_score, inspection_score FROM repair UNION ALL
  SELECT 'score', 'log_reflected 101', inspection_score, log_reflected(inspection_score, 101)
  FROM repair
)
SELECT measure, re_expression, round(skewness(value), 2) AS skewness,
       round(excess_kurtosis(value), 2) AS excess_kurtosis,
       value_count(raw) - value_count(value) AS rows_lost
FROM tried GROUP BY measure, re_expression ORDER BY measure, abs(skewness(value)) DESC;

.print
.print 'Which power suits? The Box-Cox profile gives the best power of the positive costs of roofing,'
.print 'with limits: 0 is the logarithm, 0.5 the square root, 1 leaves costs as they are.'
WITH profile(found) AS (
  SELECT box_cox_profile(cost) FROM repair WHERE trade = 'Roofing' AND cost > 0
)
SELECT fact(found, 'rows')             AS rows,
       round(fact(found, 'lambda'), 3) AS best_power,
       round(fact(found, 'low'), 3)    AS low,
       round(fact(found, 'high'), 3)   AS high,
       fact(found, 'simple_spec')      AS simple_spec
FROM profile;
