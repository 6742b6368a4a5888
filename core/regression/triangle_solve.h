// Solving with packed upper triangles (centred_basis.h), in doubles or double-doubles.
#ifndef LADDERLINE_CORE_REGRESSION_TRIANGLE_SOLVE_H_
#define LADDERLINE_CORE_REGRESSION_TRIANGLE_SOLVE_H_

#include <vector>

#include "core/regression/centred_basis.h"

namespace ladderline {

// x := R^-1 x, by columns. Entries of x from `n` on are not touched.
template <class Triangle, class Number>
void SolveUpper(const Triangle& r, Index n, Number* x) {
  for (Index j = n - 1; j >= 0; --j) {
    x[j] = x[j] / r[PackedIndex(j, j)];
    for (Index i = 0; i < j; ++i) x[i] -= r[PackedIndex(i, j)] * x[j];
  }
}

// x := R^-T x; the first `zeros` entries of x are known to be 0.
template <class Triangle, class Number>
void SolveTransposed(const Triangle& r, Index n, Number* x, Index zeros = 0) {
  for (Index j = zeros; j < n; ++j) {
    Number rest = x[j];
    for (Index i = zeros; i < j; ++i) rest -= r[PackedIndex(i, j)] * x[i];
    x[j] = rest / r[PackedIndex(j, j)];
  }
}

// R^-1, packed.
template <class Number>
std::vector<Number> InvertUpper(const std::vector<Number>& r, Index n) {
  std::vector<Number> inverse(PackedSize(n));
  for (Index j = 0; j < n; ++j) {
    Number* column = inverse.data() + PackedIndex(0, j);
    column[j] = Number(1);
    SolveUpper(r, j + 1, column);
  }
  return inverse;
}

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_TRIANGLE_SOLVE_H_
