// What moment accumulators share: exact deviations from a provisional centre, in a unit that keeps
// their powers in range, and sums of them in double-double.
#ifndef LADDERLINE_CORE_DESCRIBE_DEVIATIONS_H_
#define LADDERLINE_CORE_DESCRIBE_DEVIATIONS_H_

#include <algorithm>
#include <cmath>

#include "core/support/double_double.h"

namespace ladderline {

// Bounds the relative error of one double-double operation below (a few 2^-106) with a margin for
// the handful that make up one row's terms.
constexpr double kStepError = 0x1p-102;

// One axis of data. The centre is the first value unless one is given; any finite value will do,
// one amid the data keeps more digits.
class Deviations {
 public:
  Deviations() = default;
  explicit Deviations(double centre);

  // (x - centre) * 2^shift, exactly (unless it is negligible beside the largest one admitted).
  DoubleDouble Of(double x) const { return TwoSum(x * scale_, -scaled_centre_); }
  // False for the first value, for a deviation beyond all earlier ones, and for NaN.
  bool Covers(DoubleDouble deviation) const { return std::abs(deviation.hi) <= reach_; }
  // Makes way for a finite x that is not covered. Returns the change of shift: a sum of k-th powers
  // must be multiplied by 2^(k * change).
  int Admit(double x);

  double scaled_centre() const { return scaled_centre_; }
  int shift() const { return shift_; }
  // The largest |deviation| * 2^shift admitted.
  double reach() const { return std::max(reach_, 0.0); }

 private:
  void SetShift(int shift);

  double centre_ = 0;
  double scaled_centre_ = 0;
  double scale_ = 1;
  double reach_ = -1;  // before the first value
  int shift_ = 0;
};

// sum += (hi, lo), where |lo| is at most a few units in the last place of hi. The error is below
// 2^-104 (|sum| + |hi|): no more is wanted of a running sum.
inline void Accumulate(DoubleDouble& sum, double hi, double lo) {
  const DoubleDouble s = TwoSum(sum.hi, hi);
  sum = QuickTwoSum(s.hi, s.lo + (sum.lo + lo));
}

// Products of deviations, not normalised: fit for Accumulate.
inline DoubleDouble Product(DoubleDouble a, DoubleDouble b) {
  const DoubleDouble p = TwoProduct(a.hi, b.hi);
  return {p.hi, p.lo + (a.hi * b.lo + a.lo * b.hi)};
}

inline DoubleDouble Scaled(DoubleDouble a, int shift) {
  return {std::ldexp(a.hi, shift), std::ldexp(a.lo, shift)};
}

// A residue that spoils the fourteenth digit of a sum of squares makes it unsound.
constexpr double kSquareTolerance = 0x1p-46;

// Compares what removed rows may have left behind in `figure` with its size. Above `tolerance` of
// it the figure is not sound; near half its digits it is not worth giving, and becomes NaN. But an
// exact zero stays: whole numbers that have become equal.
void Judge(double residue, double tolerance, double size, DoubleDouble& figure, bool& sound);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_DEVIATIONS_H_
