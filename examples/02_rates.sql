-- Counts on one base: rates and shares with exact limits.
--
-- Needs:  repair, district_year (make_database.sql) and the extension.
-- Leaves: nothing.

.print
.print 'Cases per 1,000 dwellings in 2024, with 95% limits. A small district has wide ones.'
WITH counted AS (
  SELECT district, count(*) AS cases FROM repair WHERE reported >= '2024-01-01' GROUP BY district
)
SELECT district, cases, dwellings,
       round(rate_per(cases, dwellings, 1000), 1)  AS per_1000,
       round(rate_low(cases, dwellings, 1000), 1)  AS low,
       round(rate_high(cases, dwellings, 1000), 1) AS high
FROM counted JOIN district_year USING (district) WHERE year = 2024;

.print
.print 'Did the rate change between 2023 and 2024? A ratio of 1 means no change.'
WITH counted AS (
  SELECT district,
         count(*) FILTER (WHERE reported < '2024-01-01')  AS cases_2023,
         count(*) FILTER (WHERE reported >= '2024-01-01') AS cases_2024
  FROM repair WHERE reported >= '2023-01-01' GROUP BY district
)
SELECT counted.district, cases_2023, cases_2024,
       round(rate_ratio(cases_2024, b.dwellings, cases_2023, a.dwellings), 2)      AS ratio,
       round(rate_ratio_low(cases_2024, b.dwellings, cases_2023, a.dwellings), 2)  AS low,
       round(rate_ratio_high(cases_2024, b.dwellings, cases_2023, a.dwellings), 2) AS high,
       round(rate_ratio_p(cases_2024, b.dwellings, cases_2023, a.dwellings), 3)    AS p
FROM counted
JOIN district_year AS a ON a.district = counted.district AND a.year = 2023
JOIN district_year AS b ON b.district = counted.district AND b.year = 2024;

.print
.print 'Damp as a percentage of all cases, winter quarter 2024, with 95% limits.'
SELECT district, count(*) AS cases, sum(trade = 'Damp') AS damp,
       round(percent_of(sum(trade = 'Damp'), count(*)), 1)   AS percent,
       round(percent_low(sum(trade = 'Damp'), count(*)), 1)  AS low,
       round(percent_high(sum(trade = 'Damp'), count(*)), 1) AS high
FROM repair WHERE reported BETWEEN '2024-01-01' AND '2024-03-31'
GROUP BY district;
