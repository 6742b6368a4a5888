// Transforms whose arguments a label leaves to the data.
//
// Estimated from exactly the rows that are fitted, each row counting once whatever its weight:
//   center           the mean
//   z_score          mean and standard deviation (n − 1)
//   rescale          the observed range, onto 0..1
//   log_offset       the offset that leaves no skewness (profile/offset_choice.h), of the column
//                    alone, the response's too
//   box_cox, yeo_johnson   the λ of largest likelihood between −5 and 5: a predictor's that of the
//                    plain column (profile/column_profile.h); the response's that of the regression
//                    on the predictors as the model re-expresses them, weights and all
//                    (profile/response_profile.h)
// Which rows are fitted does not depend on the estimate: box_cox takes what is above 0, the others
// every number, log_offset too, since its offset lifts every row above 0.
#ifndef LADDERLINE_CORE_MODEL_ESTIMATED_TRANSFORMS_H_
#define LADDERLINE_CORE_MODEL_ESTIMATED_TRANSFORMS_H_

#include <optional>
#include <span>
#include <vector>

#include "core/model/columns.h"
#include "core/model/model.h"

namespace ladderline {

// These give columns, which describe those of `set`, the transforms that their labels leave open,
// and a note of what was estimated.
//   domain  one kept row or more
//   errors  why there is no estimate, or none that the numbers can be taken through, as the reason
//           for which a model is refused
//   cost    nothing unless a label asks; λ some passes over the column, see the rooms named above

// All columns but the first.
std::optional<Error> EstimatePredictors(const ColumnSet& set, std::vector<ModelColumn>& columns);

// The first column, after the predictors; `terms` are those of the columns. λ takes an intercept.
std::optional<Error> EstimateResponse(const ColumnSet& set, std::span<const ModelTerm> terms,
                                      std::vector<ModelColumn>& columns);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_ESTIMATED_TRANSFORMS_H_
