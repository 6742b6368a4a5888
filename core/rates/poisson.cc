#include "core/rates/poisson.h"

#include <algorithm>
#include <cmath>
#include <limits>

#include "core/elementary/elementary.h"
#include "core/rates/tails.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

bool IsInside(double events, double base, double per) { return events >= 0 && base > 0 && per > 0; }

// Multiplied first, so that 3 of 1000 per 1000 is 3 exactly.
double OnBase(double count, double base, double per) {
  const double product = count * per;
  return std::isfinite(product) ? product / base : count / base * per;
}

}  // namespace

double RatePer(double events, double base, double per) {
  return IsInside(events, base, per) ? OnBase(events, base, per) : kNaN;
}

double RateLow(double events, double base, double per, double level) {
  if (!IsInside(events, base, per) || !(level > 0 && level < 1)) return kNaN;
  if (events == 0) return 0;
  const double tail = (1 - level) / 2;
  const PoissonLaw law(events);
  // Both starts are below the root: P(X ≥ k) ≤ mean^k/k!, and a normal tail beyond z is at most
  // exp(−z²/2)/2.
  const double start = std::max(Exp((Log(tail) + law.LogFactorial()) / events),
                                events * Exp(-std::sqrt(-2 * Log(2 * tail) / events)));
  const double mean = WhereTailIs(tail, start, [&](double at) { return law.AtLeast(at); });
  return OnBase(mean, base, per);
}

double RateHigh(double events, double base, double per, double level) {
  if (!IsInside(events, base, per) || !(level > 0 && level < 1)) return kNaN;
  const double tail = (1 - level) / 2;
  const PoissonLaw law(events);
  const double start = (events + 1) * Exp(std::sqrt(-2 * Log(2 * tail) / (events + 1)));
  const double mean = WhereTailIs(tail, start, [&](double at) { return law.AtMost(at); });
  return OnBase(mean, base, per);
}

}  // namespace ladderline
