#include "ext/model_facts.h"

#include <cmath>
#include <iterator>

namespace ladderline {

std::vector<std::pair<std::string_view, Cell>> FactsOf(const Model& model) {
  const bool fitted = !model.refused();
  const ModelFacts& facts = model.facts;
  const auto whole = [](double number) {
    return std::isnan(number) ? Cell() : Cell(static_cast<std::int64_t>(number));
  };
  const bool is_factor = fitted && model.smearing.kind == Smearing::Kind::kFactor;
  std::pair<std::string_view, Cell> list[] = {
      {"status", std::string(fitted ? "fitted" : "refused")},
      {"reason", TextOrNull(model.reason)},
      {"family", model.family},
      {"name", TextOrNull(model.name)},
      {"response", model.columns.empty() ? Cell() : Cell(model.response().name)},
      {"rows_offered", model.rows.offered},
      {"rows_fitted", model.rows.fitted},
      {"rows_left_out", model.rows.offered - model.rows.fitted},
      {"rows_with_gaps", model.rows.with_gaps},
      {"rows_outside", model.rows.outside},
      {"terms", fitted ? Cell(std::int64_t{model.basis.fit.rank()}) : Cell()},
      {"residual_df", whole(facts.residual_df)},
      {"residual_sd", facts.residual_sd},
      {"median_absolute_error", facts.median_absolute_error},
      {"r_squared", facts.r_squared},
      {"adjusted_r_squared", facts.adjusted_r_squared},
      {"f", facts.f},
      {"f_df1", whole(facts.f_df1)},
      {"f_df2", whole(facts.f_df2)},
      {"f_p", facts.f_p},
      {"log_likelihood", facts.log_likelihood},
      {"aic", facts.aic},
      {"bic", facts.bic},
      {"log_likelihood_original", facts.log_likelihood_original},
      {"aic_original", facts.aic_original},
      {"bic_original", facts.bic_original},
      {"press", facts.press},
      {"smearing", is_factor ? Cell(model.smearing.values[0]) : Cell()},
      {"digest", TextOrNull(model.digest)},
  };
  return {std::make_move_iterator(std::begin(list)), std::make_move_iterator(std::end(list))};
}

std::string ProblemOf(const Model* model) { return model == nullptr ? "no model" : model->reason; }

}  // namespace ladderline
