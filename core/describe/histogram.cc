#include "core/describe/histogram.h"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <cstdint>
#include <limits>
#include <numeric>
#include <optional>
#include <utility>

#include "core/describe/quantiles.h"
#include "core/elementary/elementary.h"
#include "core/support/distributions.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

// digits · 10^exponent, so that edges are the doubles nearest to what a reader sees.
struct Decimal {
  std::int64_t digits;
  int exponent;

  // Beyond the range of a double, the largest one.
  double Times(std::int64_t factor) const {
    const auto value =
        ParseNumber(std::to_string(digits * factor) + "e" + std::to_string(exponent));
    return value.value_or(std::copysign(std::numeric_limits<double>::max(), factor));
  }
};

// The largest step of which all differences between values are multiples, if the values are
// decimals with few places.
std::optional<Decimal> StepOf(std::span<const double> ascending) {
  constexpr int kMostPlaces = 6;
  constexpr double kExactIntegers = 0x1p53;
  double unit = 1;
  for (int places = 0; places <= kMostPlaces; ++places, unit *= 10) {
    const auto in_units = [&](double x) { return std::nearbyint(x * unit); };
    if (!std::all_of(ascending.begin(), ascending.end(), [&](double x) {
          return std::abs(x) * unit < kExactIntegers && in_units(x) / unit == x;
        }))
      continue;
    const auto first = static_cast<std::int64_t>(in_units(ascending.front()));
    std::int64_t step = 0;
    for (const double x : ascending)
      step = std::gcd(step, static_cast<std::int64_t>(in_units(x)) - first);
    return Decimal{step, -places};
  }
  return std::nullopt;
}

// The width by Freedman & Diaconis, held between a half of the range and what kMostChosenBins bins
// need. Differences are taken of parts that cannot overflow.
double WantedWidth(std::span<const double> ascending) {
  const double least = ascending.front(), largest = ascending.back();
  double p = 0.25;
  while (OrderedQuantile(ascending, p) == OrderedQuantile(ascending, 1 - p)) p /= 2;
  const double low = OrderedQuantile(ascending, p), high = OrderedQuantile(ascending, 1 - p);
  const double factor = 2 / Pow(static_cast<double>(ascending.size()), 1.0 / 3) *
                        (NormalUpperQuantile(0.25) / NormalUpperQuantile(p));
  constexpr auto kBins = static_cast<double>(kMostChosenBins);
  return std::max({std::min(high * factor - low * factor, largest / 2 - least / 2),
                   largest / kBins - least / kBins, std::numeric_limits<double>::denorm_min()});
}

// The readable multiples of a unit in rising order: 1, 2, 5, 10, 20, 25, 50, 100, 200, 250, 500 …
Decimal Multiple(Decimal unit, int i) {
  if (i < 3) return {unit.digits * (i == 2 ? 5 : i + 1), unit.exponent};
  constexpr Decimal kDecade[] = {{1, 1}, {2, 1}, {25, 0}, {5, 1}};
  const Decimal& multiple = kDecade[(i - 3) % 4];
  return {unit.digits * multiple.digits, unit.exponent + multiple.exponent + (i - 3) / 4};
}

// Adjacent multiples of `width` that enclose the values, the last above the largest or, where
// `may_touch`, at it; none where they make more than kMostChosenBins bins.
std::vector<double> EdgesAround(std::span<const double> ascending, Decimal width, bool may_touch) {
  const double least = ascending.front(), largest = ascending.back();
  auto at = static_cast<std::int64_t>(std::floor(least / width.Times(1)));
  // The quotient may be rounded across a whole number, or several where it exceeds 2^53.
  while (width.Times(at) > least) --at;
  while (width.Times(at + 1) <= least) ++at;
  std::vector<double> edges;
  do {
    if (edges.size() == kMostChosenBins + 1) return {};
    edges.push_back(width.Times(at++));
  } while (edges.back() < largest || (edges.back() == largest && !may_touch));
  return edges;
}

std::vector<HistogramBin> CountIn(std::vector<double> edges, std::span<const double> ascending) {
  edges.erase(std::unique(edges.begin(), edges.end()), edges.end());
  std::vector<HistogramBin> bins;
  auto from = ascending.begin();
  for (std::size_t i = 1; i < edges.size(); ++i) {
    const auto to =
        i + 1 == edges.size() ? ascending.end() : std::lower_bound(from, ascending.end(), edges[i]);
    bins.push_back({edges[i - 1], edges[i], static_cast<std::size_t>(to - from)});
    from = to;
  }
  return bins;
}

// The bins of a column without spread.
std::vector<HistogramBin> FlatBins(std::span<const double> ascending) {
  if (ascending.empty()) return {};
  return {{ascending.front(), ascending.back(), ascending.size()}};
}

bool IsFlat(std::span<const double> ascending) {
  return ascending.empty() || ascending.front() == ascending.back();
}

}  // namespace

std::vector<HistogramBin> Histogram(std::span<const double> ascending) {
  if (IsFlat(ascending)) return FlatBins(ascending);
  const double wanted = WantedWidth(ascending);
  const std::optional<Decimal> step = StepOf(ascending);
  // Without a step, the power of ten one digit below the width, if a double can be so small.
  constexpr int kLeastExponent = -323;
  const Decimal unit =
      step ? *step
           : Decimal{
                 1, std::max(static_cast<int>(std::floor(std::log10(wanted))) - 1, kLeastExponent)};
  // The multiple that is nearest to the width by ratio, or the next one that needs few enough bins.
  int i = 0;
  while (Multiple(unit, i).Times(1) < wanted) ++i;
  if (i > 0 && wanted / Multiple(unit, i - 1).Times(1) < Multiple(unit, i).Times(1) / wanted) --i;
  // From 20 steps on, the largest value may share the last bin as its end without tipping it.
  constexpr int kTwentySteps = 4;
  std::vector<double> edges;
  for (; edges.empty(); ++i)
    edges = EdgesAround(ascending, Multiple(unit, i), !step || i >= kTwentySteps);
  return CountIn(std::move(edges), ascending);
}

std::vector<HistogramBin> Histogram(std::span<const double> ascending, std::size_t bins) {
  assert(1 <= bins && bins <= kMostBins);
  if (IsFlat(ascending)) return FlatBins(ascending);
  std::vector<double> edges;
  for (std::size_t i = 0; i < bins; ++i) {
    edges.push_back(std::lerp(ascending.front(), ascending.back(),
                              static_cast<double>(i) / static_cast<double>(bins)));
  }
  edges.push_back(ascending.back());
  return CountIn(std::move(edges), ascending);
}

std::string HistogramBar(std::size_t rows, std::size_t most) {
  assert(rows <= most && most > 0);
  const double length =
      static_cast<double>(kSketchWidth) * static_cast<double>(rows) / static_cast<double>(most);
  if (length < 0.5) return rows == 0 ? "" : ".";
  return std::string(static_cast<std::size_t>(std::lround(length)), '#');
}

}  // namespace ladderline
