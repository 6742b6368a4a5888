-- Keeps models with their history, and refreshes them and what dashboards read in one statement.
--
-- Needs:  a database that may be written. Run it once in the shell, and have it stop at the first
--         error: .bail on, then .read sql/keep_models.sql
--         A second run changes nothing that is kept. The extension is needed for refreshes and for
--         the live views. Programs that only read the published tables, or write the records, need
--         neither the extension nor a new SQLite: 3.8.7 will do.
-- Leaves: what you set
--           release_rule      one row: cells with fewer cases than `floor` are not given away
--           rate_source       a view (area, period, events, base, per) without rows: put your own in
--                             its place, or leave it. A period begins with its year: 2024,
--                             '2024-03', '2024-Q1'
--         what a refresh keeps (yours, not for giving away)
--           model_refresh     the refreshes; inserting a row is what refreshes
--           model_fit         every fit of every name, refused ones with their reason
--           rate_kept         the counts of rate_source as last read
--         views of the newest sound fit of each name (these need the extension)
--           current_model     name, refresh, at, model
--           fit_before        the same of the sound fit before it
--           live_facts live_terms live_effects live_checks live_cautions
--           live_changes      what changed from that fit to the current one
--         plain tables in the form for release, written anew by each refresh
--           published_model   a row for each name: what it is, how fresh, why it was refused
--           published_text    the longer texts of each name: a page in Markdown, the model itself
--           published_facts published_terms published_effects published_checks published_cautions
--           published_changes
--           published_rates   rates by area with limits and the ratio to the year before
--           published_totals  the same for all areas of a period together
--
-- Then write the models to keep as a view, and refresh as often as you like:
--
--   CREATE VIEW model_source AS
--   SELECT 'cost' AS name, ols_model('cost (EUR) | log_offset 20', cost, …) AS model FROM repair
--   UNION ALL
--   SELECT 'days', ols_model('days open | log_offset', days_open, …) FROM repair;
--
--   INSERT INTO model_refresh DEFAULT VALUES;
--
-- A refresh is one statement, so that it happens whole or not at all. A model that is refused, or
-- text that is no model, is kept with its reason, and the last sound fit of the name stays current.
-- So does the last fit of a name that model_source gives no more, until you delete it from
-- model_fit. A kept fit that cannot be read any more (another format, edited by hand) is marked
-- `unreadable` and the one before it takes its place. What is published is in the form for release:
-- without keys and single rows, groups under the floor put together; a fit that may not be given
-- away at all is withheld with the reason.

BEGIN IMMEDIATE;

-- ---- What you set ----

CREATE TABLE IF NOT EXISTS release_rule(
  rule  INTEGER PRIMARY KEY CHECK (rule = 1),
  floor INTEGER NOT NULL
    CONSTRAINT "floor must be a whole number, at least 1" CHECK (typeof(floor) = 'integer' AND floor >= 1)
);
-- Five is a common local rule; yours may be another: UPDATE release_rule SET floor = 10.
INSERT OR IGNORE INTO release_rule VALUES (1, 5);

CREATE VIEW IF NOT EXISTS rate_source AS
SELECT NULL AS area, NULL AS period, NULL AS events, NULL AS base, NULL AS per WHERE 0;

-- ---- What a refresh keeps ----

CREATE TABLE IF NOT EXISTS model_refresh(
  refresh INTEGER PRIMARY KEY AUTOINCREMENT,
  at      TEXT NOT NULL DEFAULT CURRENT_TIMESTAMP,  -- a date, or a date and time in UTC
  made_by TEXT                                      -- ladderline_version()
);

CREATE TABLE IF NOT EXISTS model_fit(
  refresh INTEGER NOT NULL REFERENCES model_refresh,
  name    TEXT NOT NULL,
  status  TEXT NOT NULL CHECK (status IN ('fitted', 'refused', 'unreadable')),
  reason  TEXT,  -- NULL for a sound fit
  model   TEXT,
  PRIMARY KEY (name, refresh),
  CHECK (status <> 'fitted' OR (model IS NOT NULL AND reason IS NULL))
);

