#include "core/transform/transform.h"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>

#include "core/elementary/elementary.h"
#include "core/transform/power_family.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr double kLn2 = 0.6931471805599453;

// Below this |t| the next terms of asinh(t)/t and sinh(t)/t, t²/6, are under half an ulp of 1.
constexpr double kLinear = 0x1p-26;

// Between these bounds a quotient has kept all its bits.
constexpr double kLeastSafe = 1e-300, kMostSafe = 1e300;

// Enough for one pass through the cache, little enough for the stack.
constexpr std::size_t kBlock = 256;

double FiniteOrNaN(double value) { return std::isfinite(value) ? value : kNaN; }

// Log base `base` of `argument`, where ln(argument) = log_argument. A quotient of two rounded
// logarithms misses the whole powers (log10 of 1000 is one ulp under 3): these are put right.
double LogToBase(double log_argument, double log_base, double argument, double base) {
  const double z = log_argument / log_base;
  const double whole = std::nearbyint(z);
  constexpr double kFewUlps = 0x1p-50;
  if (z != whole && std::abs(z - whole) <= kFewUlps * std::abs(whole) &&
      Pow(base, whole) == argument)
    return whole;
  return z;
}

double AsinhScaled(double x, double theta) {
  const double t = theta * x;
  if (std::abs(t) < kLinear) return x;
  if (std::isfinite(t)) return Asinh(t) / theta;
  return std::copysign((kLn2 + Log(theta) + Log(std::abs(x))) / theta, x);
}

double SinhScaled(double z, double theta) {
  const double t = theta * z;
  if (std::abs(t) < kLinear) return z;
  const double sinh = Sinh(t);
  if (std::isfinite(sinh)) return sinh / theta;
  const double half = Exp(std::abs(t) / 2);  // sinh overflows; sinh/θ may not
  return std::copysign(half / theta * (half / 2), z);
}

// The line through (from_low, to_low) and (from_high, to_high); exact at both.
double MapRange(double v, double from_low, double from_high, double to_low, double to_high) {
  if (v == from_high) return to_high;
  const double part = v - from_low, whole = from_high - from_low, width = to_high - to_low;
  const double product = part * width;
  return to_low + (std::isfinite(product) ? product / whole : part / whole * width);
}

}  // namespace

Transform::Shares Transform::SharesOf(double x) const {
  const auto [low, high, inset, unused] = arguments_;
  DoubleDouble from_low = TwoSum(x, -low), to_high = TwoSum(high, -x);
  if (high < low) {
    from_low = -from_low;
    to_high = -to_high;
  }
  const double keep = 1 - 2 * inset, margin = inset * std::abs(high - low);
  return {margin + keep * from_low.hi, margin + keep * to_high.hi,
          keep * (from_low - to_high).value()};
}

bool Transform::BeginsWithLog() const {
  return is_log() || kind_ == TransformKind::kBoxCox || kind_ == TransformKind::kYeoJohnson;
}

DoubleDouble Transform::LogArgument(double x) const {
  switch (kind_) {
    case TransformKind::kLogOffset:
      return TwoSum(x, arguments_[0]);
    case TransformKind::kLogReflected:
      return TwoSum(arguments_[0], -x);
    case TransformKind::kBoxCox:
      return TwoSum(x, arguments_[1]);
    default:
      assert(kind_ == TransformKind::kYeoJohnson);
      return TwoSum(1, std::abs(x));
  }
}

double Transform::AfterLog(double x, DoubleDouble u, double log_hi) const {
  const double log_u = LogOfSum(u, log_hi);
  switch (kind_) {
    case TransformKind::kLogOffset:
      return log_base_ == 1 ? log_u : LogToBase(log_u, log_base_, u.hi, arguments_[1]);
    case TransformKind::kLogReflected:
      return 0 - log_u;
    case TransformKind::kBoxCox:
      return BoxCoxOf(u, log_u, arguments_[0]);
    default:
      return x >= 0 ? BoxCoxOf(u, log_u, arguments_[0])
                    : -BoxCoxOf(u, log_u, TwoSum(2, -arguments_[0]));
  }
}

double Transform::ForwardPlainly(double x) const {
  const auto& a = arguments_;
  switch (kind_) {
    case TransformKind::kSqrtOffset:
      return std::sqrt(x + a[0]);
    case TransformKind::kSquare:
      return x * x;
    case TransformKind::kPowerOf:
      return Pow(x, a[0]);
    case TransformKind::kReciprocal:
      return 1 / x;
    case TransformKind::kNegativeReciprocal:
      return -1 / x;
    case TransformKind::kAsinhScaled:
      return AsinhScaled(x, a[0]);
    case TransformKind::kLogit: {
      const Shares shares = SharesOf(x);
      if (!(shares.above > 0 && shares.below > 0)) return kNaN;
      const double odds = shares.above / shares.below;
      if (odds >= 0.5 && odds <= 2) return Log1p(shares.difference / shares.below);
      if (odds >= kLeastSafe && odds <= kMostSafe) return Log(odds);
      return Log(shares.above) - Log(shares.below);
    }
    case TransformKind::kZScore:
      return (x - a[0]) / a[1];
    case TransformKind::kRescale:
      return MapRange(x, a[0], a[1], a[2], a[3]);
    case TransformKind::kCenter:
      return x - a[0];
    default:
      assert(!BeginsWithLog());
      return x;
  }
}

