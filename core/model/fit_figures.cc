#include "core/model/fit_figures.h"

#include "core/regression/collinearity.h"
#include "core/regression/fit_facts.h"
#include "core/regression/joint_test.h"

namespace ladderline {

TermGroups GroupTerms(const Model& model) {
  TermGroups groups;
  for (Index j = 0; j < static_cast<Index>(model.terms.size()); ++j) {
    const int column = ColumnOf(model.terms[static_cast<size_t>(j)], model.columns);
    if (column < 0) continue;
    if (groups.columns.empty() || groups.columns.back() != column) {
      groups.columns.push_back(column);
      groups.terms.emplace_back();
    }
    groups.terms.back().push_back(j);
  }
  return groups;
}

void SetInflation(const CentredBasis& basis, const RawColumns& raw, const TermGroups& groups,
                  Model& model) {
  const std::vector<double> inflation = VarianceInflation(basis, groups.terms);
  for (size_t g = 0; g < groups.terms.size(); ++g) {
    for (const Index j : groups.terms[g]) {
      const bool powers = HasPower(model.terms[static_cast<size_t>(j)], model.columns);
      model.terms[static_cast<size_t>(j)].variance_inflation =
          powers ? VarianceInflation(basis, raw[static_cast<size_t>(j)]) : inflation[g];
    }
  }
}

void SetTests(const LeastSquares& fit, const TermGroups& groups, Model& model) {
  const std::vector<JointTest> tests = JointTests(fit, groups.terms);
  for (size_t g = 0; g < tests.size(); ++g) {
    // Against residuals that are rounding F says nothing but "beyond all bounds", as for the whole.
    const bool exact = fit.exact && fit.residual_df() > 0 && tests[g].df > 0;
    model.tests.push_back({.column = groups.columns[g],
                           .parameters = static_cast<int>(tests[g].df),
                           .sum_of_squares = tests[g].sum_of_squares,
                           .f = exact ? kNaN : tests[g].f,
                           .p_value = exact ? 0 : tests[g].p_value});
  }
}

void SetScaleFacts(const LeastSquares& fit, Model& model) {
  const FitFacts facts = FactsOf(fit);
  ModelFacts& out = model.facts;
  out.residual_df = static_cast<double>(facts.residual_df);
  out.residual_sd = facts.residual_sd;
  out.r_squared = facts.r_squared;
  out.adjusted_r_squared = facts.adjusted_r_squared;
  out.f = facts.f;
  out.f_df1 = facts.f_df1;
  out.f_df2 = facts.f_df2;
  out.f_p = facts.f_p;
  out.log_likelihood = facts.log_likelihood;
  out.aic = facts.aic;
  out.bic = facts.bic;
}

}  // namespace ladderline
