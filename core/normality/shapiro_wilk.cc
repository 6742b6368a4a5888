#include "core/normality/shapiro_wilk.h"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <initializer_list>
#include <numbers>
#include <vector>

#include "core/elementary/elementary.h"
#include "core/normality/normal_scores.h"
#include "core/support/distributions.h"
#include "core/support/double_double.h"

namespace ladderline {
namespace {

double Polynomial(double x, std::initializer_list<double> falling_coefficients) {
  double value = 0;
  for (const double coefficient : falling_coefficients) value = value * x + coefficient;
  return value;
}

// Weights of the largest n/2 values, the largest first; those of the smallest are the same with
// their sign changed. Their squares sum to 1/2.
std::vector<double> Weights(std::size_t n) {
  if (n == 3) return {std::numbers::sqrt2 / 2};
  std::vector<double> a(n / 2);
  double sum = 0;  // of all squared scores
  for (std::size_t i = 0; i < a.size(); ++i) {
    a[i] = -NormalScore(i + 1, n);
    sum += 2 * a[i] * a[i];
  }
  // The outermost weights by Royston's polynomials, the others in proportion to their scores.
  const double u = 1 / std::sqrt(static_cast<double>(n)), length = std::sqrt(sum);
  const double m1 = a[0], m2 = a[1];
  const double a1 =
      Polynomial(u, {-2.706056, 4.434685, -2.071190, -0.147981, 0.221157, 0}) + m1 / length;
  const double a2 =
      Polynomial(u, {-3.582633, 5.682633, -1.752461, -0.293762, 0.042981, 0}) + m2 / length;
  const bool both = n > 5;
  const double phi = both ? (sum - 2 * m1 * m1 - 2 * m2 * m2) / (1 - 2 * a1 * a1 - 2 * a2 * a2)
                          : (sum - 2 * m1 * m1) / (1 - 2 * a1 * a1);
  for (double& weight : a) weight /= std::sqrt(phi);
  a[0] = a1;
  if (both) a[1] = a2;
  return a;
}

// P(W ≤ w) for normal samples, from 1 - w.
double PValue(double one_less_w, std::size_t n) {
  const double y = Log(one_less_w), rows = static_cast<double>(n);
  if (n <= 11) {
    const double gamma = 0.459 * rows - 2.273;
    assert(y < gamma);  // W is at least n a1²/(n - 1)
    const double mean = Polynomial(rows, {-0.0006714, 0.025054, -0.39978, 0.5440});
    const double log_sd = Polynomial(rows, {-0.0020322, 0.062767, -0.77857, 1.3822});
    return NormalUpperTail((-Log(gamma - y) - mean) / Exp(log_sd));
  }
  const double log_n = Log(rows);
  const double mean = Polynomial(log_n, {0.0038915, -0.083751, -0.31082, -1.5861});
  const double log_sd = Polynomial(log_n, {0.0030302, -0.082676, -0.4803});
  return NormalUpperTail((y - mean) / Exp(log_sd));
}

// The same for three values, exactly: 6/π (asin √w - asin √(3/4)), written in the two gaps between
// them so that a small p keeps its digits.
double PValueOfThree(double gap, double other_gap) {
  const auto [small, large] = std::minmax(gap, other_gap);
  return 6 / std::numbers::pi * std::atan(std::numbers::sqrt3 * small / (2 * large + small));
}

}  // namespace

NormalityTest ShapiroWilk(std::span<const double> ascending) {
  const std::size_t n = ascending.size();
  if (n > kShapiroWilkMostRows)
    return {.note = "takes up to 5000 rows; anderson_darling takes any number"};
  if (n < kShapiroWilkLeastRows) return {.note = "needs 3 rows"};
  if (ascending.front() == ascending.back()) return {.note = kNoSpread};

  // Deviations from the middle value, in units of the power of two next to the largest magnitude,
  // in two steps since the power itself may lie outside the range of a double.
  const int exponent = std::ilogb(std::max(-ascending.front(), ascending.back()));
  const double half = std::ldexp(1, -exponent / 2), rest = std::ldexp(1, -exponent + exponent / 2);
  const double middle = ascending[n / 2] * half * rest;
  std::vector<double> x(n);
  DoubleDouble total;
  for (std::size_t i = 0; i < n; ++i) {
    x[i] = ascending[i] * half * rest - middle;
    total += x[i];
  }
  const double mean = total.value() / static_cast<double>(n);

  const std::vector<double> a = Weights(n);
  DoubleDouble weights_squared, slope;
  for (std::size_t i = 0; i < a.size(); ++i) {
    weights_squared += 2 * a[i] * a[i];
    slope += a[i] * (x[n - 1 - i] - x[i]);
  }
  const double b = slope.value() / weights_squared.value();

  // W is the squared correlation of values and weights; 1 - W what the values leave around the
  // line through them.
  DoubleDouble spread, residual;
  for (std::size_t i = 0; i < n; ++i) {
    const std::size_t mirrored = n - 1 - i;
    const double weight = i < a.size() ? -a[i] : mirrored < a.size() ? a[mirrored] : 0;
    const double deviation = x[i] - mean, left = deviation - b * weight;
    spread += deviation * deviation;
    residual += left * left;
  }
  const double one_less_w = residual.value() / spread.value();
  return {1 - one_less_w, n == 3 ? PValueOfThree(x[1] - x[0], x[2] - x[1]) : PValue(one_less_w, n)};
}

}  // namespace ladderline
