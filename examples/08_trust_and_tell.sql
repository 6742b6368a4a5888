-- Can the fit be trusted, and what does it say: check, mend, compare, and a page for the briefing.
--
-- Needs:  repair (make_database.sql) and the extension.
-- Leaves: cost_fit  four fits of the cost of a case, by name.

.print
.print 'A first fit: cost as it is, in euros. The checks say what is wrong with that, and what to try.'
DROP TABLE IF EXISTS cost_fit;
CREATE TABLE cost_fit(name TEXT PRIMARY KEY, model TEXT NOT NULL);
INSERT INTO cost_fit
SELECT 'as it is',
       ols_model('cost (EUR)',                cost,
                 'dwellings',                 dwellings,
                 'building age (years)',      building_age,
                 'trade | category Plumbing', trade,
                 'case | key',                case_id)
FROM repair;

SELECT check_name, status, finding, remedy
FROM cost_fit, model_checks(model) WHERE name = 'as it is' AND status IN ('problem', 'look');

.print
.print 'Mended: the logarithm of cost + 20 (free repairs keep a value), the logarithm of the number of'
.print 'dwellings, and errors that do not ask for even spread (hc3). What the checks say now:'
INSERT INTO cost_fit
SELECT 'logarithms',
       ols_model('cost (EUR) | log_offset 20', cost,
                 'dwellings | log_offset',     dwellings,
                 'building age (years)',       building_age,
                 'trade | category Plumbing',  trade,
                 'errors | option',            'hc3',
                 'case | key',                 case_id)
FROM repair;

SELECT status, count(*) AS checks, group_concat(check_name, ', ') AS which
FROM cost_fit, model_checks(model) WHERE name = 'logarithms' GROUP BY status;

.print
.print 'Cases of one week may be alike in what the columns do not tell: a storm, a flooded street. With'
.print 'weeks as clusters the limits allow for that. The last fit adds the districts.'
INSERT INTO cost_fit
SELECT 'by week',
       ols_model('cost (EUR) | log_offset 20', cost,
                 'dwellings | log_offset',     dwellings,
                 'building age (years)',       building_age,
                 'trade | category Plumbing',  trade,
                 'week | cluster',             date(reported, 'weekday 0', '-6 days'),
                 'case | key',                 case_id)
FROM repair;
INSERT INTO cost_fit
SELECT 'with districts',
       ols_model('cost (EUR) | log_offset 20',   cost,
                 'dwellings | log_offset',       dwellings,
                 'building age (years)',         building_age,
                 'trade | category Plumbing',    trade,
                 'district | category Ashquill', district,
                 'week | cluster',               date(reported, 'weekday 0', '-6 days'),
                 'name | option',                'What goes with the cost of a repair',
                 'case | key',                   case_id)
FROM repair;

SELECT name, errors, round(effect, 3) AS percent_a_year, round(low, 3) AS low, round(high, 3) AS high
FROM cost_fit, model_effects(model)
WHERE column_name = 'building age' AND kind = 'percent';

.print
.print 'Which fit serves better? Costs as they are against logarithms, then without districts against'
.print 'with them. The reading is in words; its figures are there too (test, p_value, aic_difference).'
SELECT a.name AS first, b.name AS second, fact(model_compare(a.model, b.model), 'preferred') AS preferred,
       fact(model_compare(a.model, b.model), 'reading') AS reading
FROM cost_fit AS a JOIN cost_fit AS b
  ON (a.name, b.name) IN (('as it is', 'logarithms'), ('by week', 'with districts'));

.print
.print 'What the preferred one says, as sentences that can be sent:'
SELECT sentence FROM cost_fit, model_effects(model)
WHERE name = 'with districts' AND column_name IN ('dwellings', 'building age', 'trade')
  AND kind <> 'rule_of_thumb';

.print
.print 'And the whole of it on one page, with the cautions that belong to it.'
.mode list
SELECT model_brief(model) FROM cost_fit WHERE name = 'with districts';
