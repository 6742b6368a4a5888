#include "core/describe/power_sums.h"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>

#include "core/describe/moments.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

// For third and fourth powers: a residue that spoils the eleventh digit. That of a cube is held
// against the cube of one row in n that alone makes a skewness of 1.
constexpr double kHigherTolerance = 0x1p-36;

}  // namespace

template <int kOrder>
PowerSums<kOrder> PowerSums<kOrder>::CentredAtMeanOf(const PowerSums& first) {
  PowerSums centred;
  if (first.n_ > 0) {
    centred.deviations_ = Deviations(Mean(first.Summarise()));
  }
  return centred;
}

template <int kOrder>
void PowerSums<kOrder>::AddUncovered(double x) {
  if (!std::isfinite(x)) {
    ++not_finite_;
    return;
  }
  const int change = deviations_.Admit(x);
  if (change != 0) {
    for (int k = 0; k < kOrder; ++k) sums_[k] = Scaled(sums_[k], (k + 1) * change);
    peak_ = std::ldexp(peak_, 2 * change);
  }
  AddCovered(deviations_.Of(x));
}

template <int kOrder>
void PowerSums<kOrder>::Remove(double x) {
  if (!std::isfinite(x)) {
    --not_finite_;
    return;
  }
  assert(n_ > 0);
  peak_ = std::max(peak_, sums_[1].hi);
  const DoubleDouble z = deviations_.Of(x);
  ++steps_;
  Accumulate(sums_[0], -z.hi, -z.lo);
  const DoubleDouble square = Product(z, z);
  Accumulate(sums_[1], -square.hi, -square.lo);
  if constexpr (kOrder >= 3) {
    const DoubleDouble cube = Product(square, z);
    Accumulate(sums_[2], -cube.hi, -cube.lo);
  }
  if constexpr (kOrder >= 4) {
    const DoubleDouble fourth = Product(square, square);
    Accumulate(sums_[3], -fourth.hi, -fourth.lo);
  }
  if (--n_ == 0) {
    const std::int64_t not_finite = not_finite_;
    *this = PowerSums();
    not_finite_ = not_finite;
  }
}

template <int kOrder>
CentralSums PowerSums<kOrder>::Summarise() const {
  CentralSums out;
  out.n = n_ + not_finite_;
  if (not_finite_ > 0) {
    out.sum = out.m2 = out.m3 = out.m4 = kNaN;
    return out;
  }
  if (n_ == 0) return out;
  const auto n = static_cast<double>(n_);
  out.shift = deviations_.shift();
  out.centre = deviations_.scaled_centre();
  out.sum = sums_[0];

  // Every removed term was below reach^k, every running sum below peak * reach^(k-2).
  const double residue =
      16 * kStepError * static_cast<double>(steps_) * std::max(peak_, sums_[1].hi);
  [[maybe_unused]] const double reach = deviations_.reach();
  if constexpr (kOrder == 2) {
    // One division, at the end, and in double: nothing is yet to be subtracted from the result.
    out.m2 = (sums_[1] * n - sums_[0] * sums_[0]).value() / n;
    Judge(residue, kSquareTolerance, out.m2.hi, out.m2, out.sound);
    return out;
  }
  const DoubleDouble offset = sums_[0] / n;  // of the mean from the centre
  out.m2 = sums_[1] - sums_[0] * offset;
  Judge(residue, kSquareTolerance, out.m2.hi, out.m2, out.sound);
  if constexpr (kOrder >= 3) {
    out.m3 = sums_[2] - offset * (sums_[1] * 3.0 - sums_[0] * offset * 2.0);
    Judge(residue * reach, kHigherTolerance, out.m2.hi * std::sqrt(out.m2.hi / n), out.m3,
          out.sound);
  }
  if constexpr (kOrder >= 4) {
    out.m4 =
        sums_[3] - offset * (sums_[2] * 4.0 - offset * (sums_[1] * 6.0 - sums_[0] * offset * 3.0));
    Judge(residue * reach * reach, kHigherTolerance, out.m4.hi, out.m4, out.sound);
  }
  return out;
}

template class PowerSums<2>;
template class PowerSums<3>;
template class PowerSums<4>;

}  // namespace ladderline
