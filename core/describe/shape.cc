#include "core/describe/shape.h"

#include <algorithm>
#include <cassert>
#include <cmath>

#include "core/describe/moments.h"
#include "core/describe/quantiles.h"
#include "core/support/prose.h"

namespace ladderline {
namespace {

std::size_t Holding(std::span<const double> ascending, double value) {
  const auto range = std::equal_range(ascending.begin(), ascending.end(), value);
  return static_cast<std::size_t>(range.second - range.first);
}

std::string PercentOf(std::size_t part, std::size_t whole) {
  return Percent(static_cast<double>(part) / static_cast<double>(whole));
}

// Below this many rows skewness and kurtosis tell next to nothing.
constexpr std::size_t kFewRows = 8;

// Standard errors of G1 and G2 for normal data.
// Source: Joanes & Gill, The Statistician 47 (1998).
double SkewnessError(double n) {
  return std::sqrt(6 * n * (n - 1) / ((n - 2) * (n + 1) * (n + 3)));
}
double KurtosisError(double n) {
  return 2 * SkewnessError(n) * std::sqrt((n * n - 1) / ((n - 3) * (n + 5)));
}

std::string Sides(const ColumnShape& shape) {
  const auto n = static_cast<double>(shape.rows);
  const double skewness = std::abs(shape.skewness), noise = 2 * SkewnessError(n);
  if (skewness >= 0.5) {
    if (skewness <= noise) return "No clear tail among so few rows";
    const std::string tail = skewness >= 1 ? "Long tail" : "Somewhat longer tail";
    return tail + (shape.skewness > 0 ? " of large values" : " of small values");
  }
  const double kurtosis = std::abs(shape.excess_kurtosis);
  if (kurtosis < 1 || kurtosis <= 2 * KurtosisError(n)) return "Both sides look alike";
  return shape.excess_kurtosis > 0
             ? "Both sides look alike, with more far-out values than a bell curve"
             : "Both sides look alike, with fewer far-out values than a bell curve";
}

std::string MeanAgainstMedian(const ColumnShape& shape) {
  const double gap = shape.mean - shape.median;
  if (!(std::abs(gap) >= 0.1 * shape.sd)) return "mean and median are close";
  if (shape.least >= 0 && shape.median > 0) {
    const double ratio = shape.mean / shape.median;
    if (ratio >= 1.5) return "the mean is " + Rounded(ratio, 2) + " times the median";
    return "the mean is " + Rounded(100 * std::abs(ratio - 1), 2) +
           (gap > 0 ? "% above the median" : "% below the median");
  }
  return "the mean lies " + Rounded(std::abs(gap), 3) +
         (gap > 0 ? " above the median" : " below the median");
}

// From this share of the rows on, a single value at an end is worth a word.
constexpr double kHeap = 0.2;

}  // namespace

ColumnShape ShapeOfColumn(std::span<const double> ascending) {
  assert(!ascending.empty());
  PowerSums<4> sums;
  for (const double x : ascending) sums.Add(x);
  const CentralSums summary = sums.Summarise();
  const auto first_from_zero = std::lower_bound(ascending.begin(), ascending.end(), 0.0);
  return {.rows = ascending.size(),
          .zeros = Holding(ascending, 0),
          .negatives = static_cast<std::size_t>(first_from_zero - ascending.begin()),
          .least = ascending.front(),
          .lower_quartile = OrderedQuantile(ascending, 0.25),
          .median = OrderedQuantile(ascending, 0.5),
          .upper_quartile = OrderedQuantile(ascending, 0.75),
          .largest = ascending.back(),
          .mean = Mean(summary),
          .sd = StdDevSamp(summary),
          .skewness = Skewness(summary),
          .excess_kurtosis = ExcessKurtosis(summary),
          .rows_at_least = Holding(ascending, ascending.front()),
          .rows_at_largest = Holding(ascending, ascending.back())};
}

std::string ShapeReading(const ColumnShape& shape) {
  if (shape.rows == 1) return "A single value, " + PlainNumber(shape.least) + ".";
  if (shape.least == shape.largest)
    return "All " + std::to_string(shape.rows) + " values are " + PlainNumber(shape.least) + ".";
  if (shape.rows < kFewRows)
    return "Only " + std::to_string(shape.rows) + " values: too few to speak of a shape.";
  if (shape.rows_at_least + shape.rows_at_largest == shape.rows) {
    return "Only two values occur: " + PlainNumber(shape.least) + " in " +
           PercentOf(shape.rows_at_least, shape.rows) + " of the rows, " +
           PlainNumber(shape.largest) + " in the others.";
  }
  std::string reading = Sides(shape) + ": " + MeanAgainstMedian(shape);
  if (shape.zeros > 0 && shape.negatives == 0)
    reading += ", and " + PercentOf(shape.zeros, shape.rows) + " of the values are zero";
  const auto heap = [&](std::size_t rows, double value, const char* end) {
    if (value != 0 && static_cast<double>(rows) >= kHeap * static_cast<double>(shape.rows)) {
      reading += ", and " + PercentOf(rows, shape.rows) + " of the values are " +
                 PlainNumber(value) + ", the " + end;
    }
  };
  heap(shape.rows_at_least, shape.least, "least");
  heap(shape.rows_at_largest, shape.largest, "largest");
  return reading + ".";
}

}  // namespace ladderline
