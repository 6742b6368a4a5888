#include "core/profile/lambda_search.h"

#include <algorithm>
#include <cmath>
#include <limits>

#include "core/support/distributions.h"

namespace ladderline {
namespace {

constexpr double kInf = std::numeric_limits<double>::infinity();
constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

// In units of λ over which the function changes its shape, Newton's method errs by about d², d its
// last step, and the interpolation by (d1 d2)², the distances from its two points. The last step is
// taken unseen once that is 1e-12.
constexpr double kLastDistance = 1e-6;
// Holds the error to 1e-11 in λ itself where data of little spread hardly bend the profile.
constexpr double kLargestUnit = 10;
// Bisection alone narrows the search to 1e-14 in 50 steps; reaching the cap is our bug, and the
// last λ is still inside the bracket.
constexpr int kMostSteps = 100;

struct Sample {
  double x, value, slope;
};

// Where the cubic through two values and slopes of x as a function of the value is zero.
double InverseCubic(const Sample& a, const Sample& b) {
  const double h = b.value - a.value, u = -a.value / h, v = 1 - u;
  return a.x * v * v * (1 + 2 * u) + b.x * u * u * (1 + 2 * v) +
         h * u * v * (v / a.slope - u / b.slope);
}

struct Crossing {
  double x;
  bool inside;  // false: no change of sign, x is the end towards which the value falls to zero
};

// Where a falling function crosses zero between low and high.
template <class Function>
Crossing FindCrossing(Function function, double start, double low, double high, double unit) {
  double least = -kInf, most = kInf;  // the zero is known to be between these
  double x = std::clamp(start, low, high), last_step = high - low;
  unit = std::min(unit, kLargestUnit);
  Sample previous{};
  for (int i = 0; i < kMostSteps; ++i) {
    const Sample here = function(x);
    if (here.value == 0) return {x, true};
    if (here.value > 0) {
      if (x >= high) return {high, false};
      least = x;
    } else {
      if (x <= low) return {low, false};
      most = x;
    }
    double next = i == 0 ? kNaN : InverseCubic(previous, here);
    const bool interpolated = next > least && next < most;
    if (!interpolated) next = x - here.value / here.slope;
    next = std::clamp(next, low, high);
    if (!(next > least && next < most) || std::fabs(next - x) > last_step) {
      next = (std::max(least, low) + std::min(most, high)) / 2;
    }
    last_step = std::fabs(next - x);
    const double distance =
        last_step / unit * (interpolated ? std::fabs(next - previous.x) / unit : 1);
    if (distance <= kLastDistance) return {next, true};
    previous = here;
    x = next;
  }
  return {x, true};
}

}  // namespace

ProfileMaximum MaximiseProfile(const Profile& profile, double start, double unit) {
  const auto score = [&](double lambda) {
    const ProfilePoint point = profile(lambda);
    return Sample{lambda, point.score, point.score_slope};
  };
  const Crossing top = FindCrossing(score, start, kLeastLambda, kLargestLambda, unit);
  return {top.x, !top.inside};
}

ProfileInterval LikelihoodInterval(const Profile& profile, double lambda, const ProfilePoint& top,
                                   double level, double unit) {
  // The signed root of the likelihood ratio is nearly a straight line in λ.
  const double root = std::sqrt(ChiSquareQuantile(level, 1));
  const double half_width = top.score_slope < 0 ? root / std::sqrt(-top.score_slope) : kInf;
  const auto limit = [&](double direction) {
    const auto distance_left = [&](double x) {
      const ProfilePoint point = profile(direction * x);
      const double drop = std::sqrt(std::max(0.0, 2 * (top.log_likelihood - point.log_likelihood)));
      return Sample{x, root - drop, direction * point.score / drop};
    };
    const double from = direction * lambda, end = direction > 0 ? kLargestLambda : -kLeastLambda;
    const Crossing crossing = FindCrossing(distance_left, from + half_width, from, end, unit);
    return crossing.inside ? direction * crossing.x : kNaN;
  };
  return {limit(-1), limit(1)};
}

}  // namespace ladderline
