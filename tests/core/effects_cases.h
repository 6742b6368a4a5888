// A fitted model whose arithmetic can be done by hand: the triangular factor is the unit matrix and
// the residual sd is 1, so that the variance of a functional L of the coefficients is Σ L_j².
#ifndef LADDERLINE_TESTS_CORE_EFFECTS_CASES_H_
#define LADDERLINE_TESTS_CORE_EFFECTS_CASES_H_

#include <string>
#include <vector>

#include "core/model/predict.h"

namespace ladderline::testing {

inline Transform Spec(const std::string& spec) {
  return *Transform::ReadSpec(spec).value().transform;
}

// A number with quartiles 2, 4, 6 (mean 4), seen from 1 to 7.
inline ModelColumn NumberColumn(const std::string& name, const std::string& unit = "",
                                const std::string& spec = "identity") {
  ModelColumn column;
  column.name = name;
  column.unit = unit;
  column.transform = Spec(spec);
  column.observed_low = 1;
  column.lower_quartile = 2;
  column.median = column.mean = 4;
  column.upper_quartile = 6;
  column.observed_high = 7;
  column.sd = 2;
  return column;
}

// Levels in byte order with their rows; the first is the reference.
inline ModelColumn CategoryColumn(const std::string& name,
                                  const std::vector<CategoryLevel>& levels) {
  ModelColumn column;
  column.name = name;
  column.kind = ColumnKind::kCategory;
  column.levels = levels;
  column.reference = 0;
  return column;
}

// Gives the terms their coefficients, and the model a basis of unit variances on 20 degrees of
// freedom. A NaN is a column left out.
inline Model WithCoefficients(Model model, const std::vector<double>& coefficients) {
  model.columns[0].role = ColumnRole::kResponse;
  model.rows = {.offered = 32, .fitted = 30, .with_gaps = 2};
  model.facts.residual_sd = 1;
  model.facts.residual_df = 20;
  CentredBasis& basis = model.basis.fit;
  basis.columns = static_cast<Index>(coefficients.size());
  basis.intercept = true;
  for (size_t j = 0; j < coefficients.size(); ++j) {
    ModelTerm& term = model.terms[j];
    term.coefficient = coefficients[j];
    if (coefficients[j] != coefficients[j]) continue;
    term.standard_error = {1, 2, 2, 2, 2, kNaN};
    basis.kept.push_back(static_cast<Index>(j));
    basis.centre.push_back(0);
    basis.coefficient.push_back(coefficients[j]);
  }
  for (Index j = 0; j < basis.rank(); ++j) {
    for (Index i = 0; i <= j; ++i) basis.factor.push_back(i == j ? 1.0 : 0.0);
  }
  return model;
}

// y = 1 + 2 x − ½ x² + 3 [g is B] + ¼ x [g is B]
inline Model CurveByGroup(const std::string& response = "identity") {
  Model model;
  model.columns = {NumberColumn("cost", "EUR", response), NumberColumn("age", "years"),
                   CategoryColumn("trade", {{"A", 18}, {"B", 12}})};
  model.columns[1].kind = ColumnKind::kPolynomial;
  model.columns[1].degree = 2;
  model.terms = {
      {.name = "intercept"},
      {.name = "age power 1", .factors = {{.column = 1}}},
      {.name = "age power 2", .factors = {{.column = 1, .power = 2}}},
      {.name = "trade is B", .factors = {{.column = 2, .level = 1}}},
      {.name = "age by trade is B", .factors = {{.column = 1}, {.column = 2, .level = 1}}}};
  model = WithCoefficients(model, {1, 2, -0.5, 3, 0.25});
  // Over −1 to 1 the basis is x and 2 x² − 1; measured from −1 and halved the latter is x².
  model.columns[1].observed_low = -1;
  model.columns[1].observed_high = 1;
  model.basis.fit.centre[2] = -1;
  model.basis.fit.coefficient[2] = -0.25;
  model.basis.fit.factor[PackedIndex(2, 2)] = 2;
  return model;
}

inline Check Found(const std::string& name, const std::string& status, const std::string& finding,
                   const std::string& remedy = "") {
  Check check;
  check.name = name;
  check.status = status;
  check.finding = finding;
  check.remedy = remedy;
  return check;
}

}  // namespace ladderline::testing

#endif  // LADDERLINE_TESTS_CORE_EFFECTS_CASES_H_