CREATE TABLE IF NOT EXISTS rate_kept(
  area   TEXT NOT NULL,
  period TEXT NOT NULL,  -- blank where rate_source gives none
  events NUMERIC,
  base   NUMERIC,
  per    NUMERIC,
  in_total INTEGER NOT NULL DEFAULT 0 CHECK (in_total IN (0, 1)),  -- has a count and a base
  hidden INTEGER NOT NULL DEFAULT 0 CHECK (hidden IN (0, 1)),
  PRIMARY KEY (area, period)
);

-- ---- Plain tables ----

CREATE TABLE IF NOT EXISTS published_model(
  name          TEXT PRIMARY KEY NOT NULL,
  -- fresh: of the last refresh; withheld: so is the fit, and it may not be given away; refused,
  -- lost: there is no newer fit, since the model was refused or model_source lost the name.
  status        TEXT NOT NULL CHECK (status IN ('fresh', 'withheld', 'refused', 'lost')),
  fitted_at     TEXT,     -- of the last sound fit; NULL when there was never one
  refused_since TEXT,     -- the first refresh without one
  reason        TEXT,     -- of every status but fresh
  title         TEXT,
  family        TEXT,
  response      TEXT,
  rows          INTEGER,  -- fitted
  rows_left_out INTEGER,
  r_squared     REAL,
  residual_sd   REAL,     -- on the scale of the fit
  median_absolute_error REAL,  -- in the response's own unit
  CHECK ((status = 'fresh') = (reason IS NULL))
);

CREATE TABLE IF NOT EXISTS published_text(
  name  TEXT PRIMARY KEY NOT NULL REFERENCES published_model DEFERRABLE INITIALLY DEFERRED,
  brief TEXT,
  model TEXT NOT NULL
);

CREATE TABLE IF NOT EXISTS published_facts(
  name     TEXT NOT NULL REFERENCES published_model,
  position INTEGER NOT NULL,
  fact     TEXT NOT NULL,
  value,   -- a number or a text
  PRIMARY KEY (name, position),
  UNIQUE (name, fact)
);

CREATE TABLE IF NOT EXISTS published_terms(
  name           TEXT NOT NULL REFERENCES published_model,
  position       INTEGER NOT NULL,
  term           TEXT NOT NULL,
  column_name    TEXT,
  category_level TEXT,
  transform      TEXT,
  coefficient    REAL,
  low            REAL,
  high           REAL,
  standard_error REAL,
  t              REAL,
  p_value        REAL,
  errors         TEXT,
  variance_inflation REAL,
  note           TEXT,
  PRIMARY KEY (name, position),
  UNIQUE (name, term)
);

CREATE TABLE IF NOT EXISTS published_effects(
  name        TEXT NOT NULL REFERENCES published_model,
  position    INTEGER NOT NULL,
  column_name TEXT NOT NULL,
  kind        TEXT NOT NULL,
  from_value,  -- a number, a date or a level
  to_value,
  effect      REAL,
  low         REAL,
  high        REAL,
  unit        TEXT,
  errors      TEXT,
  sentence    TEXT,
  PRIMARY KEY (name, position)
);
CREATE INDEX IF NOT EXISTS published_effects_column ON published_effects(name, column_name);

CREATE TABLE IF NOT EXISTS published_checks(
  name       TEXT NOT NULL REFERENCES published_model,
  position   INTEGER NOT NULL,
  check_name TEXT NOT NULL,
  status     TEXT NOT NULL CHECK (status IN ('fine', 'look', 'problem', 'not computed')),
  statistic  REAL,
  df         REAL,
  p_value    REAL,
  finding    TEXT,
  remedy     TEXT,
  PRIMARY KEY (name, position),
  UNIQUE (name, check_name)
);

CREATE TABLE IF NOT EXISTS published_cautions(
  name     TEXT NOT NULL REFERENCES published_model,
  position INTEGER NOT NULL,
  caution  TEXT NOT NULL,
  PRIMARY KEY (name, position)
);

CREATE TABLE IF NOT EXISTS published_changes(
  name      TEXT NOT NULL REFERENCES published_model,
  position  INTEGER NOT NULL,
  before_at TEXT NOT NULL,  -- of the fit before
  term      TEXT,           -- NULL where the sentence speaks of the whole
  before    REAL,
  after     REAL,
  change    REAL,
  status    TEXT NOT NULL,
  sentence  TEXT NOT NULL,
  PRIMARY KEY (name, position)
);

