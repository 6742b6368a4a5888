#include "core/rates/tails.h"

#include <algorithm>
#include <boost/math/quadrature/gauss.hpp>
#include <cmath>
#include <limits>

#include "core/elementary/elementary.h"
#include "core/support/double_double.h"

namespace ladderline {
namespace {

constexpr double kEps = std::numeric_limits<double>::epsilon();
constexpr double kHalfLog2Pi = 0.9189385332046727;

// Steps after which a series or continued fraction gives way to the integral, which costs as much.
constexpr int kMostSteps = 400;
constexpr double kNotReached = -1;

// The integrals end where the integrand has fallen by e^-40 = 4e-18.
constexpr double kEndOfIntegrand = 40;

// lnΓ(k + 1) − (k + ½) ln k + k − ½ ln 2π, the error of Stirling's formula; k > 0.
double StirlingError(double k) {
  double shifted = 0;
  for (; k < 16; ++k) shifted += (k + 0.5) * Log1p(1 / k) - 1;
  const double r = 1 / k, s = r * r;  // from 16 on the next term is under 1e-16
  return shifted +
         r * (1.0 / 12 - s * (1.0 / 360 - s * (1.0 / 1260 - s * (1.0 / 1680 - s / 1188))));
}

// ln(1 + y) − 2r = 2 (r³/3 + r⁵/5 + …), where r = y/(2 + y).
double LogRemainder(double r) {
  double power = 2 * r, sum = 0;
  for (int i = 3;; i += 2) {
    power *= r * r;
    const double next = sum + power / i;
    if (next == sum) return sum;
    sum = next;
  }
}

// Where that series is quick, |r| ≤ 1/3, and where ln(1 + y) − y would lose digits.
bool IsNearOne(double y) { return y > -0.5 && y < 1; }

// (1 + u) ln(1 + u) − u, u ≥ −1.
double Deviance(double u) {
  if (u <= -1) return 1;
  if (!IsNearOne(u)) return (1 + u) * Log1p(u) - u;
  const double r = u / (2 + u);
  return u * r + (1 + u) * LogRemainder(r);
}

// y − ln(1 + y), y > −1.
double LogShortfall(double y) {
  if (!IsNearOne(y)) return y - Log1p(y);
  const double r = y / (2 + y);
  return y * r - LogRemainder(r);
}

// e^−v − 1 + v, v ≥ 0.
double ExpExcess(double v) {
  if (v > 0.5) return Exp(-v) - 1 + v;
  double term = v * v / 2, sum = term;
  for (int i = 3; std::abs(term) > kEps / 8 * sum; ++i) {
    term *= -v / i;
    sum += term;
  }
  return sum;
}

// ∫ exp(−fall(v)) dv over v ≥ 0, where fall(v) = slope·v + curvature·v²/2 + … and the rest of the
// series takes away from it. NaN where counts near the ends of the range of doubles leave no such
// numbers.
template <class Fall>
double Integral(double slope, double curvature, const Fall& fall) {
  const double bend = 2 * kEndOfIntegrand * std::max(curvature, 0.0);
  double end = 2 * kEndOfIntegrand / (slope + std::sqrt(slope * slope + bend));
  while (end > 0 && fall(end) < kEndOfIntegrand) end *= 1.25;
  if (!(end > 0 && std::isfinite(end))) return std::numeric_limits<double>::quiet_NaN();
  const auto integrand = [&](double v) { return Exp(-fall(v)); };
  using Rule = boost::math::quadrature::gauss<double, 20>;
  // Panels that double in width: the integrand may have a singularity at a small negative v.
  double sum = 0, high = end;
  for (int i = 0; i < 5; ++i, high /= 2) sum += Rule::integrate(integrand, high / 2, high);
  return sum + Rule::integrate(integrand, 0.0, high);
}

// 1 + q(0) + q(0) q(1) + …, or kNotReached.
template <class Ratio>
double RatioSeries(const Ratio& q) {
  double term = 1, sum = 1;
  for (int i = 0; i < kMostSteps; ++i) {
    term *= q(i);
    sum += term;
    if (term < kEps / 4 * sum) return sum;
  }
  return kNotReached;
}

// Γ(k + 1, x) e^x x^−k, or kNotReached: DLMF 8.9.2 by Lentz's method in Thompson's form. For a
// whole k it ends after k steps.
double GammaFraction(double k, double x) {
  constexpr double kTiny = 1e-300;
  const auto nonzero = [](double v) { return v == 0 ? kTiny : v; };
  double b = x - k, c = 1 / kTiny, d = 1 / nonzero(b), product = d;
  for (int i = 1; i <= kMostSteps; ++i) {
    const double a = i * (k + 1 - i);
    b += 2;
    d = 1 / nonzero(b + a * d);
    c = nonzero(b + a / c);
    product *= c * d;
    if (std::abs(c * d - 1) < kEps) return x * product;
  }
  return kNotReached;
}

}  // namespace

PoissonLaw::PoissonLaw(double count)
    : count_(count),
      log_scale_(count > 0 ? -StirlingError(count) - kHalfLog2Pi - Log(count) / 2 : 0) {}

double PoissonLaw::LogDensity(double mean) const {
  return log_scale_ - mean * Deviance((count_ - mean) / mean);
}

double PoissonLaw::LogFactorial() const {
  return count_ > 0 ? count_ * (Log(count_) - 1) - log_scale_ : 0;
}

LogTail PoissonLaw::AtLeast(double mean) const {
  const double k = count_;
  double over_density = RatioSeries([&](int i) { return mean / (k + 1 + i); });
  if (over_density == kNotReached) {
    const double slope = k - mean + 1;
    over_density =
        1 + mean * Integral(slope, mean, [&](double v) { return slope * v + mean * ExpExcess(v); });
  }
  return {LogDensity(mean) + Log(over_density), k / over_density};
}

LogTail PoissonLaw::AtMost(double mean) const {
  const double k = count_;
  double over_density = GammaFraction(k, mean);
  if (over_density == kNotReached) {
    const double slope = mean - k;
    over_density =
        mean * Integral(slope, k, [&](double v) { return slope * v + k * LogShortfall(v); });
  }
  return {LogDensity(mean) + Log(over_density), -mean / over_density};
}

BinomialLaw::BinomialLaw(double successes, double failures)
    : successes_(successes), failures_(failures), log_scale_(0) {
  if (successes > 0 && failures > 0) {
    log_scale_ = StirlingError(successes + failures) - StirlingError(successes) -
                 StirlingError(failures) - kHalfLog2Pi -
                 (Log(successes) - Log1p(successes / failures)) / 2;
  }
}

double BinomialLaw::LogChoices() const {
  const double k = successes_, m = failures_;
  return k > 0 && m > 0 ? log_scale_ + k * Log1p(m / k) + m * Log1p(k / m) : 0;
}

double BinomialLaw::LogDensity(double success, double failure) const {
  const double k = successes_, m = failures_, total = success + failure;
  // k − np = mp − (n − k)q exactly: with many trials a rounded np would be all error.
  const double excess = (TwoProduct(k, failure) - TwoProduct(m, success)).value() / total;
  const double expected_k = (k + m) * (success / total), expected_m = (k + m) * (failure / total);
  return log_scale_ - expected_k * Deviance(excess / expected_k) -
         expected_m * Deviance(-excess / expected_m);
}

LogTail BinomialLaw::AtLeast(double success, double failure) const {
  const double k = successes_, m = failures_;
  const double p = success / (success + failure), q = failure / (success + failure);
  // The sum of the densities from k on. For fractional counts it has no end, and a form of it whose
  // terms stay positive is taken.
  double over_density =
      m == std::floor(m)
          ? RatioSeries([&](int i) { return (m - i) / (k + 1 + i) * (success / failure); })
          : q * RatioSeries([&](int i) { return (k + m + 1 + i) / (k + 1 + i) * p; });
  if (over_density < 0) {
    const double odds = success / failure;
    const double slope =
        (TwoProduct(k + 1, failure) - TwoProduct(m - 1, success)).value() / failure;
    const auto fall = [&](double v) {
      const double excess = ExpExcess(v);
      return slope * v + (m - 1) * (LogShortfall(odds * (v - excess)) + odds * excess);
    };
    over_density = 1 + m * odds * Integral(slope, (m - 1) * odds * (1 + odds), fall);
  }
  return {LogDensity(success, failure) + Log(over_density), k * q / over_density};
}

double WhereTailIs(double tail, double start, const std::function<LogTail(double)>& tail_at) {
  const double target = Log(tail);
  double at = start, last = std::numeric_limits<double>::infinity();
  // Six steps are usual. Ends at rounding level, or where rounding makes the steps grow again.
  for (int i = 0; i < 100; ++i) {
    const LogTail here = tail_at(at);
    const double step = (target - here.log_p) / here.slope;
    if (!(std::abs(step) > kEps / 2) || (std::abs(step) >= last && last < 1e-6)) break;
    last = std::abs(step);
    at *= Exp(step);
  }
  return at;
}

}  // namespace ladderline
