#include "core/support/distributions.h"

#include <algorithm>
#include <boost/math/distributions/chi_squared.hpp>
#include <boost/math/distributions/fisher_f.hpp>
#include <boost/math/distributions/normal.hpp>
#include <boost/math/distributions/students_t.hpp>
#include <cmath>
#include <limits>

#include "core/support/math_policy.h"

namespace ladderline {
namespace {

namespace bm = boost::math;
// Domains are checked here first. What a series still cannot deliver for absurd degrees of freedom
// is NaN or its best value rather than an exception.
using Policy =
    bm::policies::normalise<MathPolicy,
                            bm::policies::evaluation_error<bm::policies::ignore_error>>::type;
using Normal = bm::normal_distribution<double, Policy>;
using StudentT = bm::students_t_distribution<double, Policy>;
using FisherF = bm::fisher_f_distribution<double, Policy>;
using ChiSquared = bm::chi_squared_distribution<double, Policy>;

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr double kInfinity = std::numeric_limits<double>::infinity();

bool IsProbability(double p) { return p >= 0 && p <= 1; }

}  // namespace

double NormalLowerTail(double z) { return NormalUpperTail(-z); }

double NormalUpperTail(double z) {
  if (std::isnan(z)) return kNaN;
  if (std::isinf(z)) return z > 0 ? 0 : 1;
  return bm::cdf(bm::complement(Normal(), z));
}

double NormalTwoSided(double z) { return 2 * NormalUpperTail(std::abs(z)); }

double NormalQuantile(double p) { return -NormalUpperQuantile(p); }

double NormalUpperQuantile(double q) {
  if (!IsProbability(q)) return kNaN;
  if (q == 0 || q == 1) return q == 0 ? kInfinity : -kInfinity;
  return bm::quantile(bm::complement(Normal(), q));
}

double StudentTLowerTail(double t, double df) { return StudentTUpperTail(-t, df); }

double StudentTUpperTail(double t, double df) {
  if (std::isnan(t) || !(df > 0)) return kNaN;
  if (std::isinf(t)) return t > 0 ? 0 : 1;
  if (std::isinf(df)) return NormalUpperTail(t);
  return bm::cdf(bm::complement(StudentT(df), t));
}

double StudentTTwoSided(double t, double df) { return 2 * StudentTUpperTail(std::abs(t), df); }

double StudentTQuantile(double p, double df) { return -StudentTUpperQuantile(p, df); }

double StudentTUpperQuantile(double q, double df) {
  if (!IsProbability(q) || !(df > 0)) return kNaN;
  if (q == 0 || q == 1) return q == 0 ? kInfinity : -kInfinity;
  if (std::isinf(df)) return NormalUpperQuantile(q);
  return bm::quantile(bm::complement(StudentT(df), q));
}

double StudentTCritical(double level, double df) {
  return StudentTUpperQuantile((1 - level) / 2, df);
}

double FUpperTail(double f, double df1, double df2) {
  if (std::isnan(f) || !(df1 > 0) || !(df2 > 0)) return kNaN;
  if (f <= 0) return 1;
  if (std::isinf(f)) return 0;
  if (std::isinf(df1) && std::isinf(df2)) return f <= 1 ? 1 : 0;
  if (std::isinf(df2)) return ChiSquareUpperTail(f * df1, df1);
  if (std::isinf(df1)) return ChiSquareLowerTail(df2 / f, df2);
  return bm::cdf(bm::complement(FisherF(df1, df2), f));
}

double FLowerTail(double f, double df1, double df2) {
  return FUpperTail(1 / std::max(f, 0.0), df2, df1);
}

double FUpperQuantile(double q, double df1, double df2) {
  if (!IsProbability(q) || !(df1 > 0) || !(df2 > 0)) return kNaN;
  if (std::isinf(df1) && std::isinf(df2)) return 1;
  if (q == 0 || q == 1) return q == 0 ? kInfinity : 0;
  if (std::isinf(df2)) return ChiSquareUpperQuantile(q, df1) / df1;
  if (std::isinf(df1)) return df2 / ChiSquareQuantile(q, df2);
  return bm::quantile(bm::complement(FisherF(df1, df2), q));
}

double ChiSquareLowerTail(double x, double df) {
  if (std::isnan(x) || !(df > 0) || std::isinf(df)) return kNaN;
  if (x <= 0) return 0;
  if (std::isinf(x)) return 1;
  return bm::cdf(ChiSquared(df), x);
}

double ChiSquareUpperTail(double x, double df) {
  if (std::isnan(x) || !(df > 0) || std::isinf(df)) return kNaN;
  if (x <= 0) return 1;
  if (std::isinf(x)) return 0;
  return bm::cdf(bm::complement(ChiSquared(df), x));
}

double ChiSquareQuantile(double p, double df) {
  if (!IsProbability(p) || !(df > 0) || std::isinf(df)) return kNaN;
  if (p == 0 || p == 1) return p == 0 ? 0 : kInfinity;
  return bm::quantile(ChiSquared(df), p);
}

double ChiSquareUpperQuantile(double q, double df) {
  if (!IsProbability(q) || !(df > 0) || std::isinf(df)) return kNaN;
  if (q == 0 || q == 1) return q == 0 ? kInfinity : 0;
  return bm::quantile(bm::complement(ChiSquared(df), q));
}

}  // namespace ladderline