CREATE TABLE IF NOT EXISTS published_rates(
  area   TEXT NOT NULL,
  period TEXT NOT NULL,  -- blank where rate_source gives none
  hidden INTEGER NOT NULL CHECK (hidden IN (0, 1)),
  events NUMERIC,
  base   NUMERIC,
  per    NUMERIC,
  rate   REAL,
  low    REAL,
  high   REAL,
  ratio  REAL,           -- to the same period of the year before
  ratio_low  REAL,
  ratio_high REAL,
  ratio_p    REAL,
  PRIMARY KEY (area, period),
  CHECK (hidden = 0 OR coalesce(events, rate, low, high, ratio, ratio_low, ratio_high, ratio_p) IS NULL)
);
CREATE INDEX IF NOT EXISTS published_rates_period ON published_rates(period);

CREATE TABLE IF NOT EXISTS published_totals(
  period TEXT PRIMARY KEY NOT NULL,
  areas  INTEGER NOT NULL,
  hidden_areas INTEGER NOT NULL,
  events NUMERIC,
  base   NUMERIC,
  per    NUMERIC,
  rate   REAL,
  low    REAL,
  high   REAL
);

-- ---- Views ----

DROP VIEW IF EXISTS current_model;
CREATE VIEW current_model AS
SELECT f.name AS name, f.refresh AS refresh, r.at AS at, f.model AS model
FROM model_fit AS f JOIN model_refresh AS r ON r.refresh = f.refresh
WHERE f.status = 'fitted'
  AND f.refresh = (SELECT max(g.refresh) FROM model_fit AS g
                   WHERE g.name = f.name AND g.status = 'fitted');

DROP VIEW IF EXISTS fit_before;
CREATE VIEW fit_before AS
SELECT f.name AS name, f.refresh AS refresh, r.at AS at, f.model AS model
FROM current_model AS c
JOIN model_fit AS f ON f.name = c.name
JOIN model_refresh AS r ON r.refresh = f.refresh
WHERE f.refresh = (SELECT max(g.refresh) FROM model_fit AS g
                   WHERE g.name = c.name AND g.status = 'fitted' AND g.refresh < c.refresh);

-- A table-valued function takes its arguments from hidden columns too, a form that SQLite reads
-- since long before it knew functions in FROM.
DROP VIEW IF EXISTS live_facts;
CREATE VIEW live_facts AS
SELECT c.name AS name, t.* FROM current_model AS c CROSS JOIN model_facts AS t
WHERE t.argument_1 = c.model;

DROP VIEW IF EXISTS live_terms;
CREATE VIEW live_terms AS
SELECT c.name AS name, t.* FROM current_model AS c CROSS JOIN model_terms AS t
WHERE t.argument_1 = c.model;

DROP VIEW IF EXISTS live_effects;
CREATE VIEW live_effects AS
SELECT c.name AS name, t.* FROM current_model AS c CROSS JOIN model_effects AS t
WHERE t.argument_1 = c.model;

DROP VIEW IF EXISTS live_checks;
CREATE VIEW live_checks AS
SELECT c.name AS name, t.* FROM current_model AS c CROSS JOIN model_checks AS t
WHERE t.argument_1 = c.model;

DROP VIEW IF EXISTS live_cautions;
CREATE VIEW live_cautions AS
SELECT c.name AS name, t.* FROM current_model AS c CROSS JOIN model_cautions AS t
WHERE t.argument_1 = c.model;

DROP VIEW IF EXISTS live_changes;
CREATE VIEW live_changes AS
SELECT c.name AS name, t.*
FROM current_model AS c JOIN fit_before AS b ON b.name = c.name CROSS JOIN model_difference AS t
WHERE t.argument_1 = CASE WHEN model_flaw(b.model) IS NULL THEN b.model END
  AND t.argument_2 = c.model;

-- ---- The refresh ----

