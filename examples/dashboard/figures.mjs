// The figures of the dashboard, read in two ways that must agree.
import Database from 'better-sqlite3';

// Plain tables, as the last refresh left them; without the extension.
export function plainFigures(path) {
  const db = new Database(path, { readonly: true, fileMustExist: true });
  const model = db.prepare('SELECT * FROM published_model WHERE name = ?');
  const effects = db.prepare(`
      SELECT column_name, kind, from_value, to_value, effect, low, high, unit, sentence
      FROM published_effects WHERE name = ? AND kind <> 'rule_of_thumb' ORDER BY position`);
  const cautions = db.prepare(
      'SELECT caution FROM published_cautions WHERE name = ? ORDER BY position').pluck();
  const areaRates = db.prepare(`
      SELECT period, hidden, events, rate, low, high
      FROM published_rates WHERE area = ? ORDER BY period`);
  const totalRates = db.prepare(`
      SELECT period, events IS NULL AS hidden, events, rate, low, high
      FROM published_totals ORDER BY period`);
  const areas = db.prepare('SELECT DISTINCT area FROM published_rates ORDER BY area').pluck();
  return {
    db,
    areas: () => areas.all(),
    // In one transaction, so that a refresh in between does not mix old figures with new ones.
    of: db.transaction((area) => ({
      model: model.get(modelName(area)) ?? null,
      effects: effects.all(modelName(area)),
      cautions: cautions.all(modelName(area)),
      rates: area ? areaRates.all(area) : totalRates.all(),
    })),
  };
}

// Computed on each call, from the newest sound fits and from the records as they are now; the
// extension is loaded. The rule for small numbers holds here too: models in the form for release,
// nothing of one that has none, small cells of rates hidden. Yet this side is for the office alone:
// it moves with every case, and a hidden count may follow from two looks, or from one beside
// plainFigures. What goes outside comes from plainFigures.
export function liveFigures(path, module) {
  const db = new Database(path, { readonly: true, fileMustExist: true });
  db.loadExtension(module);
  const effects = db.prepare(`
      SELECT e.column_name, e.kind, e.from_value, e.to_value, e.effect, e.low, e.high, e.unit,
             e.sentence
      FROM current_model AS m, release_rule AS r,
           model_effects(model_for_release(m.model, r.floor)) AS e
      WHERE m.name = ? AND e.kind <> 'rule_of_thumb' ORDER BY e.position`);
  // As in the refresh: what has no count or no base is in no total.
  const counted = `(SELECT * FROM rate_source
                    WHERE typeof(events) = 'integer' AND typeof(base) IN ('integer', 'real') AND base > 0)`;
  const rates = `period, hidden, events, rate_per(events, base, per) AS rate,
                 rate_low(events, base, per) AS low, rate_high(events, base, per) AS high`;
  const areaRates = db.prepare(`
      WITH judged AS (
        SELECT area, period, events, base, per,
               events < suppression_floor(events, (SELECT floor FROM release_rule))
                          OVER (PARTITION BY period) AS hidden
        FROM ${counted}
      ), shown AS (
        SELECT area, period, hidden, iif(hidden, NULL, events) AS events, base, per FROM judged
      )
      SELECT ${rates} FROM shown WHERE area = ? ORDER BY period`);
  const totalRates = db.prepare(`
      WITH total AS (
        SELECT period, sum(events) AS events, sum(base) AS base, per FROM ${counted} GROUP BY period
      ), shown AS (
        SELECT period, events < floor AS hidden, iif(events < floor, NULL, events) AS events, base, per
        FROM total, release_rule
      )
      SELECT ${rates} FROM shown ORDER BY period`);
  return {
    db,
    of: db.transaction((area) => ({
      effects: effects.all(modelName(area)),
      rates: area ? areaRates.all(area) : totalRates.all(),
    })),
  };
}

// prepare.sql names the models so. No area: all districts.
function modelName(area) {
  return area ? `cost in ${area}` : 'cost';
}
