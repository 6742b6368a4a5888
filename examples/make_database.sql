-- The case records of a made-up county housing-repair office, the same on every run.
--
-- Needs:  an empty database, and SQLite with its mathematical functions (3.35 or newer). It does
--         not need the Ladderline extension.
-- Leaves: repair         30,000 repair cases reported from 2022 to 2024, one row a case
--         district_year  population and dwellings of each district by year
--         week           every Monday of the three years, so that weeks without cases count as 0
--         raw_import     part of the same cases as a CSV import leaves them: every column is text,
--                        with the blanks, codes and words that such files bring
--
-- Every name is invented. Chance comes from fifteen streams of one generator (Park & Miller 1988
-- with the multiplier 48271), so that every run makes the same cases.

BEGIN;

CREATE TABLE repair(
  case_id          INTEGER PRIMARY KEY,
  reported         TEXT NOT NULL,  -- ISO date
  closed           TEXT,           -- NULL while the case is open on 2024-12-31
  district         TEXT NOT NULL,
  trade            TEXT NOT NULL,
  dwellings        INTEGER NOT NULL,  -- in the building concerned
  building_age     INTEGER,           -- years; NULL where the file does not say
  visits           INTEGER,           -- NULL while the case is open
  days_open        INTEGER,           -- NULL while the case is open
  cost             REAL,              -- EUR; NULL while the case is open; 0 under guarantee
  cost_source      TEXT,              -- 'invoice', or 'estimate': known only roughly
  inspection_score INTEGER            -- 0 to 100; NULL where nobody inspected
);

CREATE TABLE district_year(
  district   TEXT,
  year       INTEGER,
  population INTEGER NOT NULL,
  dwellings  INTEGER NOT NULL,
  PRIMARY KEY (district, year)
);

CREATE TABLE week(monday TEXT PRIMARY KEY);

-- share: where the next district begins on the scale from 0 to 1; effect: on the log of the cost.
CREATE TEMP TABLE place(district TEXT, share_from REAL, share_to REAL, effect REAL,
                        population INTEGER, dwellings INTEGER, growth REAL, oldest INTEGER);
INSERT INTO temp.place VALUES
  ('Ashquill',      0.0000, 0.2100,  0.00, 21400, 9630, 1.006, 120),
  ('Brindmoor',     0.2100, 0.3700,  0.12, 14900, 6420, 0.997, 140),
  ('Corvane',       0.3700, 0.5200, -0.05, 16800, 7310, 1.011,  90),
  ('Dellhythe',     0.5200, 0.6500,  0.20, 11200, 5080, 1.002, 135),
  ('Elmstrand',     0.6500, 0.7700, -0.10, 13700, 5870, 1.008,  70),
  ('Farrowick',     0.7700, 0.8800,  0.05,  9600, 4390, 0.994, 140),
  ('Grenholt',      0.8800, 0.99998, -0.15, 12300, 5150, 1.015, 110),
  ('Saltspur Isle', 0.99998, 1.0000,  0.30,   190,   88, 0.990, 130);

CREATE TEMP TABLE craft(trade TEXT, summer_from REAL, summer_to REAL, winter_from REAL,
                        winter_to REAL, effect REAL, log_days REAL);
INSERT INTO temp.craft VALUES
  ('Plumbing',   0.00, 0.24, 0.00, 0.20,  0.00, 1.9),
  ('Electrical', 0.24, 0.39, 0.20, 0.32,  0.10, 1.8),
  ('Heating',    0.39, 0.46, 0.32, 0.54,  0.45, 1.5),
  ('Damp',       0.46, 0.55, 0.54, 0.71,  0.60, 3.2),
  ('Carpentry',  0.55, 0.71, 0.71, 0.80, -0.10, 2.6),
  ('Roofing',    0.71, 0.82, 0.80, 0.89,  0.85, 3.0),
  ('Glazing',    0.82, 0.91, 0.89, 0.95, -0.20, 2.2),
  ('Drainage',   0.91, 1.00, 0.95, 1.00,  0.25, 1.7);

CREATE TEMP TABLE drawn AS
WITH RECURSIVE stream(i, a, b, c, d, e, f, g, h, j, k, l, m, n, o, p) AS (
  SELECT 1, 1291394886, 407355683, 854716505, 564586691, 192302371, 1203428207, 1738531149,
         1098894339, 1882556969, 2136927794, 1559527823, 182605794, 1914720637, 1596680831, 271135913
  UNION ALL
  SELECT i + 1, a * 48271 % 2147483647, b * 48271 % 2147483647, c * 48271 % 2147483647,
         d * 48271 % 2147483647, e * 48271 % 2147483647, f * 48271 % 2147483647,
         g * 48271 % 2147483647, h * 48271 % 2147483647, j * 48271 % 2147483647,
         k * 48271 % 2147483647, l * 48271 % 2147483647, m * 48271 % 2147483647,
         n * 48271 % 2147483647, o * 48271 % 2147483647, p * 48271 % 2147483647
  FROM stream WHERE i < 30000
),
uniform AS (
  SELECT i,
         a / 2147483647.0 AS u_day, b / 2147483647.0 AS u_place, c / 2147483647.0 AS u_craft,
         d / 2147483647.0 AS u_size, e / 2147483647.0 AS u_age, f / 2147483647.0 AS u_visits,
         g / 2147483647.0 AS u_free, h / 2147483647.0 AS u_source, j / 2147483647.0 AS u_score,
         k / 2147483647.0 AS u_seen, l / 2147483647.0 AS u_unknown,
         -- Box and Muller: two normal deviates from two uniform ones.
         sqrt(-2 * ln(m / 2147483647.0)) * cos(2 * pi() * n / 2147483647.0) AS z_cost,
         sqrt(-2 * ln(m / 2147483647.0)) * sin(2 * pi() * n / 2147483647.0) AS z_days,
         sqrt(-2 * ln(o / 2147483647.0)) * cos(2 * pi() * p / 2147483647.0) AS z_size
  FROM stream
),
-- A flooded street: 110 of the cases are drainage calls from Corvane in one week.
placed AS (
  SELECT uniform.*, i % 273 = 0 AS flooded,
         CASE WHEN i % 273 = 0 THEN date('2024-10-14', (i % 6) || ' days')
              ELSE date('2022-01-01', CAST(u_day * 1096 AS INTEGER) || ' days') END AS reported,
         CASE WHEN u_size < 0.4 THEN 1
              ELSE min(120, 2 + CAST(exp(1.1 + 1.0 * z_size) AS INTEGER)) END AS dwellings
  FROM uniform
)
SELECT placed.*, place.district, place.oldest, place.effect AS place_effect,
       craft.trade, craft.effect AS craft_effect, craft.log_days
