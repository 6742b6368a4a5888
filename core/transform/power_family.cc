#include "core/transform/power_family.h"

#include <cmath>
#include <limits>

#include "core/elementary/elementary.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

// Below this |λ ln u| (or |λz|) the next term of the series is under half an ulp.
constexpr double kNegligible = 0x1p-54;

// Up to this size expm1 and log1p beat the power: their argument's rounding is not yet magnified.
constexpr double kNearOne = 1;

// TwoProduct splits its factors, which overflows from 2^996 on.
constexpr double kSplittable = 0x1p995;

}  // namespace

double LogOfSum(DoubleDouble u, double log_hi) { return u.lo == 0 ? log_hi : log_hi + u.lo / u.hi; }

double BoxCoxOf(DoubleDouble u, double log_u, DoubleDouble lambda) {
  if (!(u.hi > 0)) return kNaN;
  const double t = lambda.hi * log_u;
  if (std::abs(t) < kNegligible) return log_u;
  if (std::abs(t) < kNearOne) return Expm1(t) / lambda.hi;
  // First-order corrections for the low parts of u and λ.
  const double correction = 1 + (lambda.hi * (u.lo / u.hi) + lambda.lo * log_u);
  const double power = Pow(u.hi, lambda.hi) * correction;
  if (std::isfinite(power)) return (power - 1) / lambda.hi;
  const double half = Pow(u.hi, lambda.hi / 2);  // u^λ overflows; u^λ/λ may not
  return half / lambda.hi * half * correction;
}

double ExpMinus(double w, double exp_w, double offset) {
  if (offset == 0) return exp_w;
  if (!(std::abs(w) < 1)) return exp_w - offset;
  const DoubleDouble rest = TwoSum(1, -offset);
  const DoubleDouble sum = TwoSum(Expm1(w), rest.hi);
  return sum.hi + (sum.lo + rest.lo);
}

double Root(DoubleDouble u, DoubleDouble p) {
  const double inverse = 1 / p.hi;
  double root = Pow(u.hi, inverse);
  if (root == 0 || !std::isfinite(root)) return root;
  if (!(std::abs(p.hi) < kSplittable) || !(std::abs(inverse) < kSplittable)) return root;
  // 1/p = inverse + rest, and (u + du)^q = u^q (1 + q du/u + …). Where the power above is finite,
  // |ln u| / p stays below 745, so that first order is enough.
  const DoubleDouble product = TwoProduct(inverse, p.hi);
  const double rest = ((1 - product.hi) - product.lo - inverse * p.lo) / p.hi;
  double correction = inverse * (u.lo / u.hi);
  if (rest != 0) correction += rest * Log(u.hi);
  return root + root * correction;
}

double BoxCoxBack(double z, DoubleDouble lambda, double offset) {
  const double t = lambda.hi * z;
  if (std::abs(t) < kNearOne / 2) {
    const double w = std::abs(t) < kNegligible ? z : Log1p(t) / lambda.hi;
    return ExpMinus(w, Exp(w), offset);
  }
  if (std::isnan(t) || t < -1) return kNaN;
  if (std::isinf(t)) {
    return Root(std::abs(z), lambda) * Root(std::abs(lambda.hi), lambda) - offset;
  }
  DoubleDouble base = t;
  if (std::abs(z) < kSplittable && std::abs(lambda.hi) < kSplittable && t < kSplittable)
    base = TwoProduct(lambda.hi, z) + 1.0 + lambda.lo * z;
  if (t == -1 || base.hi <= 0) return lambda.hi > 0 ? 0 - offset : kNaN;
  return Root(base, lambda) - offset;
}

}  // namespace ladderline
