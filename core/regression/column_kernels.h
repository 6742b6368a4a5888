// Loops over columns with a fixed order of summation.
//
// Eight running sums, as four pairs of doubles: wide enough to keep two adders busy, and the same
// additions in the same order on every machine, whatever the width of its registers.
#ifndef LADDERLINE_CORE_REGRESSION_COLUMN_KERNELS_H_
#define LADDERLINE_CORE_REGRESSION_COLUMN_KERNELS_H_

#include <algorithm>
#include <cmath>
#include <cstring>

#include "core/regression/row_source.h"

namespace ladderline {

using Pair [[gnu::vector_size(16)]] = double;

inline Pair LoadPair(const double* from) {
  Pair pair;
  std::memcpy(&pair, from, sizeof pair);
  return pair;
}
inline void StorePair(double* to, Pair pair) { std::memcpy(to, &pair, sizeof pair); }
inline Pair Both(double value) { return Pair{value, value}; }

class LaneSum {
 public:
  void Add(int lane_pair, Pair terms) { sums_[lane_pair] += terms; }
  void AddTail(int lane, double term) { sums_[lane / 2][lane % 2] += term; }
  double Total() const {
    const Pair even = (sums_[0] + sums_[1]) + (sums_[2] + sums_[3]);
    return even[0] + even[1];
  }

 private:
  Pair sums_[4] = {};
};

// Σ term(i), i < n. `pair(i)` gives the terms i and i + 1, `single(i)` one of the last seven.
template <class PairTerm, class SingleTerm>
double SumOver(Index n, PairTerm pair, SingleTerm single) {
  LaneSum sum;
  Index i = 0;
  for (; i + 8 <= n; i += 8)
    for (int lane = 0; lane < 4; ++lane) sum.Add(lane, pair(i + 2 * lane));
  for (int lane = 0; i < n; ++i, ++lane) sum.AddTail(lane, single(i));
  return sum.Total();
}

inline double Dot(const double* a, const double* b, Index n) {
  return SumOver(
      n, [=](Index i) { return LoadPair(a + i) * LoadPair(b + i); },
      [=](Index i) { return a[i] * b[i]; });
}

// Each of both sums is bit for bit the Dot of its columns.
inline void DotTwo(const double* a, const double* b0, const double* b1, Index n, double* dot0,
                   double* dot1) {
  LaneSum sum0, sum1;
  Index i = 0;
  for (; i + 8 <= n; i += 8) {
    for (int lane = 0; lane < 4; ++lane) {
      const Pair left = LoadPair(a + i + 2 * lane);
      sum0.Add(lane, left * LoadPair(b0 + i + 2 * lane));
      sum1.Add(lane, left * LoadPair(b1 + i + 2 * lane));
    }
  }
  for (int lane = 0; i < n; ++i, ++lane) {
    sum0.AddTail(lane, a[i] * b0[i]);
    sum1.AddTail(lane, a[i] * b1[i]);
  }
  *dot0 = sum0.Total();
  *dot1 = sum1.Total();
}

// The e with largest |x_i| · 2^-e in [½, 1): scaling by it keeps squares in range. 0 when the
// largest is 0 or infinite.
inline int SizeExponent(const double* x, Index n) {
  double largest = 0;
  for (Index i = 0; i < n; ++i) largest = std::max(largest, std::abs(x[i]));
  int exponent = 0;
  if (largest > 0 && std::isfinite(largest)) std::frexp(largest, &exponent);
  return exponent;
}

// y −= factor · x.
inline void SubtractMultiple(double factor, const double* x, double* y, Index n) {
  for (Index i = 0; i < n; ++i) y[i] -= factor * x[i];
}

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_COLUMN_KERNELS_H_
