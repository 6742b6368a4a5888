-- How far from usual: z-scores inside a district, and weekly alerts against a trailing baseline.
--
-- Needs:  repair, week (make_database.sql) and the extension.
-- Leaves: weekly_cases: one row for each district and week, weeks without cases included.

.print
.print 'The five cases that stayed open longest for their district and trade, on a log scale since'
.print 'durations are skewed. z counts standard deviations from the mean of that district and trade.'
SELECT case_id, district, trade, days_open, round(z, 2) AS z
FROM (SELECT case_id, district, trade, days_open,
             z_score(log_offset(days_open), mean(log_offset(days_open)) OVER same,
                     stddev_samp(log_offset(days_open)) OVER same) AS z
      FROM repair WHERE days_open IS NOT NULL
      WINDOW same AS (PARTITION BY district, trade))
ORDER BY z DESC LIMIT 5;

DROP TABLE IF EXISTS weekly_cases;
CREATE TABLE weekly_cases AS
WITH counted AS (
  SELECT district, date(reported, 'weekday 0', '-6 days') AS monday, count(*) AS cases
  FROM repair GROUP BY 1, 2
)
SELECT district, monday, coalesce(cases, 0) AS cases
FROM (SELECT DISTINCT district FROM repair) CROSS JOIN week LEFT JOIN counted USING (district, monday);

.print
.print 'Weekly alerts: each week against the 52 weeks before it. z_against_earlier leaves the current'
.print 'week out of its own baseline, which avg() and stddev_samp() over the same frame would not.'
SELECT district, monday, cases, round(usual, 1) AS usual, round(z, 1) AS z
FROM (SELECT district, monday, cases,
             mean(cases) OVER (PARTITION BY district ORDER BY monday
                               ROWS BETWEEN 52 PRECEDING AND 1 PRECEDING) AS usual,
             z_against_earlier(cases) OVER (PARTITION BY district ORDER BY monday
                                            ROWS 52 PRECEDING)            AS z,
             row_number() OVER (PARTITION BY district ORDER BY monday)    AS weeks
      FROM weekly_cases)
WHERE weeks > 52 AND usual > 5 AND z > 3 ORDER BY z DESC;
