// Means other than the arithmetic one, and the share of zeros, of a group or of a moving frame.
//
// Rows leave by Remove in the order in which they came; no figure drifts.
//   domain  finite rows; while a NaN or an infinity is in, the figure is NaN
//   empty   NaN; one row or a constant column: that value, within a few units in the last place
#ifndef LADDERLINE_CORE_DESCRIBE_MEANS_H_
#define LADDERLINE_CORE_DESCRIBE_MEANS_H_

#include <cstdint>
#include <optional>

#include "core/describe/frame.h"
#include "core/describe/power_sums.h"
#include "core/support/double_double.h"

namespace ladderline {

// Counts of what makes a mean of positive values special.
struct SignCounts {
  std::int64_t positive = 0, zero = 0, negative = 0, not_finite = 0;
  // Returns whether x is positive and finite.
  bool Count(double x, int change);
  // What the other counts make of such a mean: NaN for any negative row or for none at all, 0 for
  // any zero. nullopt: all rows are positive.
  std::optional<double> Settled() const;
};

// The n-th root of the product. 0 if a zero is in, NaN if a negative is.
class GeometricMean {
 public:
  void Add(double x) { Fold(x, 1); }
  void Remove(double x) { Fold(x, -1); }
  double Value() const;

 private:
  void Fold(double x, int change);

  // Each row as m 2^e with m near 1: sums of ln m and of e, neither of which can run away.
  DoubleDouble logs_;
  std::int64_t exponents_ = 0;
  SignCounts counts_;
};

// n / Σ(1/x). 0 if a zero is in, NaN if a negative is.
class HarmonicMean {
 public:
  void Add(double x);
  void Remove(double x);
  double Value();

 private:
  // Of rows so small that their reciprocals may overflow, those reciprocals times 2^-128.
  Frame<PowerSums<2>> reciprocals_, tiny_reciprocals_;
  SignCounts counts_;
};

class ZeroShare {
 public:
  void Add(double x) { (void)counts_.Count(x, 1); }
  void Remove(double x) { (void)counts_.Count(x, -1); }
  double Value() const;

 private:
  SignCounts counts_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_MEANS_H_
