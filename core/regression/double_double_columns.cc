#include "core/regression/double_double_columns.h"

#include <algorithm>

namespace ladderline {

void DoubleDoubleColumns::Set(Index j, const double* x, const double* x_low,
                              const ColumnScaling::Column& scaling, Index n) {
  double* high = hi(j);
  double* low = lo(j);
  for (Index i = 0; i < n; ++i) {
    DoubleDouble d = TwoSum(x[i], -scaling.centre);
    if (x_low != nullptr) d += x_low[i];
    high[i] = d.hi * scaling.factor;
    low[i] = d.lo * scaling.factor;
  }
  std::fill(high + n, high + kRows, 0.0);
  std::fill(low + n, low + kRows, 0.0);
}

void DoubleDoubleColumns::SubtractMultiple(Index j, DoubleDouble factor,
                                           const DoubleDoubleColumns& other, Index other_column) {
  double* __restrict high = hi(j);
  double* __restrict low = lo(j);
  const double* __restrict x_high = other.hi(other_column);
  const double* __restrict x_low = other.lo(other_column);
  const DoubleDouble minus = -factor;
  for (Index i = 0; i < kRows; ++i) {
    const DoubleDouble sum =
        DoubleDouble(high[i], low[i]) + DoubleDouble(x_high[i], x_low[i]) * minus;
    high[i] = sum.hi;
    low[i] = sum.lo;
  }
}

void DoubleDoubleColumns::Multiply(Index j, DoubleDouble factor) {
  double* __restrict high = hi(j);
  double* __restrict low = lo(j);
  for (Index i = 0; i < kRows; ++i) {
    const DoubleDouble product = DoubleDouble(high[i], low[i]) * factor;
    high[i] = product.hi;
    low[i] = product.lo;
  }
}

void DoubleDoubleColumns::SetWeighted(Index j, const double* w, Index n,
                                      const DoubleDoubleColumns& other, Index other_column) {
  for (Index i = 0; i < kRows; ++i) {
    const DoubleDouble x = other.at(other_column, i);
    const DoubleDouble product = w == nullptr || i >= n ? x : x * w[i];
    hi(j)[i] = product.hi;
    lo(j)[i] = product.lo;
  }
}

void DoubleDoubleColumns::SolveTransposed(Index n, const DoubleDouble* r,
                                          const DoubleDouble* reciprocal) {
  for (Index j = 0; j < n; ++j) {
    for (Index i = 0; i < j; ++i) SubtractMultiple(j, r[PackedIndex(i, j)], *this, i);
    Multiply(j, reciprocal[j]);
  }
}

DoubleDouble DoubleDoubleColumns::Dot(const DoubleDoubleColumns& a, Index a_column,
                                      const DoubleDoubleColumns& b, Index b_column) {
  constexpr Index kLanes = 4;
  const double* a_hi = a.hi(a_column);
  const double* a_lo = a.lo(a_column);
  const double* b_hi = b.hi(b_column);
  const double* b_lo = b.lo(b_column);
  double high[kLanes] = {}, low[kLanes] = {};
  for (Index i = 0; i < kRows; i += kLanes) {
    for (Index lane = 0; lane < kLanes; ++lane) {
      const DoubleDouble sum =
          DoubleDouble(high[lane], low[lane]) + DoubleDouble(a_hi[i + lane], a_lo[i + lane]) *
                                                    DoubleDouble(b_hi[i + lane], b_lo[i + lane]);
      high[lane] = sum.hi;
      low[lane] = sum.lo;
    }
  }
  DoubleDouble total;
  for (Index lane = 0; lane < kLanes; ++lane) total += DoubleDouble(high[lane], low[lane]);
  return total;
}

}  // namespace ladderline
