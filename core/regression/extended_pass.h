// One more look at the rows in double-double: the answer to all digits that double data can carry.
//
// With R from the plain pass, z = R^-T x is nearly orthonormal over the rows, so that G = Σ w z z'
// is near the identity and its Cholesky factor C loses nothing even in a badly conditioned basis:
// C R is the exact factor, and the plain solution's residuals against z give its exact correction.
// All sums, and the columns themselves, are double-doubles (centres are subtracted exactly).
//   source  Yamamoto, Nakatsukasa, Yanagisawa & Fukaya, Electron. Trans. Numer. Anal. 44 (2015)
#ifndef LADDERLINE_CORE_REGRESSION_EXTENDED_PASS_H_
#define LADDERLINE_CORE_REGRESSION_EXTENDED_PASS_H_

#include <vector>

#include "core/regression/column_scaling.h"
#include "core/regression/row_source.h"
#include "core/support/double_double.h"

namespace ladderline {

// A solution over the kept columns, scaled as `ColumnScaling` says.
struct ExtendedSolution {
  std::vector<DoubleDouble> factor;  // packed
  std::vector<DoubleDouble> coefficient;
  std::vector<DoubleDouble> effect;  // factor · coefficient
  DoubleDouble residual_ss;
};

// Improves `factor` and `coefficient`, the plain solution. Returns false, and leaves `out` as it
// is, when the plain factor is too far off to orthonormalise the rows. 25 flops for each of the
// rows · rank² multiplications.
bool PassExtended(const RowSource& source, const ColumnScaling& scaling,
                  const std::vector<Index>& kept, const std::vector<double>& factor,
                  const std::vector<double>& coefficient, ExtendedSolution& out);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_EXTENDED_PASS_H_
