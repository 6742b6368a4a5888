-- Writes one HTML page about the models and rates that a database keeps.
--
-- Needs:  the published tables of sql/keep_models.sql after a refresh, in the database itself or in a
--         copy that has them alone, and the extension. Reading is enough. In the folder where the page
--         is to be:
--           sqlite3 -readonly -cmd '.load …/ladderline' records.db < …/sql/page.sql
--         Without -readonly the shell makes an empty file of a name that is not there.
-- Leaves: models_and_rates.html in that folder, written anew by each run. The database is not
--         touched. The page asks for nothing else: no network, no program, no other file. It shows
--         what is in the published tables alone, and so is in the form for release.

.bail on
.headers off
.mode list

CREATE TEMP TABLE page_needs(
  extension INTEGER CONSTRAINT "the extension is not loaded; start sqlite3 with -cmd '.load …/ladderline', the path to the module" CHECK (extension),
  tables    INTEGER CONSTRAINT "no published tables in this database; is it the right file? sql/keep_models.sql makes them" CHECK (tables)
);
INSERT INTO page_needs
SELECT EXISTS (SELECT 1 FROM pragma_function_list WHERE name = 'ladderline_version'),
       EXISTS (SELECT 1 FROM sqlite_schema WHERE name = 'published_model');

-- The page's pieces in the order of writing: 0 is its head, 1, 2 … the models, then the rates.
CREATE TEMP TABLE page_piece(
  section INTEGER NOT NULL,
  piece   INTEGER NOT NULL,
  html    TEXT,  -- NULL: there is nothing to show
  PRIMARY KEY (section, piece)
);

CREATE TEMP TABLE page_model AS
SELECT row_number() OVER (ORDER BY p.name) AS section, p.name AS name, p.status AS status,
       p.fitted_at || substr(' UTC', 1, 4 * (length(p.fitted_at) > 10)) AS fitted_at,
       p.refused_since || substr(' UTC', 1, 4 * (length(p.refused_since) > 10)) AS refused_since,
       p.reason AS reason,
       t.model AS model, model_brief(t.model, 'html') AS brief, c.column_name AS response, c.transform AS transform,
       c.column_name || coalesce(' (' || c.unit || ')', '') AS measured,
       CASE c.transform WHEN 'identity' THEN '' WHEN 'date_days' THEN ''
            ELSE ', re-expressed by ' || c.transform END AS on_scale,
       CASE c.transform WHEN 'date_days' THEN ', in days since 1970-01-01' ELSE '' END AS as_days
FROM published_model AS p
LEFT JOIN published_text AS t ON t.name = p.name
LEFT JOIN model_columns AS c ON c.argument_1 = t.model AND c.role = 'response';

-- ---- Head ----

