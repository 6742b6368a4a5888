// Figures of a model that follow from its fit's triangle alone: no row is looked at.
#ifndef LADDERLINE_CORE_MODEL_FIT_FIGURES_H_
#define LADDERLINE_CORE_MODEL_FIT_FIGURES_H_

#include <vector>

#include "core/model/model.h"
#include "core/regression/least_squares.h"
#include "core/regression/raw_columns.h"

namespace ladderline {

// The terms of each predictor, as design columns.
struct TermGroups {
  std::vector<int> columns;
  std::vector<std::vector<Index>> terms;
};

TermGroups GroupTerms(const Model& model);

// The variance inflation of all terms that belong to a column.
void SetInflation(const CentredBasis& basis, const RawColumns& raw, const TermGroups& groups,
                  Model& model);
// The joint test of each group, appended to the model's.
void SetTests(const LeastSquares& fit, const TermGroups& groups, Model& model);
// Facts from residual_df to bic that are told on the model's own scale.
void SetScaleFacts(const LeastSquares& fit, Model& model);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_FIT_FIGURES_H_
