-- What is in the columns of a CSV import, and how to make numbers of them.
--
-- Needs:  raw_import (make_database.sql) and the extension.
-- Leaves: imported: the same rows with numbers where numbers belong.

.print
.print 'A CSV import makes text of everything. value_audit sorts what it finds in a column by kind;'
.print 'here are the kinds that occur, with an example of each.'
WITH audit(column_name, found) AS (
  SELECT 'reported', value_audit(reported) FROM raw_import UNION ALL
  SELECT 'ward', value_audit(ward) FROM raw_import UNION ALL
  SELECT 'building_age', value_audit(building_age) FROM raw_import UNION ALL
  SELECT 'cost', value_audit(cost) FROM raw_import UNION ALL
  SELECT 'inspection_score', value_audit(inspection_score) FROM raw_import
)
SELECT column_name, kind, rows, example FROM audit, value_audit_rows(found) WHERE rows > 0;

.print
.print 'Which words hide behind "other_text"? Ordinary SQL lists them.'
SELECT cost AS cost_as_imported, count(*) AS rows
FROM raw_import WHERE number_or_null(cost) IS NULL AND trim(cost) <> ''
GROUP BY cost ORDER BY rows DESC LIMIT 4;

.print
.print 'number_or_null makes NULL of blanks, of words and of the codes you list (here -99); figures'
.print 'like 1,200.00 need their commas taken out first. Dates that are not ISO dates become NULL.'
DROP TABLE IF EXISTS imported;
CREATE TABLE imported AS
SELECT CAST(case_no AS INTEGER)                       AS case_id,
       date_from_days(date_days(reported))            AS reported,
       ward,
       number_or_null(building_age, '-99')            AS building_age,
       number_or_null(dwellings)                      AS dwellings,
       number_or_null(replace(cost, ',', ''))         AS cost,
       number_or_null(inspection_score)               AS inspection_score
FROM raw_import;

.print
.print 'Why it matters: avg() reads words as 0, a date as its year and -99 as an age, and it stops'
.print '1,200.00 at the comma. It warns of none of this.'
SELECT 'building age' AS measure,
       (SELECT round(avg(building_age), 1) FROM raw_import) AS avg_of_the_import,
       (SELECT round(mean(building_age), 1) FROM imported)  AS mean_after_cleaning
UNION ALL
SELECT 'cost', (SELECT round(avg(cost), 1) FROM raw_import),
               (SELECT round(mean(cost), 1) FROM imported);
