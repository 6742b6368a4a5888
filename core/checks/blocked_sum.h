// Sums over a long column, by blocks: a million rows cost the rounding of a thousand.
#ifndef LADDERLINE_CORE_CHECKS_BLOCKED_SUM_H_
#define LADDERLINE_CORE_CHECKS_BLOCKED_SUM_H_

#include <algorithm>

#include "core/regression/column_kernels.h"
#include "core/support/double_double.h"

namespace ladderline {

// Σ term(i), 0 ≤ i < n; 0 for n ≤ 0.
template <class Term>
double BlockedSum(Index n, Term term) {
  DoubleDouble total;
  for (Index first = 0; first < n; first += kBlockRows) {
    total += SumOver(
        std::min(kBlockRows, n - first),
        [=](Index i) {
          return Pair{term(first + i), term(first + i + 1)};
        },
        [=](Index i) { return term(first + i); });
  }
  return total.value();
}

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_BLOCKED_SUM_H_
