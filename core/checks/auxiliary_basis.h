// The design that the spread of residuals is regressed on: the columns of a fit and an intercept,
// unweighted.
#ifndef LADDERLINE_CORE_CHECKS_AUXILIARY_BASIS_H_
#define LADDERLINE_CORE_CHECKS_AUXILIARY_BASIS_H_

#include "core/regression/least_squares.h"
#include "core/regression/row_source.h"

namespace ladderline {

// The fit's own basis where it is unweighted and has an intercept, else that of one more fit. The
// columns of the result are an intercept and then the source's others, in their order.
CentredBasis AuxiliaryBasis(const RowSource& source, const LeastSquares& fit);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_AUXILIARY_BASIS_H_
