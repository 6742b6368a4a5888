-- From a dirty table to a briefed model in one statement: numbers that are none become gaps, gaps
-- are counted, and the page says how many cases were left out and why.
--
-- Needs:  raw_import (make_database.sql) and the extension.
-- Leaves: nothing.

.print
.print 'Straight from the import, in which every column is text:'
.mode list
SELECT model_brief(
         ols_model('cost (EUR) | log_offset 20', number_or_null(replace(cost, ',', '')),
                   'building age (years)',       number_or_null(building_age, '-99'),
                   'dwellings | log_offset',     number_or_null(dwellings),
                   'ward | category',            ward,
                   'errors | option',            'hc3',
                   'name | option',              'Repairs of autumn 2024',
                   'case | key',                 case_no))
FROM raw_import;
