#include "ext/model_text_rules.h"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/elementary/elementary.h"
#include "core/support/distributions.h"

namespace ladderline::model_text {
namespace {

double Parameters(const Model& model) { return static_cast<double>(model.basis.fit.rank()) + 1; }
double Slopes(const Model& model) {
  return static_cast<double>(model.basis.fit.rank()) - (model.intercept ? 1 : 0);
}
double Aic(const Model& model, double log_likelihood) {
  return -2 * log_likelihood + 2 * Parameters(model);
}
double Bic(const Model& model, double log_likelihood) {
  return -2 * log_likelihood + Log(static_cast<double>(model.rows.fitted)) * Parameters(model);
}

constexpr FactKey kFactKeys[] = {
    {"residual_df", &ModelFacts::residual_df},
    {"residual_sd", &ModelFacts::residual_sd},
    {"median_absolute_error", &ModelFacts::median_absolute_error},
    {"r_squared", &ModelFacts::r_squared},
    {"adjusted_r_squared", &ModelFacts::adjusted_r_squared,
     [](const Model& m) {
       const double total_df = m.facts.residual_df + Slopes(m);
       return 1 - (1 - m.facts.r_squared) * total_df / m.facts.residual_df;
     }},
    {"f_df1", &ModelFacts::f_df1, Slopes},
    {"f_df2", &ModelFacts::f_df2, [](const Model& m) { return m.facts.residual_df; }},
    {"f", &ModelFacts::f,
     [](const Model& m) {
       const ModelFacts& facts = m.facts;
       return facts.r_squared / facts.f_df1 / ((1 - facts.r_squared) / facts.f_df2);
     }},
    {"f_p", &ModelFacts::f_p,
     [](const Model& m) { return FUpperTail(m.facts.f, m.facts.f_df1, m.facts.f_df2); }},
    {"log_likelihood", &ModelFacts::log_likelihood,
     [](const Model& m) {
       const auto rows = static_cast<double>(m.rows.fitted);
       const double spread = 2 * Log(m.facts.residual_sd);
       return -0.5 * rows * (Log(2 * std::numbers::pi * m.facts.residual_df / rows) + spread + 1);
     }},
    {"aic", &ModelFacts::aic, [](const Model& m) { return Aic(m, m.facts.log_likelihood); }},
    {"bic", &ModelFacts::bic, [](const Model& m) { return Bic(m, m.facts.log_likelihood); }},
    {"log_likelihood_original", &ModelFacts::log_likelihood_original},
    {"aic_original", &ModelFacts::aic_original,
     [](const Model& m) { return Aic(m, m.facts.log_likelihood_original); }},
    {"bic_original", &ModelFacts::bic_original,
     [](const Model& m) { return Bic(m, m.facts.log_likelihood_original); }},
    {"press", &ModelFacts::press},
};

}  // namespace

std::span<const FactKey> FactKeys() { return kFactKeys; }

bool Follows(double figure, double derived) {
  if (std::isnan(figure) || std::isnan(derived)) return std::isnan(figure) && std::isnan(derived);
  return figure == derived ||
         (std::isfinite(derived) &&
          std::abs(figure - derived) <= 1e-12 * std::max(std::abs(figure), std::abs(derived)));
}

bool IsKept(const Model& model, size_t term) {
  return (model.intercept && term == 0) || !std::isnan(model.terms[term].coefficient);
}

ColumnTest TestOfOne(const Model& model, int column, int parameters) {
  ColumnTest test{.column = column, .parameters = parameters};
  for (size_t j = 0; parameters == 1 && j < model.terms.size(); ++j) {
    const ModelTerm& term = model.terms[j];
    if (ColumnOf(term, model.columns) != column || !IsKept(model, j)) continue;
    const double t = term.coefficient / term.standard_error[0], s = model.facts.residual_sd;
    test.f = t * t;
    test.sum_of_squares = test.f * s * s;
    test.p_value = StudentTTwoSided(t, model.facts.residual_df);
  }
  return test;
}

double CooksDistanceOf(const Model& model, double t, double h) {
  const double df = model.facts.residual_df;
  const double internal = t * t * df / (df - 1 + t * t);
  return internal * h / (1 - h) / static_cast<double>(model.basis.fit.rank());
}

const ModelColumn* ColumnOfTerm(const std::vector<ModelColumn>& columns, const std::string& name) {
  for (const ModelColumn& column : columns) {
    if (column.name == name && column.IsInput() && column.kind != ColumnKind::kCategory)
      return &column;
  }
  return nullptr;
}

bool HasPolynomial(const Model& model) {
  return std::any_of(model.terms.begin(), model.terms.end(),
                     [&](const ModelTerm& term) { return HasPower(term, model.columns); });
}

double BinEdge(double low, double high, size_t i, size_t bins) {
  return i == bins ? high
                   : low + static_cast<double>(i) * ((high - low) / static_cast<double>(bins));
}

}  // namespace ladderline::model_text
