// What the tests of residuals are shown of the rows: a short run of them at a time.
#ifndef LADDERLINE_CORE_CHECKS_CHECK_BLOCK_H_
#define LADDERLINE_CORE_CHECKS_CHECK_BLOCK_H_

#include <span>

#include "core/regression/row_source.h"

namespace ladderline {

// A few dozen columns of this length stay in the first-level cache.
inline constexpr Index kCheckRows = 128;

struct CheckBlock {
  Index rows = 0;  // 1..kCheckRows
  // Column 0 is of ones; column c ≥ 1 is the source's c-th column apart from the intercept, less
  // shift[c]. What it is measured from changes no test; it keeps digits.
  std::span<const double* const> x;
  std::span<const double> shift;
  const double* w = nullptr;  // null without weights, as are the roots
  const double* root_w = nullptr;
  // Of rows scaled by √w, in units of their root mean square.
  const double* residual = nullptr;
  const double* spread = nullptr;  // residual² − 1
  const double* lagged = nullptr;  // the residual of the row before, 0 for the first
  // Fitted values, not scaled by √w, from about their mean in about units of their spread; 0 when
  // all are the same.
  const double* fitted = nullptr;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_CHECK_BLOCK_H_