INSERT INTO page_piece VALUES (0, 1, '<!DOCTYPE html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta http-equiv="Content-Security-Policy" content="default-src ''none''; style-src ''unsafe-inline''">
<title>Models and rates</title>
<style>
:root { color-scheme: light dark; --line: #8886; --chart-mark: #2f7ec2 }
body { font: 1rem/1.5 system-ui, sans-serif; max-width: 70rem; margin: 0 auto; padding: 1rem; overflow-wrap: break-word }
h1 { font-size: 1.7rem; line-height: 1.2 }
h2 { font-size: 1.35rem; line-height: 1.25; margin: 0 0 .75rem }
h3 { font-size: 1.05rem; margin: 1.5rem 0 .5rem }
p, ul { max-width: 46rem; margin: .5rem 0 }
section { border-top: 1px solid var(--line); padding: 1.5rem 0 }
ul { padding-left: 1.25rem }
.small, figcaption, table { font-size: .875rem }
.notice { border-left: .25rem solid var(--chart-mark); padding-left: .75rem }
.figures { columns: 20rem; column-gap: 2rem }
figure { break-inside: avoid; margin: 0 0 1.75rem }
figcaption { max-width: 32rem; padding: .25rem .5rem }
.wide { overflow-x: auto }
table { border-collapse: collapse; margin: .5rem 0 }
th, td { padding: .25rem .6rem .25rem 0; text-align: left; vertical-align: top; border-bottom: 1px solid var(--line) }
th[scope="row"], td[dir] { overflow-wrap: anywhere; min-width: 7rem; max-width: 24rem }
.number { text-align: right; font-variant-numeric: tabular-nums }
.number span, data { white-space: nowrap }
summary { margin: 1rem 0 .5rem; font-weight: 600 }
</style>
</head>
<body>
<main>
<h1>Models and rates</h1>');

INSERT INTO page_piece
SELECT 0, 2, coalesce('<p class="small">As of the refresh of ' || html_text(max(fitted_at)) || '.</p>',
                      '<p>No model is kept here yet.</p>')
FROM page_model;

INSERT INTO page_piece
SELECT 0, 3, '<nav aria-label="Parts of this page"><ul>' || group_concat(item, '') || '</ul></nav>'
FROM (SELECT '<li><a href="#part-' || section || '">' || html_text(name) || '</a></li>' AS item
      FROM (SELECT section, name FROM page_model ORDER BY section)
      UNION ALL
      SELECT '<li><a href="#rates">Rates by area</a></li>' WHERE EXISTS (SELECT 1 FROM published_rates));

-- ---- Models ----

INSERT INTO page_piece
SELECT section, 1, '<section id="part-' || section || '"><h2>' || html_text(name) || '</h2>' FROM page_model;

INSERT INTO page_piece
SELECT section, 2,
       '<p class="notice">'
       || CASE WHEN status = 'withheld' THEN 'The fit is withheld'
               WHEN model IS NULL THEN 'There is no sound fit'
               ELSE 'This is an earlier fit: there is no newer one' END
       || coalesce(' since ' || html_text(refused_since), '')
       || coalesce(': ' || html_text(reason), '') || '.</p>'
FROM page_model WHERE status <> 'fresh';

-- The brief begins with a heading of its own. Models of several groups share it, so it becomes a
-- line under the name.
INSERT INTO page_piece
SELECT section, 3, '<p class="small">' || substr(brief, 5, instr(brief, '</h2>') - 5)
       || coalesce('; fitted at the refresh of ' || html_text(fitted_at), '') || '.</p>'
       || substr(brief, instr(brief, '</h2>') + 5)
FROM page_model WHERE model IS NOT NULL;

INSERT INTO page_piece
SELECT section, 10, '<h3>Pictures</h3><div class="figures">' FROM page_model WHERE model IS NOT NULL;

INSERT INTO page_piece
SELECT section, 11, '<figure>' || svg || '<figcaption>For each measure, its upper quartile against its lower '
       || 'one, the others held.</figcaption></figure>'
FROM (SELECT section,
             (SELECT chart_intervals('From low to high of each measure', axis, item, effect, low, high)
              FROM (SELECT 'difference in ' || m.response || coalesce(', ' || e.unit, '') AS axis,
                           column_name || ': ' || rtrim(replace(from_value || ' ', '.0 ', ''))
                           || ' to ' || rtrim(replace(to_value || ' ', '.0 ', '')) AS item,
                           effect, low, high
                    FROM published_effects AS e
                    WHERE e.name = m.name AND kind = 'quartiles' ORDER BY position)) AS svg
      FROM page_model AS m);

-- A re-expressed response has levels in percent, a plain one in its own unit.
INSERT INTO page_piece
SELECT section, 12, '<figure>' || svg || '<figcaption>Each level of a category against its reference, the '
       || 'measures held.</figcaption></figure>'
FROM (SELECT section,
             (SELECT chart_intervals('Levels of categories', axis, item, effect, low, high)
              FROM (SELECT 'difference in ' || m.response || coalesce(', ' || e.unit, '') AS axis,
                           column_name || ': ' || to_value || ' against ' || from_value AS item,
                           effect, low, high
                    FROM published_effects AS e
                    WHERE e.name = m.name AND kind = 'level' ORDER BY position)) AS svg
      FROM page_model AS m);

INSERT INTO page_piece
SELECT section, 13, '<figure>' || svg || '</figure>'
FROM (SELECT section,
             (SELECT chart_histogram('How ' || m.response || ' is spread'
                                     || CASE m.on_scale WHEN '' THEN '' ELSE ' as it came' END,
                                     m.measured || m.as_days, coalesce(date_days(low), low),
                                     coalesce(date_days(high), high), rows)
              FROM model_histogram AS h
              WHERE h.argument_1 = m.model AND scale = 'original') AS svg
      FROM page_model AS m);

INSERT INTO page_piece
SELECT section, 14, '<figure>' || svg || '</figure>'
FROM (SELECT section,
             (SELECT chart_histogram('How ' || m.response || ' is spread as fitted', m.measured || m.on_scale, low, high,
                                     rows)
              FROM model_histogram AS h
              WHERE h.argument_1 = m.model AND scale = 're-expressed') AS svg
      FROM page_model AS m);

INSERT INTO page_piece
SELECT section, 15, '<figure>' || svg || '<figcaption>Mean residual of cases with like fitted values, and one '
       || 'standard deviation to both sides. Level and even is well; a bend is a curve that was missed, '
       || 'growing bars are a funnel.</figcaption></figure>'
FROM (SELECT section,
             (SELECT chart_points('Residuals against fitted values', 'fitted ' || m.response || m.on_scale || m.as_days,
                                  'residual', fitted_low + (fitted_high - fitted_low) / 2, mean, 0,
                                  mean - sd, mean + sd)
              FROM model_residual_bins AS r WHERE r.argument_1 = m.model AND rows > 0) AS svg
      FROM page_model AS m);

INSERT INTO page_piece
SELECT section, 16, '<figure>' || svg || '<figcaption>Quantiles of the residuals. Normal ones lie on the dashed '
       || 'line; ends that leave it are tails longer or shorter than normal.</figcaption></figure>'
FROM (SELECT section,
             (SELECT chart_points('Probability plot of residuals', 'normal score',
                                  'residual of ' || m.response || m.on_scale,
                                  normal_score, residual, normal_score * fact(m.model, 'residual_sd'))
              FROM model_residual_quantiles AS q WHERE q.argument_1 = m.model) AS svg
      FROM page_model AS m);

INSERT INTO page_piece
SELECT section, 19, '</div>' FROM page_model WHERE model IS NOT NULL;

INSERT INTO page_piece
SELECT section, 20,
       (SELECT '<h3>What changed since the fit of ' || html_text(min(before_at))
               || substr(' UTC', 1, 4 * (length(min(before_at)) > 10)) || '</h3><ul>'
               || coalesce(group_concat('<li>' || html_text(sentence) || '</li>', '')
                             FILTER (WHERE status NOT IN ('steady', 'same')), '')
               || CASE count(*) FILTER (WHERE stayed) WHEN 0 THEN ''
                  ELSE '<li>Coefficients that stayed inside the limits they had: '
                       || count(*) FILTER (WHERE stayed) || '.</li>' END
               || '</ul>'
        FROM (SELECT *, status IN ('steady', 'same')
                        AND term IN (SELECT t.term FROM published_terms AS t WHERE t.name = m.name) AS stayed
              FROM published_changes AS c WHERE c.name = m.name ORDER BY position)
        HAVING count(*) > 0)
FROM page_model AS m;

-- Checks that were not computed for one reason stand together.
INSERT INTO page_piece
SELECT section, 21,
       (SELECT '<details><summary>All checks</summary><ul class="small">'
               || group_concat('<li>' || checks || ': ' || said || coalesce(html_text(finding), '') || '</li>', '')
               || '</ul></details>'
        FROM (SELECT group_concat('<b>' || html_text(check_name) || '</b>', ', ') AS checks,
                     CASE status WHEN 'not computed' THEN ''
                          ELSE html_text(status) || coalesce(', p = ' || html_number(p_value), '') || '. ' END
                     AS said, finding
              FROM (SELECT * FROM published_checks AS c WHERE c.name = m.name ORDER BY position)
              GROUP BY CASE status WHEN 'not computed' THEN finding ELSE position END
              ORDER BY min(position))
        HAVING count(*) > 0)
FROM page_model AS m;

INSERT INTO page_piece
SELECT section, 22,
       (SELECT '<details><summary>All coefficients</summary><p class="small">On the scale of the fit'
               || html_text(m.on_scale) || '.</p><div class="wide" role="group" tabindex="0" '
               || 'aria-label="All coefficients"><table><thead><tr><th scope="col">Term</th>'
               || '<th scope="col" class="number">Coefficient</th><th scope="col" class="number">from</th>'
               || '<th scope="col" class="number">to</th><th scope="col" class="number">p</th>'
               || '<th scope="col">Note</th></tr></thead><tbody>'
               || group_concat('<tr><th scope="row" dir="auto">' || html_text(term)
                               || '</th><td class="number">' || coalesce(html_number(coefficient), '')
                               || '</td><td class="number">' || coalesce(html_number(low), '')
                               || '</td><td class="number">' || coalesce(html_number(high), '')
                               || '</td><td class="number">' || coalesce(html_number(p_value), '')
                               || '</td><td dir="auto">' || coalesce(html_text(note), '') || '</td></tr>', '')
               || '</tbody></table></div></details>'
        FROM (SELECT * FROM published_terms AS t WHERE t.name = m.name ORDER BY position)
        HAVING count(*) > 0)
FROM page_model AS m;

INSERT INTO page_piece SELECT section, 99, '</section>' FROM page_model;

-- ---- Rates of the latest period, and of all areas over time ----

CREATE TEMP TABLE page_rates AS
SELECT (SELECT count(*) FROM page_model) + 1 AS section, max(period) AS period,
       CASE max(period) WHEN '' THEN '' ELSE ' in ' || max(period) END AS in_period
FROM published_rates HAVING count(*) > 0;

INSERT INTO page_piece
SELECT section, 1, '<section id="rates"><h2>Rates by area' || html_text(in_period) || '</h2>' FROM page_rates;

INSERT INTO page_piece
SELECT section, 2, '<p>Not shown, as too few cases stand behind them or they would give such away: '
                   || (SELECT group_concat(area, ', ')
                       FROM (SELECT html_text(area) AS area FROM published_rates AS r
                             WHERE r.period = p.period AND hidden = 1 ORDER BY 1)) || '.</p>'
FROM page_rates AS p;

INSERT INTO page_piece SELECT section, 3, '<div class="figures">' FROM page_rates;

-- Areas that are counted per something else have a chart of their own.
INSERT INTO page_piece
SELECT section, 3 + row_number() OVER (ORDER BY per), '<figure>' || svg || '</figure>'
FROM (SELECT section, per,
             (SELECT chart_intervals('Rates by area' || p.in_period,
                                     'cases per ' || rtrim(replace(per || ' ', '.0 ', ''))
                                     || ', with 95% limits', area, rate, low, high)
              FROM (SELECT * FROM published_rates AS r
                    WHERE r.period = p.period AND r.hidden = 0 AND r.per = k.per
                    ORDER BY rate DESC, area)) AS svg
      FROM page_rates AS p JOIN (SELECT DISTINCT period, per FROM published_rates) AS k USING (period)
      LIMIT 20);

INSERT INTO page_piece
SELECT section, 30,
       (SELECT '<figure>' || chart_intervals('All areas together',
                                             'cases per ' || rtrim(replace(t.per || ' ', '.0 ', ''))
                                             || ', with 95% limits', t.period, rate, low, high)
               || '</figure>'
        FROM (SELECT * FROM published_totals WHERE rate IS NOT NULL AND per = (
                SELECT per FROM published_totals AS latest WHERE latest.period = p.period)
              ORDER BY period DESC LIMIT 24) AS t)
FROM page_rates AS p WHERE period <> '';

INSERT INTO page_piece SELECT section, 39, '</div>' FROM page_rates;

INSERT INTO page_piece
SELECT section, 40,
       (SELECT '<p class="small">Ratio: to the same period of the year before, with 95% limits.</p>'
               || '<div class="wide" role="group" tabindex="0" aria-label="Rates as a table"><table>'
               || '<thead><tr><th scope="col">Area</th><th scope="col" class="number">Cases</th>'
               || '<th scope="col" class="number">Base</th><th scope="col" class="number">Rate</th>'
               || '<th scope="col" class="number">Ratio</th></tr></thead><tbody>'
               || group_concat('<tr><th scope="row" dir="auto">' || html_text(area) || '</th>'
                    || CASE WHEN hidden = 1
                       THEN '<td class="number">not shown</td><td class="number">'
                            || coalesce(html_number(base), '') || '</td><td class="number">not shown</td>'
                            || '<td class="number"></td>'
                       ELSE '<td class="number">' || coalesce(html_number(events), '')
                            || '</td><td class="number">' || coalesce(html_number(base), '')
                            || '</td><td class="number">' || coalesce(html_number(rate), '')
                            || coalesce(' <span>(' || html_number(low) || ' to ' || html_number(high)
                                        || ')</span>', '')
                            || '</td><td class="number">' || coalesce(html_number(ratio), '')
                            || coalesce(' <span>(' || html_number(ratio_low) || ' to '
                                        || html_number(ratio_high) || ')</span>', '') || '</td>' END
                    || '</tr>', '')
               || '</tbody></table></div>'
        FROM (SELECT * FROM published_rates AS r WHERE r.period = p.period ORDER BY area))
FROM page_rates AS p;

INSERT INTO page_piece SELECT section, 99, '</section>' FROM page_rates;

INSERT INTO page_piece
SELECT 1 + coalesce(max(section), 0), 1, '</main></body></html>' FROM page_piece;

.once models_and_rates.html
SELECT html FROM page_piece WHERE html IS NOT NULL ORDER BY section, piece;
.print 'Written: models_and_rates.html'
