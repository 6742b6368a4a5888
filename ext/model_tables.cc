// Table-valued functions against a model: terms, effects, facts, columns, tests, checks,
// influence, predictions.
#include <cmath>
#include <string>

#include "core/checks/findings.h"
#include "core/effects/effects.h"
#include "core/effects/sentences.h"
#include "core/model/model_errors.h"
#include "core/normality/normal_scores.h"
#include "core/support/distributions.h"
#include "ext/function_tables.h"
#include "ext/model_argument.h"
#include "ext/model_facts.h"

namespace ladderline {
namespace {

Cell Position(size_t i) { return static_cast<std::int64_t>(i + 1); }

// The model of argument 0 if it is fitted: the others have no rows.
const Model* SoundModel(const TableCall& call) {
  const ModelInHand* model = TableModelArgument(call);
  return model == nullptr || !model->predictor ? nullptr : &model->model();
}

// A raw value: a number, a date's text for date_days.
Cell RawCell(const ModelColumn& column, double value) {
  if (std::isnan(value)) return {};
  if (column.IsDate()) return RawValueText(column, value);
  return value;
}

// ---- model_terms ----

// The kind of errors that argument `i` names, the model's own without it.
ErrorKind ErrorsArgument(const TableCall& call, int i, const Model& model) {
  if (!call.Has(i) || call.IsNull(i)) return model.errors;
  const std::optional<ErrorKind> kind = ErrorKindFromName(*call.Text(i));
  if (kind && OffersErrors(model, *kind)) return *kind;
  std::string names;
  for (size_t k = 0; k < kErrorKinds; ++k) {
    if (OffersErrors(model, static_cast<ErrorKind>(k)))
      names += (names.empty() ? "" : ", ") + std::string(kErrorKindNames[k]);
  }
  call.ThrowBad(i, "must be one of " + names);
}

struct TermPlace {
  Cell column, level, transform;
};
TermPlace PlaceOf(const ModelTerm& term, const Model& model) {
  if (term.factors.empty()) return {};
  const auto joined = [&](auto&& text_of) {
    std::string text;
    for (const Factor& factor : term.factors) {
      const std::string part = text_of(factor, model.columns[static_cast<size_t>(factor.column)]);
      if (!part.empty()) text += (text.empty() ? "" : " by ") + part;
    }
    return TextOrNull(text);
  };
  const int of = ColumnOf(term, model.columns);
  return {of < 0 ? Cell() : Cell(model.columns[static_cast<size_t>(of)].name),
          joined([](const Factor& factor, const ModelColumn& column) {
            return factor.level < 0 ? std::string()
                                    : column.levels[static_cast<size_t>(factor.level)].text;
          }),
          joined([](const Factor& factor, const ModelColumn& column) {
            return factor.level < 0 ? column.transform.spec() : std::string();
          })};
}

std::vector<TableRow> TermRows(const TableCall& call) {
  const Model* model = SoundModel(call);
  if (model == nullptr) return {};
  const double level = call.Has(1) ? LevelArgument(call, 1).value_or(model->level) : model->level;
  const ErrorKind errors = ErrorsArgument(call, 2, *model);
  const double df = ErrorDf(*model, errors), critical = StudentTCritical(level, df);
  const std::string caution = ErrorNote(*model, errors);
  std::vector<TableRow> rows;
  for (size_t i = 0; i < model->terms.size(); ++i) {
    const ModelTerm& term = model->terms[i];
    std::string note = term.note;
    if (!caution.empty() && !std::isnan(term.coefficient))
      note += (note.empty() ? "" : "; ") + caution;
    const double b = term.coefficient, se = term.standard_error[static_cast<size_t>(errors)];
    const double t = b / se;
    TermPlace place = PlaceOf(term, *model);
    rows.push_back({Position(i), term.name, std::move(place.column), std::move(place.level),
                    std::move(place.transform), b, b - critical * se, b + critical * se, se, t,
                    StudentTTwoSided(t, df),
                    std::string(kErrorKindNames[static_cast<size_t>(errors)]),
                    term.variance_inflation, TextOrNull(note)});
  }
  return rows;
}

// ---- model_effects ----

Cell PlaceCell(const ModelColumn& column, const RawPlace& place) {
  if (place.level >= 0) return column.levels[static_cast<size_t>(place.level)].text;
  return RawCell(column, place.number);
}

std::vector<TableRow> EffectRows(const TableCall& call) {
  const ModelInHand* in_hand = TableModelArgument(call);
  if (in_hand == nullptr || !in_hand->predictor) return {};
  const Model& model = in_hand->model();
  const double level = call.Has(1) ? LevelArgument(call, 1).value_or(model.level) : model.level;
  const ErrorKind errors = ErrorsArgument(call, 2, model);
  const std::vector<Effect> effects = EffectsOf(*in_hand->predictor, level, errors);
  std::vector<TableRow> rows;
  for (size_t i = 0; i < effects.size(); ++i) {
    const Effect& effect = effects[i];
    const ModelColumn& column = model.columns[static_cast<size_t>(effect.column)];
    const bool percent = effect.unit == EffectUnit::kPercent;
    rows.push_back({Position(i), EffectColumnName(model, effect),
                    std::string(kEffectKindNames[static_cast<size_t>(effect.kind)]),
                    PlaceCell(column, effect.from), PlaceCell(column, effect.to), effect.effect,
                    effect.low, effect.high,
                    percent ? Cell(std::string("percent")) : TextOrNull(ResponseUnit(model)),
                    std::string(kErrorKindNames[static_cast<size_t>(errors)]),
                    EffectSentence(model, effect, level, errors)});
  }
  return rows;
}

// ---- model_facts ----

std::vector<TableRow> FactRows(const TableCall& call) {
  const ModelInHand* model = TableModelArgument(call);
  if (model == nullptr) return {};
  std::vector<TableRow> rows;
  for (auto& [name, value] : FactsOf(model->model()))
    rows.push_back({std::string(name), std::move(value)});
  return rows;
}

// ---- model_columns ----

std::vector<TableRow> ColumnRows(const TableCall& call) {
  const Model* model = SoundModel(call);
  if (model == nullptr) return {};
  std::vector<TableRow> rows;
  for (size_t i = 0; i < model->columns.size(); ++i) {
    const ModelColumn& column = model->columns[i];
    const bool category = column.kind == ColumnKind::kCategory;
    const bool number =
        (column.kind == ColumnKind::kNumber && column.role != ColumnRole::kProduct) ||
        column.kind == ColumnKind::kPolynomial;
    Cell reference = column.reference < 0
                         ? Cell()
                         : Cell(column.levels[static_cast<size_t>(column.reference)].text);
    rows.push_back(
        {Position(i), column.name, std::string(kColumnRoleNames[static_cast<size_t>(column.role)]),
         column.role == ColumnRole::kProduct
             ? Cell()
             : Cell(std::string(kColumnKindNames[static_cast<size_t>(column.kind)])),
         TextOrNull(column.unit), number ? Cell(column.transform.spec()) : Cell(),
         RawCell(column, column.observed_low), RawCell(column, column.observed_high),
         RawCell(column, column.lower_quartile), RawCell(column, column.upper_quartile),
         RawCell(column, column.mean), column.sd,
         category ? Cell(static_cast<std::int64_t>(column.levels.size())) : Cell(),
         std::move(reference), category ? Cell(std::int64_t{column.reference_given}) : Cell(),
         column.missing, column.outside, TextOrNull(column.note)});
  }
  return rows;
}

// ---- model_tests, model_influence ----

std::vector<TableRow> TestRows(const TableCall& call) {
  const Model* model = SoundModel(call);
  if (model == nullptr) return {};
  std::vector<TableRow> rows;
  for (size_t i = 0; i < model->tests.size(); ++i) {
    const ColumnTest& test = model->tests[i];
    rows.push_back({Position(i), model->columns[static_cast<size_t>(test.column)].name,
                    std::int64_t{test.parameters}, test.sum_of_squares, test.f, test.p_value});
  }
  return rows;
}

std::vector<TableRow> InfluenceRows(const TableCall& call) {
  const Model* model = SoundModel(call);
  if (model == nullptr) return {};
  std::vector<TableRow> rows;
  for (const InfluentialCase& row : model->influence) {
    Cell key = std::visit([](const auto& value) { return Cell(value); }, row.key);
    rows.push_back({std::move(key), row.cooks_distance, row.leverage, row.studentized_residual});
  }
  return rows;
}

std::vector<TableRow> CheckRows(const TableCall& call) {
  const Model* model = SoundModel(call);
  if (model == nullptr) return {};
  std::vector<TableRow> rows;
  for (const Check& check : ShownChecks(*model)) {
    rows.push_back({Position(rows.size()), check.name, check.status, check.statistic, check.df,
                    check.p_value, TextOrNull(check.finding), TextOrNull(check.remedy)});
  }
  return rows;
}

// ---- model_histogram, model_residual_quantiles, model_residual_bins ----

std::vector<TableRow> HistogramRows(const TableCall& call) {
  const Model* model = SoundModel(call);
  if (model == nullptr) return {};
  std::vector<TableRow> rows;
  const auto count = [](const HistogramBin& bin) { return static_cast<std::int64_t>(bin.rows); };
  for (const HistogramBin& bin : model->response_histogram.original) {
    rows.push_back({Position(rows.size()), std::string("original"),
                    RawCell(model->response(), bin.low), RawCell(model->response(), bin.high),
                    count(bin)});
  }
  for (const HistogramBin& bin : model->response_histogram.scaled) {
    rows.push_back(
        {Position(rows.size()), std::string("re-expressed"), bin.low, bin.high, count(bin)});
  }
  return rows;
}

std::vector<TableRow> ResidualQuantileRows(const TableCall& call) {
  const Model* model = SoundModel(call);
  if (model == nullptr) return {};
  const auto n = static_cast<std::size_t>(model->rows.fitted);
  std::vector<TableRow> rows;
  for (size_t i = 0; i < model->residuals.quantiles.size(); ++i) {
    if (std::isnan(model->residuals.quantiles[i])) continue;
    rows.push_back({kResidualProbabilities[i], QuantileScore(kResidualProbabilities[i], n),
                    model->residuals.quantiles[i]});
  }
  return rows;
}

std::vector<TableRow> ResidualBinRows(const TableCall& call) {
  const Model* model = SoundModel(call);
  if (model == nullptr) return {};
  std::vector<TableRow> rows;
  for (const ResidualBin& bin : model->residuals.bins) {
    rows.push_back(
        {Position(rows.size()), bin.fitted_low, bin.fitted_high, bin.rows, bin.mean, bin.sd});
  }
  return rows;
}

// ---- model_predictions ----

std::vector<TableRow> PredictionRows(const TableCall& call) {
  ModelInHand* model = TableModelArgument(call);
  if (model == nullptr || !model->predictor) return {};
  const Predictor& predictor = *model->predictor;
  const double level = LevelBeforeInputs(call, 1).value_or(model->model().level);
  ReadInputs(call, 2, *model);
  const PredictionRow& row = model->row;
  const Interval typical = predictor.TypicalLimits(row, level);
  const Interval mean = predictor.MeanLimits(row, level);
  const Interval one_case = predictor.CaseLimits(row, level);
  std::string note = predictor.Note(model->inputs, row);
  if (const std::string limits = predictor.LimitNote(row, level); !limits.empty())
    note += (note.empty() ? "" : "; ") + limits;
  const char* status = !row.usable ? "not computed" : note.empty() ? "fine" : "look";
  const auto cell = [&](double value) { return RawCell(model->model().response(), value); };
  std::vector<TableRow> rows;
  rows.push_back({cell(predictor.FittedTypical(row)), cell(typical.low), cell(typical.high),
                  cell(predictor.FittedMean(row)), cell(mean.low), cell(mean.high),
                  cell(one_case.low), cell(one_case.high), std::string(status), TextOrNull(note)});
  return rows;
}

constexpr TableMethods kTerms = {
    "position INTEGER, term TEXT, column_name TEXT, category_level TEXT, transform TEXT, "
    "coefficient REAL, low REAL, high REAL, standard_error REAL, t REAL, p_value REAL, "
    "errors TEXT, variance_inflation REAL, note TEXT",
    TermRows};
constexpr TableMethods kEffects = {
    "position INTEGER, column_name TEXT, kind TEXT, from_value, to_value, effect REAL, low REAL, "
    "high REAL, unit TEXT, errors TEXT, sentence TEXT",
    EffectRows};
constexpr TableMethods kFacts = {"fact TEXT, value", FactRows};
constexpr TableMethods kColumns = {
    "position INTEGER, column_name TEXT, role TEXT, kind TEXT, unit TEXT, transform TEXT, "
    "observed_low, observed_high, lower_quartile, upper_quartile, mean, sd REAL, levels INTEGER, "
    "reference TEXT, reference_given INTEGER, missing INTEGER, outside INTEGER, note TEXT",
    ColumnRows};
constexpr TableMethods kTests = {
    "position INTEGER, column_name TEXT, parameters INTEGER, sum_of_squares REAL, f REAL, "
    "p_value REAL",
    TestRows};
constexpr TableMethods kInfluence = {
    "key, cooks_distance REAL, leverage REAL, studentized_residual REAL", InfluenceRows};
constexpr TableMethods kChecks = {
    "position INTEGER, check_name TEXT, status TEXT, statistic REAL, df REAL, p_value REAL, "
    "finding TEXT, remedy TEXT",
    CheckRows};
constexpr TableMethods kHistogram = {"position INTEGER, scale TEXT, low, high, rows INTEGER",
                                     HistogramRows};
constexpr TableMethods kResidualQuantiles = {"probability REAL, normal_score REAL, residual REAL",
                                             ResidualQuantileRows};
constexpr TableMethods kResidualBins = {
    "position INTEGER, fitted_low REAL, fitted_high REAL, rows INTEGER, mean REAL, sd REAL",
    ResidualBinRows};
constexpr TableMethods kPredictions = {
    "typical, typical_low, typical_high, mean, mean_low, mean_high, case_low, case_high, "
    "status TEXT, note TEXT",
    PredictionRows};

// A model of four rows, and a table function of it.
#define LADDERLINE_EXAMPLE(function)                                                          \
  "SELECT f.* FROM (SELECT ols_model('cost | log_offset', cost, 'age', age) AS model FROM "   \
  "(SELECT 120 AS cost, 10 AS age UNION ALL SELECT 300, 40 UNION ALL SELECT 90, 5 UNION ALL " \
  "SELECT 240, 31)) AS fit, " function " AS f"

constexpr FunctionRow kRows[] = {
    Table("model_terms", 1, 3, "model [, level [, errors]]", kTerms,
          "Coefficients with limits, standard errors, t and p, one row per term.", "",
          LADDERLINE_EXAMPLE("model_terms(fit.model, 0.9, 'hc3')")),
    Table("model_effects", 1, 3, "model [, level [, errors]]", kEffects,
          "What the terms come to in plain units, each as a figure with limits and as a sentence: "
          "percent changes under logarithms, each category against its reference, and for every "
          "number the step from its lower to its upper quartile, or where these are equal from its "
          "least to its largest value.",
          "", LADDERLINE_EXAMPLE("model_effects(fit.model, 0.9, 'hc3')")),
    Table("model_facts", 1, 1, "model", kFacts,
          "What there is to know of a model as a whole, also of a refused one.", "",
          LADDERLINE_EXAMPLE("model_facts(fit.model)")),
    Table("model_columns", 1, 1, "model", kColumns,
          "The labelled columns: role, kind, range, quartiles, levels, rows missing and outside.",
          "", LADDERLINE_EXAMPLE("model_columns(fit.model)")),
    Table("model_tests", 1, 1, "model", kTests,
          "Joint test of all terms of a predictor: the classical partial F, whatever the model's "
          "errors.",
          "", LADDERLINE_EXAMPLE("model_tests(fit.model)")),
    Table("model_checks", 1, 1, "model", kChecks,
          "Whether the fit can be trusted: each check with its status (fine, look, problem, not "
          "computed), what it found in plain words, and what to try next.",
          "", LADDERLINE_EXAMPLE("model_checks(fit.model)")),
    Table("model_influence", 1, 1, "model", kInfluence,
          "Up to 20 fitted rows with the largest Cook's distance.", "",
          LADDERLINE_EXAMPLE("model_influence(fit.model)")),
    Table("model_histogram", 1, 1, "model", kHistogram,
          "How the response of the fitted rows is spread: counts in bins from low up to, not with, "
          "high (the last with it), of original values and, where it has a transform, of "
          "re-expressed ones. No rows for fewer than 10 fitted rows or without checks.",
          "",
          "SELECT h.* FROM (WITH RECURSIVE number(n) AS (SELECT 1 UNION ALL SELECT n + 1 FROM "
          "number WHERE n < 40) SELECT ols_model('cost | log_offset', n * n, 'age', n) AS model "
          "FROM number) AS fit, model_histogram(fit.model) AS h"),
    Table("model_residual_quantiles", 1, 1, "model", kResidualQuantiles,
          "Quantiles of the residuals, on the transformed scale and of rows scaled by the root of "
          "their weight, each beside the normal score at which it would lie on a straight line, "
          "were they normal.",
          "", LADDERLINE_EXAMPLE("model_residual_quantiles(fit.model)")),
    Table("model_residual_bins", 1, 1, "model", kResidualBins,
          "Mean and spread of the residuals for low to high fitted values, on the transformed "
          "scale: a mean far from 0 is a curve, a growing spread a funnel.",
          "", LADDERLINE_EXAMPLE("model_residual_bins(fit.model)")),
    Table("model_predictions", 2, kAnyCount, "model, level, inputs…", kPredictions,
          "One row with typical value, mean and case limits for a row of inputs, and whether to "
          "trust them.",
          "", LADDERLINE_EXAMPLE("model_predictions(fit.model, 0.95, 25)")),
};

}  // namespace

std::span<const FunctionRow> ModelTables() { return kRows; }

}  // namespace ladderline
