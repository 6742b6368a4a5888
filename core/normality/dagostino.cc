#include "core/normality/dagostino.h"

#include <cmath>

#include "core/describe/moments.h"
#include "core/elementary/elementary.h"
#include "core/support/distributions.h"

namespace ladderline {
namespace {

// g1 on a standard normal scale, by a Johnson S_U curve with the variance and kurtosis of g1.
double SkewnessScore(double g1, double n) {
  const double y = g1 * std::sqrt((n + 1) * (n + 3) / (6 * (n - 2)));
  // beta2 - 3 and W² - 1 shrink like 1/n: each is formed as itself, not by subtraction.
  const double beta2_less_3 = 36 * (n - 7) * (n * n + 2 * n - 5) /  //
                              ((n - 2) * (n + 5) * (n + 7) * (n + 9));
  const double w2_less_1 = 2 * beta2_less_3 / (std::sqrt(2 * beta2_less_3 + 4) + 2);
  const double delta = 1 / std::sqrt(Log1p(w2_less_1) / 2);
  const double alpha = std::sqrt(2 / w2_less_1);
  return delta * Asinh(y / alpha);
}

// b2 = g2 + 3 on a standard normal scale, by a Wilson–Hilferty cube root.
double KurtosisScore(double g2, double n) {
  const double variance = 24 * n * (n - 2) * (n - 3) / ((n + 1) * (n + 1) * (n + 3) * (n + 5));
  const double x = (g2 + 6 / (n + 1)) / std::sqrt(variance);
  const double root_beta1 = 6 * (n * n - 5 * n + 2) / ((n + 7) * (n + 9)) *
                            std::sqrt(6 * (n + 3) * (n + 5) / (n * (n - 2) * (n - 3)));
  const double inverse = 2 / root_beta1;
  const double a = 6 + 4 * inverse * (inverse + std::sqrt(1 + inverse * inverse));
  const double cubed = (1 - 2 / a) / (1 + x * std::sqrt(2 / (a - 4)));
  const double root = std::copysign(Pow(std::abs(cubed), 1.0 / 3), cubed);
  return (1 - 2 / (9 * a) - root) / std::sqrt(2 / (9 * a));
}

}  // namespace

NormalityTest DagostinoK2(const CentralSums& sums) {
  const double g1 = SkewnessPop(sums), g2 = ExcessKurtosisPop(sums);
  if (std::isnan(g1)) return {.note = kNoSpread};
  if (sums.n < kDagostinoLeastRows) return {.note = "needs 8 rows"};
  const auto n = static_cast<double>(sums.n);
  const double z1 = SkewnessScore(g1, n), z2 = KurtosisScore(g2, n);
  const double statistic = z1 * z1 + z2 * z2;
  return {statistic, ChiSquareUpperTail(statistic, 2)};
}

}  // namespace ladderline