double Transform::AfterExp(double z, double exp_z) const {
  if (kind_ == TransformKind::kLogReflected) return 0 - ExpMinus(-z, exp_z, arguments_[0]);
  return ExpMinus(z, exp_z, arguments_[0]);
}

double Transform::BackPlainly(double z) const {
  const auto& a = arguments_;
  switch (kind_) {
    case TransformKind::kLogOffset:
      return ExpMinus(z * log_base_, Pow(a[1], z), a[0]);
    case TransformKind::kSqrtOffset: {
      if (!(z >= 0)) return kNaN;
      const DoubleDouble square = TwoProduct(z, z);
      return (square.hi - a[0]) + square.lo;
    }
    case TransformKind::kSquare:
      return z >= 0 ? std::sqrt(z) : kNaN;
    case TransformKind::kPowerOf:
      return z >= 0 ? Root(z, a[0]) : kNaN;
    case TransformKind::kReciprocal:
      return 1 / z;
    case TransformKind::kNegativeReciprocal:
      return -1 / z;
    case TransformKind::kBoxCox:
      return BoxCoxBack(z, a[0], a[1]);
    case TransformKind::kYeoJohnson:
      return z >= 0 ? BoxCoxBack(z, a[0], 1) : -BoxCoxBack(-z, TwoSum(2, -a[0]), 1);
    case TransformKind::kAsinhScaled:
      return SinhScaled(z, a[0]);
    case TransformKind::kLogit: {
      const double width = a[1] - a[0], keep = 1 - 2 * a[2];
      // Near the middle from q − ½ = ½ tanh(z/2), else from the smaller of q and 1 − q: either way
      // no digit of the small quantity is lost.
      if (std::abs(z) < 1) {
        const double growth = Expm1(z);
        return a[0] + width / 2 + width * (growth / (2 + growth) / 2 / keep);
      }
      const double tail = Exp(-std::abs(z));
      const double part = width * ((tail / (1 + tail) - a[2]) / keep);
      return z < 0 ? a[0] + part : a[1] - part;
    }
    case TransformKind::kZScore:
      return a[0] + z * a[1];
    case TransformKind::kRescale:
      return MapRange(z, a[2], a[3], a[0], a[1]);
    case TransformKind::kCenter:
      return z + a[0];
    default:
      return z;
  }
}

double Transform::Forward(double x) const {
  if (!std::isfinite(x)) return kNaN;
  if (!BeginsWithLog()) return FiniteOrNaN(ForwardPlainly(x));
  const DoubleDouble u = LogArgument(x);
  return FiniteOrNaN(AfterLog(x, u, Log(u.hi)));
}

double Transform::Back(double z) const {
  if (!std::isfinite(z)) return kNaN;
  return FiniteOrNaN(BeginsBackWithExp() ? AfterExp(z, Exp(ExpArgument(z))) : BackPlainly(z));
}

bool Transform::InDomain(double x) const { return !std::isnan(Forward(x)); }

double Transform::BackHeld(double z, double near_z) const {
  const auto& a = arguments_;
  switch (kind_) {
    case TransformKind::kSqrtOffset:
    case TransformKind::kSquare:
      return Back(z < 0 ? 0 : z);
    case TransformKind::kPowerOf:
      return Back(z < 0 && a[0] > 0 ? 0 : z);
    case TransformKind::kBoxCox:
      return a[0] > 0 && a[0] * z <= -1 ? 0 - a[1] : Back(z);
    case TransformKind::kReciprocal:
    case TransformKind::kNegativeReciprocal:
      return (z > 0) == (near_z > 0) && near_z != 0 ? Back(z) : kNaN;
    case TransformKind::kLogit:
      return a[2] > 0 ? std::clamp(Back(z), std::min(a[0], a[1]), std::max(a[0], a[1])) : Back(z);
    default:
      return Back(z);
  }
}

double Transform::BackWithin(double low, double high, double z, double near_z) const {
  const bool one_sign = low > 0 || high < 0;
  return BackHeld(z, IsReciprocal() && one_sign ? Forward(low) : near_z);
}

