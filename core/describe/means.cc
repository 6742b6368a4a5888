#include "core/describe/means.h"

#include <cmath>
#include <limits>

#include "core/describe/moments.h"
#include "core/elementary/elementary.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr double kTiny = 0x1p-1000, kTinyUnit = 0x1p-128;
constexpr DoubleDouble kLn2{0x1.62e42fefa39efp-1, 0x1.abc9e3b39803fp-56};

}  // namespace

bool SignCounts::Count(double x, int change) {
  const bool finite = std::isfinite(x);
  std::int64_t& count = !finite ? not_finite : x > 0 ? positive : x < 0 ? negative : zero;
  count += change;
  return finite && x > 0;
}

std::optional<double> SignCounts::Settled() const {
  if (not_finite > 0 || negative > 0) return kNaN;
  if (zero > 0) return 0;
  if (positive == 0) return kNaN;
  return std::nullopt;
}

void GeometricMean::Fold(double x, int change) {
  if (!counts_.Count(x, change)) return;
  int exponent = 0;
  double m = std::frexp(x, &exponent);
  // m in √½ to √2: logarithms of either sign, small, and exactly 0 for powers of two.
  if (m < 0.70710678118654752) {
    m *= 2;
    --exponent;
  }
  logs_ += change * Log(m);
  exponents_ += change * exponent;
}

double GeometricMean::Value() const {
  if (const std::optional<double> settled = counts_.Settled()) return *settled;
  const std::int64_t n = counts_.positive;
  const DoubleDouble rest = logs_ + kLn2 * static_cast<double>(exponents_ % n);
  return std::ldexp(Exp((rest / static_cast<double>(n)).value()), static_cast<int>(exponents_ / n));
}

void HarmonicMean::Add(double x) {
  if (!counts_.Count(x, 1)) return;
  if (x < kTiny) {
    tiny_reciprocals_.Add(kTinyUnit / x);
  } else {
    reciprocals_.Add(1 / x);
  }
}

void HarmonicMean::Remove(double x) {
  if (!counts_.Count(x, -1)) return;
  if (x < kTiny) {
    tiny_reciprocals_.Remove(kTinyUnit / x);
  } else {
    reciprocals_.Remove(1 / x);
  }
}

double HarmonicMean::Value() {
  if (const std::optional<double> settled = counts_.Settled()) return *settled;
  const CentralSums usual = reciprocals_.Summarise(), tiny = tiny_reciprocals_.Summarise();
  if (tiny.n == 0) return 1 / Mean(usual);
  const double n = static_cast<double>(usual.n + tiny.n);
  double mean = Mean(tiny) * (static_cast<double>(tiny.n) / n);
  if (usual.n > 0) mean += Mean(usual) * kTinyUnit * (static_cast<double>(usual.n) / n);
  return kTinyUnit / mean;
}

double ZeroShare::Value() const {
  const std::int64_t n = counts_.positive + counts_.zero + counts_.negative;
  if (n == 0 || counts_.not_finite > 0) return kNaN;
  return static_cast<double>(counts_.zero) / static_cast<double>(n);
}

}  // namespace ladderline
