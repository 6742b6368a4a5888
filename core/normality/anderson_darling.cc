#include "core/normality/anderson_darling.h"

#include <cmath>
#include <numbers>
#include <utility>

#include "core/describe/moments.h"
#include "core/elementary/elementary.h"
#include "core/support/distributions.h"
#include "core/support/double_double.h"

namespace ladderline {
namespace {

// ln P(Z ≥ z) for z >= 0.
double LogUpperTail(double z) {
  // Far out the tail itself underflows; five terms of its asymptotic series leave 1e-11 here.
  constexpr double kFar = 30;
  if (z < kFar) return Log(NormalUpperTail(z));
  const double v = 1 / (z * z);
  return -z * z / 2 - Log(z * std::sqrt(2 * std::numbers::pi)) +
         Log1p(-v * (1 - v * (3 - v * (15 - v * 105))));
}

// ln P(Z ≤ z) and ln P(Z ≥ z).
std::pair<double, double> LogTails(double z) {
  const double near = Log1p(-NormalUpperTail(std::abs(z))), far = LogUpperTail(std::abs(z));
  return z > 0 ? std::pair(near, far) : std::pair(far, near);
}

constexpr double kFormulaEnd = 10, kLeastP = 3.7e-24;

double PValue(double adjusted) {
  const double a = adjusted;
  if (a < 0.2) return -Expm1(-13.436 + (101.14 - 223.73 * a) * a);
  if (a < 0.34) return -Expm1(-8.318 + (42.796 - 59.938 * a) * a);
  if (a < 0.6) return Exp(0.9177 - (4.279 + 1.38 * a) * a);
  if (a < kFormulaEnd) return Exp(1.2937 - (5.709 - 0.0186 * a) * a);
  return kLeastP;
}

}  // namespace

NormalityTest AndersonDarling(std::span<const double> ascending) {
  if (ascending.size() < kAndersonDarlingLeastRows) return {.note = "needs 8 rows"};
  if (ascending.front() == ascending.back()) return {.note = kNoSpread};
  PowerSums<2> sums;
  for (const double x : ascending) sums.Add(x);
  const CentralSums summary = sums.Summarise();
  const auto n = static_cast<double>(ascending.size());
  const DoubleDouble mean = PreciseMean(summary);
  const double sd = Sqrt(summary.m2 / (n - 1)).value();

  DoubleDouble total;
  for (std::size_t i = 0; i < ascending.size(); ++i) {
    const double x = summary.shift == 0 ? ascending[i] : std::ldexp(ascending[i], summary.shift);
    const auto [lower, upper] = LogTails(((x - mean.hi) - mean.lo) / sd);
    const double below = 2 * static_cast<double>(i) + 1;
    total += below * lower;
    total += (2 * n - below) * upper;
  }
  const double a2 = ((-total) / n - n).value();
  const double adjusted = a2 * (1 + 0.75 / n + 2.25 / (n * n));
  return {a2, PValue(adjusted),
          adjusted < kFormulaEnd ? nullptr : "p_value is at most this: the formula ends here"};
}

}  // namespace ladderline
