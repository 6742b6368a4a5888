// The profile likelihood of λ for a plain column: the transformed values are a normal sample.
//
// The log-likelihood is concave in λ, so that its maximum and its limits are unique: each
// difference of two transformed values is an integral over exponentials in λ, the variance is a
// sum of their squares, and such sums are log-convex.
#ifndef LADDERLINE_CORE_PROFILE_COLUMN_PROFILE_H_
#define LADDERLINE_CORE_PROFILE_COLUMN_PROFILE_H_

#include "core/profile/lambda_search.h"
#include "core/profile/power_response.h"

namespace ladderline {

// Full log-likelihood on the original scale at any finite λ, with its derivatives.
//   domain  response.IsConstant() is false
//   cost    one pass; 5 ns a row, 7 to 20 where λ is so near 0 that the formulas need a series
ProfilePoint ColumnProfileAt(const PowerResponse& response, double lambda);

// The λ of largest likelihood between −5 and 5.
//   domain  response.IsConstant() is false
//   cost    two or three passes over large data
ProfileMaximum MaximiseColumnProfile(const PowerResponse& response);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_PROFILE_COLUMN_PROFILE_H_
