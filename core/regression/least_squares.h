// Weighted least squares over rows that are read in blocks.
//
// Householder QR of the centred columns with the response as the last one: blocks are reduced to
// triangles and triangles merged pairwise, so that a million rows cost a few roundings and not a
// thousand. Cross-products are formed only where that is harmless: in double-double, of columns
// which the triangle at hand has already made orthonormal.
//
//   rank     decided in column order. A column is dropped when what the earlier columns leave of it
//            is no more than rounding can produce: the rounding of its own values and of the values
//            it is combined from (2 units in the last place, raw), and that of the decomposition
//            (32 units, centred). The measure does not grow with rows. Raw powers up to x^10 of the
//            kind that defeat a condition-number cut stay; exact repeats, exact sums, constants
//            next to an intercept and all-zero columns go.
//   extended one more pass in double-double, taken when the rounding predicted for the reported
//            terms is too large: all digits that double data can carry, for condition numbers up to
//            about 1e14. What is too large depends on what the pass costs, see `Extended`.
//   few rows n < columns keeps at most n columns. Rows = rank (saturated) is a fit with residual_df
//            0. No rows: rank 0, every column dropped, sums 0, means NaN.
//   cost     2 n p² flops and p² · log2(n/p) numbers of memory, p = columns + 1
//   source   Golub & Van Loan, Matrix Computations, 4th ed., §5.2 (Householder QR); Higham,
//   Accuracy
//            and Stability of Numerical Algorithms, 2nd ed., ch. 19–20 (error terms);
//            Yamamoto et al., Electron. Trans. Numer. Anal. 44 (2015) (orthonormalising twice)
#ifndef LADDERLINE_CORE_REGRESSION_LEAST_SQUARES_H_
#define LADDERLINE_CORE_REGRESSION_LEAST_SQUARES_H_

#include <cstdint>
#include <vector>

#include "core/regression/centred_basis.h"
#include "core/regression/row_source.h"

namespace ladderline {

// Whether the double-double pass is taken.
//   kMeasured  when `predicted_error` exceeds what the cost of the pass makes bearable: 1e-13 while
//              rows · rank² ≤ 2e4 (a tenth of a millisecond), 1e-10 up to 2e8 (a second), 1e-7
//              beyond. Columns that double data determine well stay with the plain pass.
//   kNever, kAlways  for tests and measurements
enum class Extended { kMeasured, kNever, kAlways };

// A dropped column and the kept ones it repeats: column ≈ Σ coefficient · kept column, raw, with
// the intercept among them where it takes part. Shares below 1e-6 of the column's length are left
// out; an all-zero column repeats nothing.
struct Repeat {
  Index column;
  double coefficient;
};
struct DroppedColumn {
  Index column;
  std::vector<Repeat> repeats;
};

struct LeastSquares {
  CentredBasis basis;
  std::vector<DroppedColumn> dropped;  // ascending

  std::int64_t rows = 0;
  bool weighted = false;
  double weight_sum = 0;      // rows, without weights
  double log_weight_sum = 0;  // Σ ln w
  double y_mean = 0;          // weighted

  // Q'y: the response in orthonormal coordinates, `rank` numbers. With an intercept the first one
  // is measured from an inner centre and means nothing by itself; the sum of the other squares is
  // the sum of squares of the regression.
  std::vector<double> effect;
  double residual_ss = 0;  // Σ w e²
  // Σ w (y − ȳ)² with an intercept, Σ w y² without.
  double total_ss = 0;

  // The response has no spread (about its mean; about 0 without an intercept) beyond rounding.
  bool flat_response = false;
  // The residuals are no more than rounding of the data can produce, by the measure of the rank.
  bool exact = false;

  // A bound, generous by a factor of a few, on the rounding of the worst raw coefficient and
  // standard error by the plain pass: relative, the coefficient's to the larger of itself and a
  // hundredth of its standard error.
  double predicted_error = 0;

  Index rank() const { return basis.rank(); }
  std::int64_t residual_df() const { return rows - rank(); }
  // √(RSS / df); NaN when saturated.
  double residual_sd() const;
};

LeastSquares FitLeastSquares(const RowSource& source, Extended extended = Extended::kMeasured);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_LEAST_SQUARES_H_
