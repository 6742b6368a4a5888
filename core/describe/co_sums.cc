#include "core/describe/co_sums.h"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>

namespace ladderline {
namespace {

// A covariance is held to its tolerance relative to itself down to this correlation, below
// relative to this share of the spreads, so that none of uncorrelated data is renewed for ever.
constexpr double kLeastCorrelation = 0x1p-20;

}  // namespace

CoSums CoSums::CentredAtMeanOf(const CoSums& first) {
  CoSums centred;
  if (first.n_ > 0) {
    const CentralCoSums summary = first.Summarise();
    centred.y_ = Deviations(std::ldexp(summary.y_mean.hi, -summary.y_shift));
    centred.x_ = Deviations(std::ldexp(summary.x_mean.hi, -summary.x_shift));
  }
  return centred;
}

void CoSums::AddUncovered(Pair row) {
  if (!std::isfinite(row.y) || !std::isfinite(row.x)) {
    ++not_finite_;
    return;
  }
  if (!y_.Covers(y_.Of(row.y))) {
    if (const int change = y_.Admit(row.y); change != 0) {
      y_sum_ = Scaled(y_sum_, change);
      yy_ = Scaled(yy_, 2 * change);
      xy_ = Scaled(xy_, change);
      yy_peak_ = std::ldexp(yy_peak_, 2 * change);
    }
  }
  if (!x_.Covers(x_.Of(row.x))) {
    if (const int change = x_.Admit(row.x); change != 0) {
      x_sum_ = Scaled(x_sum_, change);
      xx_ = Scaled(xx_, 2 * change);
      xy_ = Scaled(xy_, change);
      xx_peak_ = std::ldexp(xx_peak_, 2 * change);
    }
  }
  AddCovered(y_.Of(row.y), x_.Of(row.x));
}

void CoSums::Remove(Pair row) {
  if (!std::isfinite(row.y) || !std::isfinite(row.x)) {
    --not_finite_;
    return;
  }
  assert(n_ > 0);
  yy_peak_ = std::max(yy_peak_, yy_.hi);
  xx_peak_ = std::max(xx_peak_, xx_.hi);
  ++steps_;
  Fold(y_.Of(row.y), x_.Of(row.x), -1);
  if (--n_ == 0) {
    const std::int64_t not_finite = not_finite_;
    *this = CoSums();
    not_finite_ = not_finite;
  }
}

CentralCoSums CoSums::Summarise() const {
  CentralCoSums out;
  out.n = n_ + not_finite_;
  if (not_finite_ > 0) {
    constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
    out.y_mean = out.x_mean = out.yy = out.xx = out.xy = kNaN;
    return out;
  }
  if (n_ == 0) return out;
  const auto n = static_cast<double>(n_);
  const DoubleDouble y_shift = y_sum_ / n, x_shift = x_sum_ / n;  // from the centres to the means
  out.y_shift = y_.shift();
  out.x_shift = x_.shift();
  out.y_mean = y_shift + y_.scaled_centre();
  out.x_mean = x_shift + x_.scaled_centre();
  out.yy = yy_ - y_sum_ * y_shift;
  out.xx = xx_ - x_sum_ * x_shift;
  out.xy = xy_ - x_sum_ * y_shift;

  const double steps = 16 * kStepError * static_cast<double>(steps_);
  const double yy_peak = std::max(yy_peak_, yy_.hi), xx_peak = std::max(xx_peak_, xx_.hi);
  Judge(steps * yy_peak, kSquareTolerance, out.yy.hi, out.yy, out.sound);
  Judge(steps * xx_peak, kSquareTolerance, out.xx.hi, out.xx, out.sound);
  // Neither the sum of products nor any partial one exceeds the root of Σx² Σy².
  const double spread = std::sqrt(std::max(out.yy.hi, 0.0)) * std::sqrt(std::max(out.xx.hi, 0.0));
  Judge(steps * std::sqrt(yy_peak) * std::sqrt(xx_peak), kSquareTolerance,
        std::max(std::abs(out.xy.hi), kLeastCorrelation * spread), out.xy, out.sound);
  return out;
}

}  // namespace ladderline