FROM placed
JOIN temp.place ON CASE WHEN flooded THEN district = 'Corvane'
                        ELSE u_place >= share_from AND u_place < share_to END
JOIN temp.craft ON CASE WHEN flooded THEN trade = 'Drainage'
                        WHEN strftime('%m', reported) IN ('11', '12', '01', '02', '03')
                        THEN u_craft >= winter_from AND u_craft < winter_to
                        ELSE u_craft >= summer_from AND u_craft < summer_to END;

INSERT INTO repair
WITH dated AS (
  SELECT drawn.*,
         1 + CAST((oldest - 1) * pow(u_age, 1.3) AS INTEGER) AS age,
         1 + CAST(exp(log_days + 0.8 * z_days) AS INTEGER) AS days,
         1 + CAST(-0.9 * ln(u_visits) AS INTEGER) AS visits
  FROM temp.drawn
),
costed AS (
  SELECT dated.*,
         date(reported, days || ' days') AS closed,
         CASE WHEN u_source < 0.25 THEN 'estimate' ELSE 'invoice' END AS cost_source,
         exp(4.1 + 0.30 * ln(dwellings) + 0.006 * age + craft_effect + place_effect +
             0.22 * (visits - 1) +
             -- An estimate scatters more than an invoice, and is right on average: -0.18 is half the
             -- difference of the variances 0.6^2 and 0.85^2.
             CASE WHEN u_source < 0.25 THEN 0.85 * z_cost - 0.18 ELSE 0.6 * z_cost END) AS eur
  FROM dated
)
SELECT row_number() OVER (ORDER BY reported, i),
       reported,
       CASE WHEN closed <= '2024-12-31' THEN closed END,
       district, trade, dwellings,
       CASE WHEN u_unknown >= 0.02 THEN age END,
       CASE WHEN closed <= '2024-12-31' THEN visits END,
       CASE WHEN closed <= '2024-12-31' THEN days END,
       CASE WHEN closed > '2024-12-31' THEN NULL
            WHEN u_free < 0.03 THEN 0.0
            WHEN cost_source = 'estimate' THEN max(10, round(eur / 10) * 10)
            ELSE round(eur, 2) END,
       CASE WHEN closed <= '2024-12-31' THEN cost_source END,
       CASE WHEN u_seen < 0.7 AND closed <= '2024-12-31'
            THEN max(0, 100 + CAST((7 + 0.05 * age) * ln(u_score) AS INTEGER)) END
FROM costed;

INSERT INTO district_year
SELECT district, value,
       CAST(round(population * pow(growth, value - 2022)) AS INTEGER),
       CAST(round(dwellings * pow(growth, value - 2022)) AS INTEGER)
FROM temp.place, (SELECT 2022 AS value UNION ALL SELECT 2023 UNION ALL SELECT 2024);

INSERT INTO week
WITH RECURSIVE mondays(monday) AS (
  SELECT '2022-01-03' UNION ALL
  SELECT date(monday, '7 days') FROM mondays WHERE monday < '2024-12-23'
)
SELECT monday FROM mondays;

-- What a careless export makes of the records of autumn 2024.
CREATE TABLE raw_import(
  case_no          TEXT,  -- with leading zeros
  reported         TEXT,
  ward             TEXT,  -- a code: '03' is not 3
  building_age     TEXT,
  dwellings        TEXT,
  cost             TEXT,
  inspection_score TEXT
);
INSERT INTO raw_import
SELECT printf('%06d', case_id),
       CASE WHEN case_id % 97 = 0 THEN strftime('%d/%m/%Y', reported) ELSE reported END,
       printf('%02d', unicode(district) - 64),
       CASE WHEN building_age IS NULL THEN iif(case_id % 2, '', 'n/a')
            WHEN case_id % 61 = 0 THEN '-99'
            WHEN case_id % 83 = 0 THEN 'about ' || building_age
            WHEN case_id % 11 = 0 THEN ' ' || building_age || ' '
            WHEN case_id % 401 = 0 THEN '1931-05-01'
            ELSE CAST(building_age AS TEXT) END,
       CASE WHEN case_id % 53 = 0 THEN '' ELSE CAST(dwellings AS TEXT) END,
       CASE WHEN cost IS NULL THEN ' '
            WHEN cost >= 1000 THEN printf('%,d', cost) || substr(printf('%.2f', cost), -3)
            WHEN case_id % 71 = 0 THEN 'guarantee'
            ELSE printf('%.2f', cost) END,
       CASE WHEN inspection_score IS NULL THEN iif(case_id % 3, 'n/a', '-')
            ELSE CAST(inspection_score AS TEXT) END
FROM repair WHERE reported >= '2024-09-01';

DROP TABLE temp.drawn;
DROP TABLE temp.craft;
DROP TABLE temp.place;

COMMIT;
