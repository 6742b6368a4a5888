// Least squares in columns that are combinations of those of a fit, from its triangle alone.
//
// With X_new = X T on the rows, ‖y − X T b‖² is ‖y − X β‖² + ‖Rβ − R T b‖², so that the fit to the
// same rows in the new columns is least squares of R T against R β: the same coefficients, residual
// sum of squares and triangle as if the rows had been read again.
//   new columns   combinations of raw columns of the old fit (1 for the intercept); with an
//                 intercept the first is the old one's intercept
//   rank          in column order, as in least_squares.h: a column is dropped when what the earlier
//                 ones leave of it is no more of its largest part than rounding
//   accuracy      of double-doubles up to kExtendedRank columns, beyond that of doubles; the
//                 triangle's low parts are kept where the old fit had them
//   cost          O(rank³), some 50 times as much in double-double
//   source        Golub & Van Loan, Matrix Computations, 4th ed., §6.2 (equality constraints by
//                 substitution), §5.2.7 (orthogonalising twice)
#ifndef LADDERLINE_CORE_REGRESSION_RESTRICTED_FIT_H_
#define LADDERLINE_CORE_REGRESSION_RESTRICTED_FIT_H_

#include <span>
#include <vector>

#include "core/regression/centred_basis.h"
#include "core/regression/covariance.h"
#include "core/regression/raw_columns.h"

namespace ladderline {

inline constexpr Index kExtendedRank = 200;

struct RestrictedFit {
  CentredBasis basis;
  std::vector<DroppedColumn> dropped;  // ascending
  std::vector<double> effect;          // Q'y of the new columns, as in LeastSquares
  double added_ss = 0;                 // by which the residual sum of squares grows
  // The new orthonormal coordinates in the old ones: `rank` columns of as many numbers as the old
  // rank, one after the other.
  std::vector<double> coordinates;
};

// `columns`: for each new source column the old ones that add up to it, all of them kept; empty for
// a column of zeros. `rounding`: that of the factors, 0 for exact ones.
RestrictedFit Restrict(const CentredBasis& basis,
                       std::span<const std::vector<RawColumn::Part>> columns, double rounding = 0);

// What the covariance of the old coefficients says of the new ones, which are linear in them.
//   unknown  the variance to take along directions of which no row tells it (in which no residual
//            was left); NaN: they stay unknown
Covariance Restrict(const Covariance& covariance, const RestrictedFit& fit, double unknown);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_RESTRICTED_FIT_H_
