#include "core/model/column_summary.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

#include "core/describe/quantiles.h"
#include "core/model/numbers_column.h"
#include "core/regression/column_kernels.h"
#include "core/support/near_text.h"

namespace ladderline {
namespace {

// Σ d and Σ d² for d = (x − centre) scale; the blocks' sums carried without loss.
struct CentredSums {
  DoubleDouble first, second;
};

CentredSums SumsAbout(const Blocked<double>& numbers, double centre, double scale) {
  CentredSums total;
  centre *= scale;
  ForEachRun(numbers, [&](std::span<const double> run) {
    const double* x = run.data();
    const auto n = static_cast<Index>(run.size());
    const auto pair = [=](Index i) { return LoadPair(x + i) * scale - centre; };
    const auto single = [=](Index i) { return x[i] * scale - centre; };
    total.first += SumOver(n, pair, single);
    total.second += SumOver(
        n, [=](Index i) { return pair(i) * pair(i); },
        [=](Index i) { return single(i) * single(i); });
  });
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
  constexpr std::array<double, 5> kPlaces = {0, 0.25, 0.5, 0.75, 1};
  const std::vector<double> values = Quantiles(NumbersColumn(numbers), kPlaces);
  out.observed_low = values[0];
  out.lower_quartile = values[1];
  out.median = values[2];
  out.upper_quartile = values[3];
  out.observed_high = values[4];
  // About the median, which lies within one standard deviation of the mean: no digit is lost.
  const double scale = UnitFor(out.observed_low, out.observed_high);
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
      if (out.levels.size() == 1) out.note = "the same value in every row fitted: no term";
      break;
    case Wanted::kNothing:
      out.parts = column.parts;
      break;
    case Wanted::kCluster:
    case Wanted::kKey:
    case Wanted::kOrder:
    case Wanted::kPresence:
      out.kind = ColumnKind::kText;
      break;
    default:
      out.kind = column.label.word == Label::Word::kPolynomial ? ColumnKind::kPolynomial
                                                               : ColumnKind::kNumber;
      out.degree = column.label.degree;
      SummariseNumbers(column.numbers, out);
  }
  if (column.numbers_from_text > 0) {
    out.note = std::to_string(column.numbers_from_text) + " value" +
               (column.numbers_from_text == 1 ? " was a number" : "s were numbers") +
               " stored as text";
  }
  return out;
}

const CategoryLevel* LevelAlike(const ModelColumn& column, std::string_view text) {
  const auto found =
      std::find_if(column.levels.begin(), column.levels.end(),
                   [&](const CategoryLevel& level) { return EqualButForCase(level.text, text); });
  return found == column.levels.end() ? nullptr : &*found;
}

}  // namespace ladderline
