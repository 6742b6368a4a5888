#include "core/rates/binomial.h"

#include <algorithm>
#include <cmath>
#include <limits>

#include "core/elementary/elementary.h"
#include "core/rates/tails.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

bool IsInside(double part, double whole) { return part >= 0 && part <= whole && whole > 0; }

}  // namespace

double LowOdds(double successes, double failures, double level) {
  const double k = successes, m = failures;
  if (k == 0) return 0;
  const double tail = (1 - level) / 2;
  const BinomialLaw law(k, m);
  // Both starts are below the root, as in RateLow: P(X ≥ k) ≤ (n over k) p^k and p < odds.
  const double spread = std::sqrt(-2 * Log(2 * tail) * (1 / k + 1 / (m + 1)));
  const double start =
      std::max(Exp((Log(tail) - law.LogChoices()) / k), k / (m + 1) * Exp(-spread));
  return WhereTailIs(tail, start, [&](double odds) {
    return odds <= 1 ? law.AtLeast(odds, 1) : law.AtLeast(1, 1 / odds);
  });
}

double PercentOf(double part, double whole) {
  return IsInside(part, whole) ? 100 * part / whole : kNaN;
}

double PercentLow(double part, double whole, double level) {
  if (!IsInside(part, whole) || !(level > 0 && level < 1)) return kNaN;
  const double odds = LowOdds(part, whole - part, level);
  return 100 * (odds / (1 + odds));
}

double PercentHigh(double part, double whole, double level) {
  if (!IsInside(part, whole) || !(level > 0 && level < 1)) return kNaN;
  return 100 / (1 + LowOdds(whole - part, part, level));
}

}  // namespace ladderline
