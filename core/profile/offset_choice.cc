#include "core/profile/offset_choice.h"

#include <algorithm>
#include <array>
#include <boost/math/tools/toms748_solve.hpp>
#include <cmath>
#include <cstdint>
#include <functional>
#include <limits>
#include <span>
#include <utility>

#include "core/elementary/elementary.h"
#include "core/support/double_double.h"
#include "core/support/math_policy.h"
#include "core/support/systematic_sample.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

constexpr double kLargest = std::numeric_limits<double>::max();
// ln of the smallest normal double and (nearly) of the largest.
constexpr double kLeastLog = -708.3, kLargestLog = 709.7;
// ln 2^40: so many times the range and the logarithm is a straight line to 1e-12.
constexpr double kStraightLog = 27.7;

// Longer columns are searched from the root of a sample of this size.
constexpr std::size_t kSampleRows = std::size_t{1} << 12;

// Sums in blocks and lanes, so that rounding does not grow with the rows.
template <class Term>
double SumOver(std::span<const double> x, Term term) {
  constexpr std::size_t kBlock = 256, kLanes = 4;
  DoubleDouble total;
  for (std::size_t first = 0; first < x.size(); first += kBlock) {
    const std::span<const double> block = x.subspan(first, std::min(kBlock, x.size() - first));
    std::array<double, kLanes> sums = {};
    for (std::size_t i = 0; i < block.size(); ++i) sums[i % kLanes] += term(block[i]);
    total += (sums[0] + sums[1]) + (sums[2] + sums[3]);
  }
  return total.value();
}

// A rising function of ln c, and the room it works in.
class LogSkewness {
 public:
  // Distances from the least value, ascending; the first is 0 and the last finite.
  explicit LogSkewness(std::vector<double> distances)
      : distances_(std::move(distances)), logs_(distances_.size()) {}

  double range() const { return distances_.back(); }
  double MeanDistance() const {
    const double largest = range(), n = static_cast<double>(distances_.size());
    return largest * (SumOver(distances_, [largest](double d) { return d / largest; }) / n);
  }

  // Skewness of ln(d + c), measured from ln c.
  double operator()(double log_c) {
    const std::size_t n = distances_.size();
    const double c = Exp(log_c);
    for (std::size_t i = 0; i < n; ++i) logs_[i] = distances_[i] / c;
    const auto beyond = std::upper_bound(logs_.begin(), logs_.end(), kLargest) - logs_.begin();
    const auto whole = static_cast<std::size_t>(beyond);
    Log1pBlock(logs_.data(), logs_.data(), whole);
    for (std::size_t i = whole; i < n; ++i) logs_[i] = Log(distances_[i]) - log_c;

    const auto count = static_cast<double>(n);
    const double near_mean = SumOver(logs_, [](double y) { return y; }) / count;
    const double mean = near_mean + SumOver(logs_, [=](double y) { return y - near_mean; }) / count;
    // In units of the largest deviation, whose cube might underflow.
    const double unit = 1 / std::max(mean - logs_.front(), logs_.back() - mean);
    const auto power_sum = [&](auto power) {
      return SumOver(logs_, [=](double y) { return power((y - mean) * unit); });
    };
    const double squares = power_sum([](double d) { return d * d; });
    const double cubes = power_sum([](double d) { return d * d * d; });
    return cubes / (squares * std::sqrt(squares / count));
  }

  LogSkewness Sample() const { return LogSkewness(SystematicSample(distances_, kSampleRows)); }
  bool WantsSample() const { return distances_.size() > 8 * kSampleRows; }

 private:
  std::vector<double> distances_;
  std::vector<double> logs_;
};

enum class Search { kFound, kBelow, kAbove };
struct Outcome {
  Search search;
  double log_c;  // kFound
};

Outcome FindRoot(LogSkewness& skewness) {
  const double highest = std::min(Log(skewness.range()) + kStraightLog, kLargestLog);
  double x = Log(skewness.MeanDistance()), step = 1;
  if (skewness.WantsSample()) {
    LogSkewness sample = skewness.Sample();
    if (sample.range() > 0) {
      const Outcome guess = FindRoot(sample);
      if (guess.search == Search::kFound) {
        x = guess.log_c;
        step = 0.1;
      }
    }
  }
  if (highest <= kLeastLog) return {Search::kBelow, kLeastLog};
  x = std::clamp(x, kLeastLog, highest);
  double at_x = skewness(x);
  const bool rise = at_x < 0;
  while (at_x != 0) {
    if (x == (rise ? highest : kLeastLog)) return {rise ? Search::kAbove : Search::kBelow, x};
    const double next = rise ? std::min(x + step, highest) : std::max(x - step, kLeastLog);
    const double at_next = skewness(next);
    if ((at_next < 0) != rise) {
      std::uintmax_t steps = 200;  // halving a bracket of 700 to 1e-12 takes 50
      const auto close = [](double a, double b) { return std::abs(b - a) <= 1e-12; };
      const auto [low, high] =
          rise ? boost::math::tools::toms748_solve(std::ref(skewness), x, next, at_x, at_next,
                                                   close, steps, MathPolicy())
               : boost::math::tools::toms748_solve(std::ref(skewness), next, x, at_next, at_x,
                                                   close, steps, MathPolicy());
      return {Search::kFound, low + (high - low) / 2};
    }
    x = next;
    at_x = at_next;
    step *= 2;
  }
  return {Search::kFound, x};
}

}  // namespace

Result<double> ChooseLogOffset(std::vector<double> values) {
  if (values.empty()) return Error{"there are no values"};
  if (!std::is_sorted(values.begin(), values.end())) std::sort(values.begin(), values.end());
  const double least = values.front() + 0.0, largest = values.back();  // −0 is 0
  if (least == largest) return Error{"all values are " + NumberText(least)};
  const auto others = std::upper_bound(values.begin(), values.end(), least);
  if (*others == largest) {
    return Error{"there are only two values, " + NumberText(least) + " and " + NumberText(largest) +
                 ", which any offset leaves as skewed as they are"};
  }
  if (others - values.begin() >= values.end() - others) {
    return Error{"half of the values or more are " + NumberText(least) +
                 ", which leaves every logarithm skewed to the right"};
  }
  // A range that overflows is measured in quarters.
  const double unit = std::isfinite(largest - least) ? 1 : 4;
  for (double& x : values) x = x / unit - least / unit;
  LogSkewness skewness(std::move(values));
  const Outcome outcome = FindRoot(skewness);
  if (outcome.search == Search::kAbove) {
    return Error{
        "the values are not skewed to the right, and every logarithm is skewed to the left"};
  }
  const double offset = unit * (Exp(outcome.log_c) - least / unit);
  const bool reached = outcome.search == Search::kFound && std::isfinite(offset);
  if (!reached || !(least + offset > 0)) {
    return Error{"the offset would lie nearer " + NumberText(0 - least) + " than numbers can tell"};
  }
  return offset;
}

}  // namespace ladderline
