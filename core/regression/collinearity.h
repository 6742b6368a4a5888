// How strongly the columns of a fit depend on each other, from the triangular factor alone.
#ifndef LADDERLINE_CORE_REGRESSION_COLLINEARITY_H_
#define LADDERLINE_CORE_REGRESSION_COLLINEARITY_H_

#include <span>
#include <vector>

#include "core/regression/centred_basis.h"
#include "core/regression/raw_columns.h"

namespace ladderline {

// Ratio of the largest to the smallest singular value of the kept raw columns, weighted, intercept
// included, each scaled to unit length. 1 for a single column, NaN for none. O(rank³).
//   source  Belsley, Kuh & Welsch, Regression Diagnostics (1980), §3.2
double ConditionNumber(const CentredBasis& basis);
// The same of columns that the fit did not work in.
double ConditionNumber(const CentredBasis& basis, const RawColumns& raw);

// GVIF^(1/df) of each group of source columns (none of them the intercept): by how much
// collinearity with the other columns blows up the joint confidence region, as a squared length per
// dimension. For one column it is the variance inflation factor 1/(1−R²), about means with an
// intercept and about 0 without. Weighted when the fit is. NaN for a group of which every column
// was dropped. O(rank³) for all groups together.
//   source  Fox & Monette, J. Amer. Statist. Assoc. 87 (1992)
std::vector<double> VarianceInflation(const CentredBasis& basis,
                                      std::span<const std::vector<Index>> groups);

// The variance inflation factor of one raw column.
double VarianceInflation(const CentredBasis& basis, const RawColumn& raw);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_COLLINEARITY_H_
