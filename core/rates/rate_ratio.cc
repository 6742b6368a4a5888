#include "core/rates/rate_ratio.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <utility>

#include "core/elementary/elementary.h"
#include "core/rates/binomial.h"
#include "core/rates/tails.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

// Log-likelihoods this close, relatively, may be equal: well above what rounding leaves of a tie,
// below the step between neighbouring counts up to some 1e12 events.
constexpr double kTie = 32 * std::numeric_limits<double>::epsilon();

constexpr double kMostEvents = 0x1p53;  // beyond, a double does not tell neighbouring counts apart

bool IsInside(double e1, double b1, double e2, double b2) {
  return e1 >= 0 && e2 >= 0 && b1 > 0 && b2 > 0;
}

// a/c · b/d, none of which need lie within the range of a double.
double Quotient(double a, double b, double c, double d) {
  int exponent = 0;
  for (const auto& [number, sign] : {std::pair{&a, 1}, {&b, 1}, {&c, -1}, {&d, -1}}) {
    int e = 0;
    *number = std::frexp(*number, &e);
    exponent += sign * e;
  }
  return std::ldexp(a / c * (b / d), exponent);
}

double Probability(LogTail tail) { return Exp(tail.log_p); }

}  // namespace

double RateRatio(double e1, double b1, double e2, double b2) {
  if (!IsInside(e1, b1, e2, b2) || e2 == 0) return kNaN;
  return Quotient(e1, b2, e2, b1);
}

double RateRatioLow(double e1, double b1, double e2, double b2, double level) {
  if (!IsInside(e1, b1, e2, b2) || !(level > 0 && level < 1)) return kNaN;
  return Quotient(LowOdds(e1, e2, level), b2, 1, b1);
}

double RateRatioHigh(double e1, double b1, double e2, double b2, double level) {
  if (!IsInside(e1, b1, e2, b2) || !(level > 0 && level < 1) || e2 == 0) return kNaN;
  return Quotient(1, b2, LowOdds(e2, e1, level), b1);
}

double RateRatioP(double e1, double b1, double e2, double b2) {
  if (!IsInside(e1, b1, e2, b2) || e1 != std::floor(e1) || e2 != std::floor(e2) ||
      e1 + e2 > kMostEvents)
    return kNaN;
  // Weights near 1, exactly in proportion; then e1 at or below its expectation.
  const int shift = -std::ilogb(std::max(b1, b2));
  b1 = std::scalbn(b1, shift);
  b2 = std::scalbn(b2, shift);
  if (e1 * b2 > e2 * b1) {
    std::swap(e1, e2);
    std::swap(b1, b2);
  }
  const double total = e1 + e2;
  if (total == 0) return 1;
  const double log_density = BinomialLaw(e1, e2).LogDensity(b1, b2);
  const double seen = log_density + kTie * (1 + std::abs(log_density));
  const auto is_seen_or_rarer = [&](double k) {
    return BinomialLaw(k, total - k).LogDensity(b1, b2) <= seen;
  };
  // From the expectation on the likelihood falls: the first count above that is as rare.
  double low = std::max(std::ceil(total * (b1 / (b1 + b2))), e1 + 1), high = total + 1;
  while (low < high) {
    const double middle = low + std::floor((high - low) / 2);
    if (is_seen_or_rarer(middle)) {
      high = middle;
    } else {
      low = middle + 1;
    }
  }
  if (low == e1 + 1) return 1;
  double p = Probability(BinomialLaw(e2, e1).AtLeast(b2, b1));
  if (low <= total) p += Probability(BinomialLaw(low, total - low).AtLeast(b1, b2));
  return std::min(p, 1.0);
}

}  // namespace ladderline
