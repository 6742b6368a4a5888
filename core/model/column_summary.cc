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

// Σ ((x − centre) scale)^power in a fixed order: four running sums per block, so that the additions
// overlap, and the blocks' sums carried without loss.
template <int power>
DoubleDouble CentredSum(const Blocked<double>& numbers, double centre, double scale) {
  DoubleDouble total;
  centre *= scale;
  for (std::size_t b = 0; b < numbers.blocks(); ++b) {
    const std::span<const double> x = numbers.block(b);
    std::array<double, 4> sums = {};
    for (std::size_t i = 0; i < x.size(); ++i) {
      const double d = x[i] * scale - centre;
      sums[i % 4] += power == 1 ? d : d * d;
    }
    total += (sums[0] + sums[1]) + (sums[2] + sums[3]);
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
  double low = std::numeric_limits<double>::infinity(), high = -low;
  for (std::size_t b = 0; b < numbers.blocks(); ++b) {
    for (const double x : numbers.block(b)) {
      low = x < low ? x : low;
      high = x > high ? x : high;
    }
  }
  out.observed_low = low;
  out.observed_high = high;
  constexpr std::array<double, 3> kQuartiles = {0.25, 0.5, 0.75};
  const std::vector<double> quartiles = Quantiles(NumbersColumn(numbers), kQuartiles);
  out.lower_quartile = quartiles[0];
  out.median = quartiles[1];
  out.upper_quartile = quartiles[2];
  // About the median first, so that the mean keeps its digits; then about the mean.
  const double scale = UnitFor(low, high);
  const double mean =
      quartiles[1] + CentredSum<1>(numbers, quartiles[1], scale).value() / n / scale;
  const DoubleDouble slip = CentredSum<1>(numbers, mean, scale);
  out.mean = mean + slip.value() / n / scale;
  if (numbers.size() >= 2) {
    const double squares =
        CentredSum<2>(numbers, mean, scale).value() - slip.value() * slip.value() / n;
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
    case Wanted::kKey:
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