double Transform::Slope(double x) const {
  if (!InDomain(x)) return kNaN;
  const auto& a = arguments_;
  switch (kind_) {
    case TransformKind::kIdentity:
    case TransformKind::kDateDays:
    case TransformKind::kCenter:
      return 1;
    case TransformKind::kLogOffset:
      return 1 / (x + a[0]) / log_base_;
    case TransformKind::kSqrtOffset:
      return 0.5 / std::sqrt(x + a[0]);
    case TransformKind::kSquare:
      return 2 * x;
    case TransformKind::kPowerOf:
      return a[0] * Pow(x, a[0] - 1);
    case TransformKind::kReciprocal:
      return -1 / x / x;
    case TransformKind::kNegativeReciprocal:
      return 1 / x / x;
    case TransformKind::kLogReflected:
      return 1 / (a[0] - x);
    case TransformKind::kBoxCox:
      return Pow(x + a[1], a[0] - 1);
    case TransformKind::kYeoJohnson:
      return x >= 0 ? Pow(1 + x, a[0] - 1) : Pow(1 - x, 1 - a[0]);
    case TransformKind::kAsinhScaled: {
      const double t = std::abs(a[0] * x);
      return t < 1 / kLinear ? 1 / std::sqrt(1 + t * t) : 1 / t;
    }
    case TransformKind::kLogit: {
      const Shares shares = SharesOf(x);
      return (1 - 2 * a[2]) * ((a[1] - a[0]) / shares.above) / shares.below;
    }
    case TransformKind::kZScore:
      return 1 / a[1];
    case TransformKind::kRescale:
      return (a[3] - a[2]) / (a[1] - a[0]);
  }
  return kNaN;
}

double Transform::LogJacobian(double x, double z) const {
  switch (kind_) {
    case TransformKind::kLogOffset:
      return -z * log_base_ - (log_base_ == 1 ? 0 : Log(std::abs(log_base_)));
    case TransformKind::kLogReflected:
      return z;
    default:
      return LogJacobian(x);
  }
}

double Transform::LogJacobian(double x) const {
  if (!InDomain(x)) return kNaN;
  const auto& a = arguments_;
  const auto log_u = [&] {
    const DoubleDouble u = LogArgument(x);
    return LogOfSum(u, Log(u.hi));
  };
  switch (kind_) {
    case TransformKind::kLogOffset:
      return 0 - log_u() - Log(std::abs(log_base_));
    case TransformKind::kSqrtOffset:
      return -kLn2 - Log(x + a[0]) / 2;
    case TransformKind::kSquare:
      return kLn2 + Log(std::abs(x));
    case TransformKind::kPowerOf:
      return a[0] == 1 ? 0 : Log(std::abs(a[0])) + (a[0] - 1) * Log(x);
    case TransformKind::kReciprocal:
    case TransformKind::kNegativeReciprocal:
      return -2 * Log(std::abs(x));
    case TransformKind::kLogReflected:
      return 0 - log_u();
    case TransformKind::kBoxCox:
      return (a[0] - 1) * log_u();
    case TransformKind::kYeoJohnson:
      return (x >= 0 ? a[0] - 1 : 1 - a[0]) * log_u();
    case TransformKind::kAsinhScaled: {
      const double t = std::abs(a[0] * x);
      if (t < 1 / kLinear) return -Log1p(t * t) / 2;
      return std::isfinite(t) ? -Log(t) : -(Log(a[0]) + Log(std::abs(x)));
    }
    case TransformKind::kLogit: {
      const Shares shares = SharesOf(x);
      return Log(1 - 2 * a[2]) + Log(std::abs(a[1] - a[0])) - Log(shares.above) - Log(shares.below);
    }
    default:
      return Log(std::abs(Slope(x)));
  }
}

bool Transform::Decreasing() const {
  const auto& a = arguments_;
  switch (kind_) {
    case TransformKind::kLogOffset:
      return log_base_ < 0;
    case TransformKind::kPowerOf:
      return a[0] < 0;
    case TransformKind::kReciprocal:
      return true;
    case TransformKind::kLogit:
      return a[1] < a[0];
    case TransformKind::kRescale:
      return (a[3] < a[2]) != (a[1] < a[0]);
    default:
      return false;
  }
}

void Transform::ForwardBlock(const double* x, double* z, std::size_t n) const {
  if (!BeginsWithLog()) {
    for (std::size_t i = 0; i < n; ++i) z[i] = Forward(x[i]);
    return;
  }
  double logs[kBlock];
  for (std::size_t start = 0; start < n; start += kBlock) {
    const std::size_t count = std::min(kBlock, n - start);
    for (std::size_t i = 0; i < count; ++i) logs[i] = LogArgument(x[start + i]).hi;
    LogBlock(logs, logs, count);
    for (std::size_t i = 0; i < count; ++i) {
      const double v = x[start + i];
      z[start + i] = std::isfinite(v) ? FiniteOrNaN(AfterLog(v, LogArgument(v), logs[i])) : kNaN;
    }
  }
}

void Transform::BackBlock(const double* z, double* x, std::size_t n) const {
  if (!BeginsBackWithExp()) {
    for (std::size_t i = 0; i < n; ++i) x[i] = Back(z[i]);
    return;
  }
  double exps[kBlock];
  for (std::size_t start = 0; start < n; start += kBlock) {
    const std::size_t count = std::min(kBlock, n - start);
    for (std::size_t i = 0; i < count; ++i) exps[i] = ExpArgument(z[start + i]);
    ExpBlock(exps, exps, count);
    for (std::size_t i = 0; i < count; ++i) {
      const double v = z[start + i];
      x[start + i] = std::isfinite(v) ? FiniteOrNaN(AfterExp(v, exps[i])) : kNaN;
    }
  }
}

}  // namespace ladderline
