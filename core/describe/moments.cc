#include "core/describe/moments.h"

#include <algorithm>
#include <cmath>
#include <limits>

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

double Unscaled(double a, int shift) { return shift == 0 ? a : std::ldexp(a, -shift); }
double Unscaled(DoubleDouble a, int shift) { return Unscaled(a.value(), shift); }

double Divided(DoubleDouble sum, std::int64_t divisor) {
  return divisor > 0 ? sum.value() / static_cast<double>(divisor) : kNaN;
}

double G1(const CentralSums& s) {
  const double m2 = s.m2.value();
  return std::sqrt(static_cast<double>(s.n)) * s.m3.value() / (m2 * std::sqrt(m2));
}

// Near 0 where the tails are those of a normal law: the difference is taken before rounding.
DoubleDouble G2(const CentralSums& s) {
  return s.m4 * static_cast<double>(s.n) / (s.m2 * s.m2) - 3.0;
}

bool Spread(DoubleDouble sum_of_squares) { return sum_of_squares.hi > 0; }

}  // namespace

double Sum(const CentralSums& s) {
  if (s.n == 0) return kNaN;
  return Unscaled(TwoProduct(s.centre, static_cast<double>(s.n)) + s.sum, s.shift);
}
DoubleDouble PreciseMean(const CentralSums& s) {
  return s.sum / static_cast<double>(s.n) + s.centre;
}
double Mean(const CentralSums& s) { return s.n == 0 ? kNaN : Unscaled(PreciseMean(s), s.shift); }
double VarianceSamp(const CentralSums& s) { return Unscaled(Divided(s.m2, s.n - 1), 2 * s.shift); }
double VariancePop(const CentralSums& s) { return Unscaled(Divided(s.m2, s.n), 2 * s.shift); }
double StdDevSamp(const CentralSums& s) {
  return Unscaled(std::sqrt(Divided(s.m2, s.n - 1)), s.shift);
}
double StdDevPop(const CentralSums& s) { return Unscaled(std::sqrt(Divided(s.m2, s.n)), s.shift); }

double ZScore(double x, const CentralSums& s) {
  if (s.n < 2 || !Spread(s.m2)) return kNaN;
  const DoubleDouble deviation = -(PreciseMean(s) - std::ldexp(x, s.shift));
  return deviation.value() / std::sqrt(Divided(s.m2, s.n - 1));
}

double SkewnessPop(const CentralSums& s) { return Spread(s.m2) ? G1(s) : kNaN; }

double Skewness(const CentralSums& s) {
  if (s.n < 3 || !Spread(s.m2)) return kNaN;
  const auto n = static_cast<double>(s.n);
  return G1(s) * std::sqrt(n * (n - 1)) / (n - 2);
}

double ExcessKurtosisPop(const CentralSums& s) { return Spread(s.m2) ? G2(s).value() : kNaN; }

double ExcessKurtosis(const CentralSums& s) {
  if (s.n < 4 || !Spread(s.m2)) return kNaN;
  const auto n = static_cast<double>(s.n);
  return ((G2(s) * (n + 1) + 6.0) * (n - 1) / TwoProduct(n - 2, n - 3)).value();
}

double CovarianceSamp(const CentralCoSums& s) {
  return Unscaled(Divided(s.xy, s.n - 1), s.y_shift + s.x_shift);
}
double CovariancePop(const CentralCoSums& s) {
  return Unscaled(Divided(s.xy, s.n), s.y_shift + s.x_shift);
}

double Correlation(const CentralCoSums& s) {
  if (!Spread(s.xx) || !Spread(s.yy)) return kNaN;
  return std::clamp((s.xy / (Sqrt(s.xx) * Sqrt(s.yy))).value(), -1.0, 1.0);
}

double RegressionSlope(const CentralCoSums& s) {
  return Spread(s.xx) ? Unscaled(s.xy / s.xx, s.y_shift - s.x_shift) : kNaN;
}

double RegressionIntercept(const CentralCoSums& s) {
  return Spread(s.xx) ? Unscaled(s.y_mean - s.xy / s.xx * s.x_mean, s.y_shift) : kNaN;
}

double RegressionR2(const CentralCoSums& s) {
  if (!Spread(s.xx)) return kNaN;
  if (!Spread(s.yy)) return s.yy.hi == 0 ? 1 : kNaN;
  return std::clamp((s.xy / s.xx * (s.xy / s.yy)).value(), 0.0, 1.0);
}

double RegressionAverageX(const CentralCoSums& s) {
  return s.n == 0 ? kNaN : Unscaled(s.x_mean, s.x_shift);
}
double RegressionAverageY(const CentralCoSums& s) {
  return s.n == 0 ? kNaN : Unscaled(s.y_mean, s.y_shift);
}
double RegressionSxx(const CentralCoSums& s) {
  return s.n == 0 ? kNaN : Unscaled(s.xx, 2 * s.x_shift);
}
double RegressionSyy(const CentralCoSums& s) {
  return s.n == 0 ? kNaN : Unscaled(s.yy, 2 * s.y_shift);
}
double RegressionSxy(const CentralCoSums& s) {
  return s.n == 0 ? kNaN : Unscaled(s.xy, s.y_shift + s.x_shift);
}

}  // namespace ladderline