-- What a source gives is looked at as it comes in, before any constraint can put it less plainly.
DROP TRIGGER IF EXISTS model_fit_comes_in;
CREATE TRIGGER model_fit_comes_in BEFORE INSERT ON model_fit
BEGIN
  SELECT RAISE(ABORT, 'model_source gives a row without a name; every model needs one: SELECT name FROM model_source')
  WHERE typeof(NEW.name) <> 'text' OR trim(NEW.name) = '';
  SELECT RAISE(ABORT, 'model_source gives a name with blanks before or after it: SELECT name FROM model_source WHERE name <> trim(name)')
  WHERE NEW.name <> trim(NEW.name, ' ' || char(9, 10, 13));
  SELECT RAISE(ABORT, 'model_source gives a name twice: SELECT name, count(*) FROM model_source GROUP BY name HAVING count(*) > 1')
  WHERE EXISTS (SELECT 1 FROM model_fit WHERE name = NEW.name AND refresh = NEW.refresh);
END;

-- date() and datetime() take more than dates, and count on where a month has no such day.
DROP TRIGGER IF EXISTS model_refresh_comes_in;
CREATE TRIGGER model_refresh_comes_in BEFORE INSERT ON model_refresh
BEGIN
  SELECT RAISE(ABORT, 'model_refresh: at must be a date or a time like 2025-01-31 or 2025-01-31 18:00:00, in UTC')
  WHERE NEW.at NOT GLOB '[0-9][0-9][0-9][0-9]-[0-9][0-9]-[0-9][0-9]*' OR datetime(NEW.at) IS NULL
     OR date(julianday(substr(NEW.at, 1, 10))) <> substr(NEW.at, 1, 10);
  SELECT RAISE(ABORT, 'model_refresh: at is earlier than the last refresh: SELECT max(at) FROM model_refresh; where that one is wrong, correct it with UPDATE')
  WHERE EXISTS (SELECT 1 FROM model_refresh AS r
                WHERE CASE WHEN length(NEW.at) > 10 THEN datetime(NEW.at) ELSE NEW.at END
                      < substr(r.at, 1, CASE WHEN length(NEW.at) > 10 THEN 19 ELSE 10 END));
END;

