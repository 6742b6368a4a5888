#include "core/model/column_summary.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

#include "core/describe/quantiles.h"

namespace ladderline {
namespace {

class NumbersColumn final : public BlockedColumn {
 public:
  explicit NumbersColumn(const Blocked<double>& numbers) : numbers_(numbers) {}
  std::size_t blocks() const override { return numbers_.blocks(); }
  std::span<const double> block(std::size_t b) const override { return numbers_.block(b); }

 private:
  const Blocked<double>& numbers_;
};

// Loops below keep kLanes running results in a fixed order, so that the steps overlap.
constexpr std::size_t kLanes = 4;

struct Range {
  double low = std::numeric_limits<double>::infinity(), high = -low;
};

Range RangeOf(const Blocked<double>& numbers) {
  std::array<Range, kLanes> lanes;
  const auto add = [&](double x, Range& lane) {
    lane.low = x < lane.low ? x : lane.low;
    lane.high = x > lane.high ? x : lane.high;
  };
  for (std::size_t b = 0; b < numbers.blocks(); ++b) {
    const std::span<const double> x = numbers.block(b);
    std::size_t i = 0;
    for (; i + kLanes <= x.size(); i += kLanes)
      for (std::size_t l = 0; l < kLanes; ++l) add(x[i + l], lanes[l]);
    for (; i < x.size(); ++i) add(x[i], lanes[0]);
  }
  Range range;
  for (const Range& lane : lanes) {
    range.low = std::min(range.low, lane.low);
    range.high = std::max(range.high, lane.high);
  }
  return range;
}

// Σ d and Σ d² for d = (x − centre) scale; the blocks' sums carried without loss.
struct CentredSums {
  DoubleDouble first, second;
};

CentredSums SumsAbout(const Blocked<double>& numbers, double centre, double scale) {
  CentredSums total;
  centre *= scale;
  for (std::size_t b = 0; b < numbers.blocks(); ++b) {
    const std::span<const double> x = numbers.block(b);
    std::array<double, kLanes> first = {}, second = {};
    const auto add = [&](double value, std::size_t lane) {
      const double d = value * scale - centre;
      first[lane] += d;
      second[lane] += d * d;
    };
    std::size_t i = 0;
    for (; i + kLanes <= x.size(); i += kLanes)
      for (std::size_t l = 0; l < kLanes; ++l) add(x[i + l], l);
    for (; i < x.size(); ++i) add(x[i], 0);
    total.first += (first[0] + first[1]) + (first[2] + first[3]);
    total.second += (second[0] + second[1]) + (second[2] + second[3]);
  }
  return total;
}

// A power of two that brings squares of distances into the range of a double; 1 where they are, so
// that nothing is spent on usual numbers.
double UnitFor(double low, double high) {
  constexpr int kHarmless = 300, kMostShift = 1000;
  const double half_range = high / 2 - low / 2;
  if (half_range == 0) return 1;
  const int exponent = std::ilogb(half_range);
  return std::abs(exponent) <= kHarmless
             ? 1
             : std::ldexp(1.0, std::clamp(-exponent, -kMostShift, kMostShift));
}

void SummariseNumbers(const Blocked<double>& numbers, ModelColumn& out) {
  const auto n = static_cast<double>(numbers.size());
  if (numbers.size() == 0) return;
  const auto [low, high] = RangeOf(numbers);
  out.observed_low = low;
  out.observed_high = high;
  constexpr std::array<double, 3> kQuartiles = {0.25, 0.5, 0.75};
  const std::vector<double> quartiles = Quantiles(NumbersColumn(numbers), kQuartiles);
  out.lower_quartile = quartiles[0];
  out.median = quartiles[1];
  out.upper_quartile = quartiles[2];
  // About the median, which lies within one standard deviation of the mean: no digit is lost.
  const double scale = UnitFor(low, high);
  const CentredSums sums = SumsAbout(numbers, out.median, scale);
  out.mean = out.median + sums.first.value() / n / scale;
  if (numbers.size() >= 2) {
    const double squares = (sums.second - sums.first * sums.first / DoubleDouble(n)).value();
    out.sd = std::sqrt(std::max(squares, 0.0) / (n - 1)) / scale;
  }
}

void SummariseLevels(const ColumnSet::Column& column, ModelColumn& out) {
  const LevelTable& table = column.levels;
  if (table.size() > kMostLevels) return;
  for (std::size_t code = 0; code < table.codes(); ++code) {
    if (table.rows(code) > 0) out.levels.push_back({table.text(code), table.rows(code)});
  }
  std::sort(out.levels.begin(), out.levels.end(),
            [](const CategoryLevel& a, const CategoryLevel& b) { return a.text < b.text; });
  for (int i = 0; i < static_cast<int>(out.levels.size()); ++i) {
    const CategoryLevel& level = out.levels[static_cast<size_t>(i)];
    const bool better =
        column.label.has_reference
            ? level.text == column.label.reference
            : out.reference < 0 || level.rows > out.levels[static_cast<size_t>(out.reference)].rows;
    if (better) out.reference = i;
  }
}

}  // namespace

ModelColumn Summarise(const ColumnSet& set, std::size_t i) {
  const ColumnSet::Column& column = set.column(i);
  ModelColumn out;
  out.name = column.label.name;
  out.unit = column.label.unit;
  out.role = column.role;
  out.transform = column.label.transform;
  out.missing = column.missing;
  out.outside = column.outside;
  switch (set.wanted(i)) {
    case Wanted::kText:
      out.kind = ColumnKind::kCategory;
      out.reference_given = column.label.has_reference;
      SummariseLevels(column, out);
      break;
    case Wanted::kCluster:
    case Wanted::kKey:
    case Wanted::kOrder:
    case Wanted::kPresence:
      out.kind = ColumnKind::kText;
      break;
    default:
      out.kind = ColumnKind::kNumber;
      SummariseNumbers(column.numbers, out);
  }
  if (column.numbers_from_text > 0) {
    out.note = std::to_string(column.numbers_from_text) + " value" +
               (column.numbers_from_text == 1 ? " was a number" : "s were numbers") +
               " stored as text";
  }
  return out;
}

}  // namespace ladderline
