// Sums of powers of deviations, for the mean, the variance, skewness and kurtosis.
//
// Rows may be taken out again. What cancellation then leaves behind is bounded, and the bound is
// compared with what is left: a summary says whether its figures are sound. Frame (frame.h) renews
// the sums from the rows where they are not.
//   domain   finite rows; while a NaN or an infinity is in, every figure is NaN
//   empty    n is 0 and nothing else is defined; one row or a constant column: sums of powers
//            are exactly 0
//   range    any finite values: deviations are scaled by a power of two where their powers would
//            overflow or underflow
//   source   sums about a provisional centre: Chan, Golub & LeVeque, "Algorithms for computing the
//            sample variance", Am. Stat. 37 (1983)
#ifndef LADDERLINE_CORE_DESCRIBE_POWER_SUMS_H_
#define LADDERLINE_CORE_DESCRIBE_POWER_SUMS_H_

#include <array>
#include <cstdint>

#include "core/describe/deviations.h"
#include "core/support/double_double.h"

namespace ladderline {

// What the sums come to, in units of 2^-shift.
struct CentralSums {
  std::int64_t n = 0;
  int shift = 0;
  double centre = 0;        // provisional
  DoubleDouble sum;         // of the deviations from it
  DoubleDouble m2, m3, m4;  // sums of powers of the deviations from the mean, up to the order
  bool sound = true;
};

// kOrder: the highest power, 2 to 4.
template <int kOrder>
class PowerSums {
 public:
  static_assert(2 <= kOrder && kOrder <= 4);
  using Row = double;
  using Summary = CentralSums;

  PowerSums() = default;
  // With its centre at the mean of what `first` holds; empty.
  static PowerSums CentredAtMeanOf(const PowerSums& first);

  void Add(double x) {
    const DoubleDouble z = deviations_.Of(x);
    if (!deviations_.Covers(z)) [[unlikely]]
      return AddUncovered(x);
    AddCovered(z);
  }
  // Takes out a row that is in.
  void Remove(double x);

  Summary Summarise() const;

 private:
  void AddUncovered(double x);
  void AddCovered(DoubleDouble z) {
    ++n_;
    ++steps_;
    Accumulate(sums_[0], z.hi, z.lo);
    const DoubleDouble square = Product(z, z);
    Accumulate(sums_[1], square.hi, square.lo);
    if constexpr (kOrder >= 3) {
      const DoubleDouble cube = Product(square, z);
      Accumulate(sums_[2], cube.hi, cube.lo);
    }
    if constexpr (kOrder >= 4) {
      const DoubleDouble fourth = Product(square, square);
      Accumulate(sums_[3], fourth.hi, fourth.lo);
    }
  }

  Deviations deviations_;
  std::array<DoubleDouble, kOrder> sums_{};
  std::int64_t n_ = 0;  // finite rows
  std::int64_t not_finite_ = 0;
  std::int64_t steps_ = 0;  // additions and removals
  double peak_ = 0;         // the largest sum of squares that a row was taken out of
};

extern template class PowerSums<2>;
extern template class PowerSums<3>;
extern template class PowerSums<4>;

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_POWER_SUMS_H_
