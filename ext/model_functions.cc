// Scalars against a model: fitted values, limits, residuals, notes, single figures.
#include <cmath>
#include <string>

#include "core/support/text.h"
#include "ext/function_tables.h"
#include "ext/model_argument.h"
#include "ext/model_facts.h"
#include "ext/results.h"

namespace ladderline {
namespace {

// Whether a result is a model: quotes inside other texts of JSON are escaped.
bool MayBeModel(std::string_view text) {
  return text.find("\"ladderline_model\"") != std::string_view::npos;
}

// The sound model of a call, with the row of inputs from argument `first` on resolved; null where
// the answer is NULL.
const ModelInHand* Ask(const Call& call, int first) {
  ModelInHand* model = ModelArgument(call);
  if (model == nullptr || !model->predictor) return nullptr;
  ReadInputs(call, first, *model);
  return model;
}

// A value of the response in original units: a date where the response is one.
void ReturnResponse(const Call& call, const ModelInHand& model, double value) {
  const ModelColumn& response = model.model().response();
  if (response.IsDate() && !std::isnan(value)) {
    call.Return(RawValueText(response, value));
  } else {
    call.Return(value);
  }
}

void FittedScale(Call& call) {
  const ModelInHand* model = Ask(call, 1);
  if (model == nullptr) return call.ReturnNull();
  call.Return(model->predictor->FittedScale(model->row));
}

template <double (Predictor::*value)(const PredictionRow&) const>
void Fitted(Call& call) {
  const ModelInHand* model = Ask(call, 1);
  if (model == nullptr) return call.ReturnNull();
  ReturnResponse(call, *model, ((*model->predictor).*value)(model->row));
}

template <Interval (Predictor::*limits)(const PredictionRow&, double) const, double Interval::*end>
void Limit(Call& call) {
  ModelInHand* model = ModelArgument(call);
  if (model == nullptr || !model->predictor) return call.ReturnNull();
  const std::optional<double> level = LevelBeforeInputs(call, 1);
  ReadInputs(call, 2, *model);
  if (!level) return call.ReturnNull();
  ReturnResponse(call, *model, ((*model->predictor).*limits)(model->row, *level).*end);
}

void Residual(Call& call) {
  const ModelInHand* model = Ask(call, 2);
  if (model == nullptr) return call.ReturnNull();
  const double y = ResponseArgument(call, 1, model->model());
  call.Return(model->predictor->Residual(model->row, y));
}

// A row of weight 0 was not fitted: it has none of the figures of fitted rows.
bool HasWeight(const ModelInHand& model) { return model.weight && *model.weight > 0; }

template <double (Predictor::*figure)(const PredictionRow&, double, double) const>
void FittedRow(Call& call) {
  const ModelInHand* model = Ask(call, 2);
  if (model == nullptr) return call.ReturnNull();
  const double y = ResponseArgument(call, 1, model->model());
  if (!HasWeight(*model)) return call.ReturnNull();
  call.Return(((*model->predictor).*figure)(model->row, y, *model->weight));
}

void Leverage(Call& call) {
  const ModelInHand* model = Ask(call, 1);
  if (model == nullptr || !HasWeight(*model)) return call.ReturnNull();
  call.Return(model->predictor->Leverage(model->row, *model->weight));
}

void FitNote(Call& call) {
  ModelInHand* model = ModelArgument(call);
  if (model == nullptr) return call.Return(ProblemOf(nullptr));
  if (!model->predictor) return call.Return("no model: " + ProblemOf(&model->model()));
  ReadInputs(call, 1, *model);
  const std::string note = model->predictor->Note(model->inputs, model->row);
  if (note.empty()) return call.ReturnNull();
  call.Return(note);
}

void Coefficient(Call& call) {
  const ModelInHand* model = ModelArgument(call);
  const std::optional<std::string_view> name = call.Text(1);
  if (model == nullptr || !name) return call.ReturnNull();
  for (const ModelTerm& term : model->model().terms) {
    if (term.name == *name) return call.Return(term.coefficient);
  }
  call.ReturnNull();
}

void ModelProblem(Call& call) {
  const ModelInHand* model = ModelArgument(call);
  const std::string problem = ProblemOf(model == nullptr ? nullptr : &model->model());
  if (problem.empty()) return call.ReturnNull();
  call.Return(problem);
}

void Flaw(Call& call) {
  if (const std::optional<std::string> flaw = ModelFlaw(call, 0)) return call.Return(*flaw);
  call.ReturnNull();
}

void ReturnCell(const Call& call, const Cell& cell) {
  if (const auto* integer = std::get_if<std::int64_t>(&cell)) {
    call.Return(*integer);
  } else if (const auto* number = std::get_if<double>(&cell)) {
    call.Return(*number);
  } else if (const auto* text = std::get_if<std::string>(&cell)) {
    call.Return(std::string_view(*text));
  } else {
    call.ReturnNull();
  }
}

template <class Names, class NameOf>
std::string OneOf(const Names& names, NameOf&& name_of) {
  std::string requirement;
  for (const auto& name : names)
    requirement += (requirement.empty() ? "must be one of " : ", ") + std::string(name_of(name));
  return requirement;
}

void Fact(Call& call) {
  const std::optional<std::string_view> text = call.Text(0), name = call.Text(1);
  if (!text || IsBlank(*text) || !name) return call.ReturnNull();
  if (MayBeModel(*text)) {
    const auto facts = FactsOf(ModelArgument(call)->model());
    for (const auto& [known, value] : facts) {
      if (known == *name) return ReturnCell(call, value);
    }
    call.ThrowBad(1, OneOf(facts, [](const auto& fact) { return fact.first; }));
  }
  const std::optional<ResultFact> fact = FactOfResult(*text, *name);
  if (!fact) call.ThrowBad(0, "must be a model or another JSON result of this extension");
  if (!fact->known) call.ThrowBad(1, OneOf(fact->keys, [](std::string_view key) { return key; }));
  ReturnCell(call, fact->value);
}

constexpr const char* kDuan = "Duan, \"Smearing Estimate\", J. Amer. Statist. Assoc. 78 (1983)";
constexpr const char* kInfluence = "Belsley, Kuh & Welsch, Regression Diagnostics (1980)";

// A model of four rows, then a question to it.
#define LADDERLINE_EXAMPLE(question)                                                               \
  "SELECT " question                                                                               \
  " FROM (SELECT ols_model('cost | log_offset', cost, 'age', age) AS m FROM (SELECT 120 AS cost, " \
  "10 AS age UNION ALL SELECT 300, 40 UNION ALL SELECT 90, 5 UNION ALL SELECT 240, 31))"

constexpr FunctionRow kRows[] = {
    Scalar("fitted_typical", 1, kAnyCount, "model, inputs…", Fitted<&Predictor::FittedTypical>,
           "The fitted response in original units: a median-type value when the response is "
           "transformed. Inputs in the order of model_columns or as label–value pairs.",
           "", LADDERLINE_EXAMPLE("fitted_typical(m, 25)")),
    Scalar("fitted_mean", 1, kAnyCount, "model, inputs…", Fitted<&Predictor::FittedMean>,
           "The fitted mean in original units: the one to add up.", kDuan,
           LADDERLINE_EXAMPLE("fitted_mean(m, 25)")),
    Scalar("fitted_scale", 1, kAnyCount, "model, inputs…", FittedScale,
           "The fitted response on its transformed scale.", "",
           LADDERLINE_EXAMPLE("fitted_scale(m, 25)")),
    Scalar("typical_low", 2, kAnyCount, "model, level, inputs…",
           Limit<&Predictor::TypicalLimits, &Interval::low>,
           "Lower limit of the fitted curve at a level such as 0.95.", "",
           LADDERLINE_EXAMPLE("typical_low(m, 0.95, 25)")),
    Scalar("typical_high", 2, kAnyCount, "model, level, inputs…",
           Limit<&Predictor::TypicalLimits, &Interval::high>, "Upper limit of the fitted curve.",
           "", LADDERLINE_EXAMPLE("typical_high(m, 0.95, 25)")),
    Scalar("case_low", 2, kAnyCount, "model, level, inputs…",
           Limit<&Predictor::CaseLimits, &Interval::low>, "Lower limit for one new case.", "",
           LADDERLINE_EXAMPLE("case_low(m, 0.95, 25)")),
    Scalar("case_high", 2, kAnyCount, "model, level, inputs…",
           Limit<&Predictor::CaseLimits, &Interval::high>, "Upper limit for one new case.", "",
           LADDERLINE_EXAMPLE("case_high(m, 0.95, 25)")),
    Scalar("residual", 2, kAnyCount, "model, y, inputs…", Residual,
           "Observed less fitted, on the transformed scale.", "",
           LADDERLINE_EXAMPLE("residual(m, 240, 31)")),
    Scalar("studentized_residual", 2, kAnyCount, "model, y, inputs…",
           FittedRow<&Predictor::StudentizedResidual>,
           "A fitted row's residual against the spread of all other rows (external).", kInfluence,
           LADDERLINE_EXAMPLE("studentized_residual(m, 240, 31)")),
    Scalar("leverage", 1, kAnyCount, "model, inputs…", Leverage,
           "How much the fit of a row depends on that row alone, 0 to 1 for fitted rows.",
           kInfluence, LADDERLINE_EXAMPLE("leverage(m, 31)")),
    Scalar("cooks_distance", 2, kAnyCount, "model, y, inputs…",
           FittedRow<&Predictor::CooksDistance>,
           "How far all coefficients would move without this fitted row.",
           "Cook, Technometrics 19 (1977)", LADDERLINE_EXAMPLE("cooks_distance(m, 240, 31)")),
    Scalar("fit_note", 1, kAnyCount, "model, inputs…", FitNote,
           "NULL when the row is usable and inside what was fitted, else the reasons in words.", "",
           LADDERLINE_EXAMPLE("fit_note(m, 212)")),
    Scalar("coefficient", 2, 2, "model, term", Coefficient,
           "The coefficient of a term; NULL when the model lacks it or it was left out.", "",
           LADDERLINE_EXAMPLE("coefficient(m, 'age')")),
    Scalar("model_problem", 1, 1, "model", ModelProblem,
           "NULL for a sound model, else why it cannot be used.", "", "SELECT model_problem(NULL)"),
    Scalar("model_flaw", 1, 1, "model", Flaw,
           "NULL for the text of a model, fitted or refused, else what is wrong with it: never an "
           "error, so that a query can pass over what it cannot read.",
           "", "SELECT model_flaw('no model')"),
    Scalar("fact", 2, 2, "result, name", Fact,
           "One figure or text out of a model or any JSON result of this extension.", "",
           LADDERLINE_EXAMPLE("fact(m, 'r_squared')")),
};

}  // namespace

std::span<const FunctionRow> ModelFunctions() { return kRows; }

}  // namespace ladderline