DROP TRIGGER IF EXISTS rate_kept_comes_in;
CREATE TRIGGER rate_kept_comes_in BEFORE INSERT ON rate_kept
BEGIN
  SELECT RAISE(ABORT, 'rate_source gives a row without an area: SELECT * FROM rate_source WHERE area IS NULL OR trim(area) = ''''')
  WHERE NEW.area IS NULL OR trim(NEW.area) = '';
  SELECT RAISE(ABORT, 'rate_source gives a count that is no whole number of at least 0: SELECT * FROM rate_source WHERE coalesce(number_or_null(events) >= 0 AND number_or_null(events) = CAST(events AS INTEGER), 0) = 0')
  WHERE trim(coalesce(NEW.events, '')) <> ''
    AND coalesce(number_or_null(NEW.events) >= 0
                 AND number_or_null(NEW.events) = CAST(NEW.events AS INTEGER), 0) = 0;
  SELECT RAISE(ABORT, 'rate_source gives an area twice in a period: SELECT area, period, count(*) FROM rate_source GROUP BY 1, 2 HAVING count(*) > 1')
  WHERE EXISTS (SELECT 1 FROM rate_kept WHERE area = NEW.area AND period = NEW.period);
END;

DROP TRIGGER IF EXISTS model_refresh_runs;
CREATE TRIGGER model_refresh_runs AFTER INSERT ON model_refresh
BEGIN
  -- First, so that a program without the extension is told what it lacks.
  UPDATE model_refresh
  SET made_by = ladderline_version(),
      at = CASE WHEN length(at) > 10 THEN datetime(at) ELSE at END
  WHERE refresh = NEW.refresh;
  SELECT RAISE(ABORT, 'release_rule has lost its row: INSERT INTO release_rule VALUES (1, 5)')
  WHERE NOT EXISTS (SELECT 1 FROM release_rule);

  -- Every model is fitted once, here; what is asked of it is asked of the text that was kept.
  INSERT INTO model_fit(refresh, name, status, model)
  SELECT NEW.refresh, name, 'refused', model FROM model_source;
  SELECT RAISE(ABORT, 'model_source gives no rows: SELECT name FROM model_source')
  WHERE NOT EXISTS (SELECT 1 FROM model_fit WHERE refresh = NEW.refresh);
  UPDATE model_fit
  SET reason = coalesce(model_flaw(model), model_problem(model)),
      status = CASE WHEN coalesce(model_flaw(model), model_problem(model)) IS NULL
                    THEN 'fitted' ELSE 'refused' END,
      model  = CASE WHEN model_flaw(model) IS NULL THEN model END
  WHERE refresh = NEW.refresh;
  -- Where an earlier fit has to stand in, it must be one that can be read.
  UPDATE model_fit
  SET reason = coalesce(model_flaw(model), model_problem(model)),
      status = CASE WHEN coalesce(model_flaw(model), model_problem(model)) IS NULL
                    THEN 'fitted' ELSE 'unreadable' END
  WHERE refresh < NEW.refresh AND status IN ('fitted', 'unreadable')
    AND name NOT IN (SELECT name FROM model_fit WHERE refresh = NEW.refresh AND status = 'fitted')
    AND (status = 'fitted') <> (coalesce(model_flaw(model), model_problem(model)) IS NULL);

  DELETE FROM published_facts;
  DELETE FROM published_terms;
  DELETE FROM published_effects;
  DELETE FROM published_checks;
  DELETE FROM published_cautions;
  DELETE FROM published_changes;
  DELETE FROM published_text;
  DELETE FROM published_model;

  INSERT INTO published_text(name, model)
  SELECT c.name, model_for_release(c.model, r.floor)
  FROM current_model AS c CROSS JOIN release_rule AS r;
  -- Reasons are given away too: in the form for release they count no few rows, and they quote
  -- nothing of what a view gave in place of a model.
  INSERT INTO published_model
  SELECT s.name,
         CASE WHEN s.lost THEN 'lost' WHEN s.why IS NOT NULL THEN 'refused'
              WHEN s.withheld IS NOT NULL THEN 'withheld' ELSE 'fresh' END,
         s.fitted_at,
         CASE WHEN s.lost OR s.why IS NOT NULL
              THEN (SELECT r.at FROM model_refresh AS r
                    WHERE r.refresh > coalesce(s.sound, (SELECT min(g.refresh) - 1 FROM model_fit AS g
                                                         WHERE g.name = s.name))
                    ORDER BY r.refresh LIMIT 1) END,
         CASE WHEN s.lost OR s.why IS NOT NULL
              THEN CASE WHEN s.lost
                        THEN 'model_source no longer gives this name' || coalesce('; ' || s.why, '')
                        ELSE s.why END
                   || coalesce('; the last sound fit is ' || s.withheld, '')
              ELSE s.withheld END,
         fact(s.model, 'name'), fact(s.model, 'family'), fact(s.model, 'response'),
         fact(s.model, 'rows_fitted'), fact(s.model, 'rows_left_out'), fact(s.model, 'r_squared'),
         fact(s.model, 'residual_sd'), fact(s.model, 'median_absolute_error')
  FROM (SELECT f.name AS name, f.refresh < NEW.refresh AS lost, c.refresh AS sound,
               c.at AS fitted_at,
               CASE WHEN model_problem(m.model) IS NULL THEN m.model END AS model,
               CASE WHEN m.model IS NOT NULL THEN model_problem(m.model) END AS withheld,
               CASE WHEN f.status = 'unreadable' THEN 'the fit kept last cannot be read'
                    WHEN f.status = 'refused' AND f.model IS NULL
                    THEN CASE WHEN f.refresh = NEW.refresh
                              THEN 'model_source gives no model under this name' END
                    WHEN f.status = 'refused'
                    THEN model_problem(model_for_release(f.model, r.floor)) END AS why
        FROM model_fit AS f
        CROSS JOIN release_rule AS r
        LEFT JOIN current_model AS c ON c.name = f.name
        LEFT JOIN published_text AS m ON m.name = f.name
        WHERE f.refresh = (SELECT max(g.refresh) FROM model_fit AS g WHERE g.name = f.name)) AS s;
  DELETE FROM published_text WHERE model_problem(model) IS NOT NULL;
  UPDATE published_text SET brief = model_brief(model);

  INSERT INTO published_facts(name, position, fact, value)
  SELECT m.name, t.rowid, t.fact, t.value
  FROM published_text AS m CROSS JOIN model_facts AS t WHERE t.argument_1 = m.model;
  INSERT INTO published_terms
  SELECT m.name, t.* FROM published_text AS m CROSS JOIN model_terms AS t WHERE t.argument_1 = m.model;
  INSERT INTO published_effects
  SELECT m.name, t.* FROM published_text AS m CROSS JOIN model_effects AS t WHERE t.argument_1 = m.model;
  INSERT INTO published_checks
  SELECT m.name, t.* FROM published_text AS m CROSS JOIN model_checks AS t WHERE t.argument_1 = m.model;
  INSERT INTO published_cautions(name, position, caution)
  SELECT m.name, t.rowid, t.caution
  FROM published_text AS m CROSS JOIN model_cautions AS t WHERE t.argument_1 = m.model;

  INSERT INTO published_changes
  SELECT m.name, t.rowid, b.at, t.term, t.before, t.after, t.change, t.status, t.sentence
  FROM published_text AS m
  JOIN fit_before AS b ON b.name = m.name
  CROSS JOIN release_rule AS r
  CROSS JOIN model_difference AS t
  WHERE t.argument_1 = CASE WHEN model_flaw(b.model) IS NULL
                            THEN model_for_release(b.model, r.floor) END
    AND t.argument_2 = m.model;

  -- Rates. A cell is hidden when it has fewer cases than the floor, or when the cells hidden so far
  -- would follow from the total; so is what would lead back to it. Cells without a count or a base
  -- are in no total: a base of 0 tells the count, and a rate needs both.
  DELETE FROM rate_kept;
  INSERT INTO rate_kept(area, period, events, base, per)
  SELECT area, coalesce(period, ''), events, base, per FROM rate_source;
  UPDATE rate_kept SET in_total = 1
  WHERE typeof(events) = 'integer' AND typeof(base) IN ('integer', 'real') AND base > 0;
  UPDATE rate_kept SET hidden = 1
  WHERE rowid IN (SELECT k.rowid
                  FROM rate_kept AS k
                  JOIN (SELECT s.period AS period, r.floor AS floor,
                               suppression_floor(CASE WHEN s.in_total THEN s.events END, r.floor) AS least
                        FROM rate_kept AS s CROSS JOIN release_rule AS r GROUP BY s.period, r.floor) AS t
                    ON t.period = k.period
                  WHERE k.events < CASE WHEN k.in_total THEN t.least ELSE t.floor END);

  DELETE FROM published_rates;
  INSERT INTO published_rates
  SELECT k.area, k.period, k.hidden, CASE WHEN k.hidden = 0 THEN k.events END, k.base, k.per,
         rate_per(s.events, s.base, s.per), rate_low(s.events, s.base, s.per),
         rate_high(s.events, s.base, s.per),
         rate_ratio(s.events, s.base, e.events, e.base),
         rate_ratio_low(s.events, s.base, e.events, e.base),
         rate_ratio_high(s.events, s.base, e.events, e.base),
         rate_ratio_p(s.events, s.base, e.events, e.base)
  FROM rate_kept AS k
  LEFT JOIN rate_kept AS s ON s.rowid = k.rowid AND s.hidden = 0
  LEFT JOIN rate_kept AS e
    ON e.area = k.area AND e.hidden = 0
   AND e.period = printf('%04d', CAST(substr(k.period, 1, 4) AS INTEGER) - 1) || substr(k.period, 5);

  DELETE FROM published_totals;
  INSERT INTO published_totals
  SELECT t.period, t.areas, t.hidden_areas, t.events, t.base, t.per,
         rate_per(t.events, t.base, t.per), rate_low(t.events, t.base, t.per),
         rate_high(t.events, t.base, t.per)
  FROM (SELECT period, sum(in_total) AS areas, sum(hidden) AS hidden_areas,
               CASE WHEN sum(CASE WHEN in_total THEN events END) >= (SELECT floor FROM release_rule)
                    THEN sum(CASE WHEN in_total THEN events END) END AS events,
               sum(CASE WHEN in_total THEN base END) AS base,
               CASE WHEN min(per) = max(per) THEN max(per) END AS per
        FROM rate_kept GROUP BY period) AS t;
END;

COMMIT;
