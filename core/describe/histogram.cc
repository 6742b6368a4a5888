#include "core/describe/histogram.h"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>
#include <numeric>
#include <optional>

#include "core/describe/quantiles.h"
#include "core/describe/readable_steps.h"
#include "core/elementary/elementary.h"
#include "core/support/distributions.h"

namespace ladderline {
namespace {

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

std::vector<HistogramBin> CountIn(std::span<const double> edges,
                                  std::span<const double> ascending) {
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

// StepOf where so few steps fill a bin that their number shows, else none. A step of some values is
// a multiple of that of all: most columns are seen through at the first block.
std::optional<Decimal> CoarseStep(const BlockedColumn& values, double width) {
  const auto coarse = [&](const std::optional<Decimal>& step) {
    return step && (step->digits == 0 || step->Times(kTwentySteps) > width);
  };
  for (std::size_t b = 0; b < values.blocks(); ++b) {
    const std::span<const double> block = values.block(b);
    if (block.empty()) continue;
    constexpr std::size_t kSample = 1000;
    if (!coarse(StepOf(SpanColumn(block.first(std::min(block.size(), kSample))))))
      return std::nullopt;
    break;
  }
  const std::optional<Decimal> step = StepOf(values);
  return coarse(step) ? step : std::nullopt;
}

bool IsFlat(std::span<const double> ascending) {
  return ascending.empty() || ascending.front() == ascending.back();
}

}  // namespace

std::vector<HistogramBin> Histogram(std::span<const double> ascending) {
  if (IsFlat(ascending)) return FlatBins(ascending);
  const std::optional<Decimal> step = StepOf(SpanColumn(ascending));
  return CountIn(ReadableEdges(ascending.front(), ascending.back(), WantedWidth(ascending), step,
                               kMostChosenBins),
                 ascending);
}

std::vector<HistogramBin> Histogram(const BlockedColumn& values, std::size_t most) {
  assert(2 <= most && most <= kMostBins);
  constexpr double kInfinity = std::numeric_limits<double>::infinity();
  double least = kInfinity, largest = -kInfinity;
  std::size_t rows = 0;
  for (std::size_t b = 0; b < values.blocks(); ++b) {
    const std::span<const double> block = values.block(b);
    rows += block.size();
    for (const double x : block) {
      least = std::min(least, x);
      largest = std::max(largest, x);
    }
  }
  if (rows == 0) return {};
  if (least == largest) return {{least, largest, rows}};
  const double bins = static_cast<double>(most);
  const double width =
      std::max(largest / bins - least / bins, std::numeric_limits<double>::denorm_min());
  const std::vector<double> edges =
      ReadableEdges(least, largest, width, CoarseStep(values, width), most);

  // Neighbouring values often share a bin: counts kept apart need not wait for one another.
  constexpr std::size_t kLanes = 4;
  const std::size_t last = edges.size() - 2;
  std::vector<std::size_t> counts(kLanes * (last + 1));
  const double origin = edges.front(), per_unit = 1 / (edges[1] - edges[0]);
  const double last_place = static_cast<double>(last);
  std::size_t lane = 0;
  for (std::size_t b = 0; b < values.blocks(); ++b) {
    for (const double x : values.block(b)) {
      // The quotient says which bin but for rounding; the edges decide.
      const double place = (x - origin) * per_unit;
      auto i = static_cast<std::size_t>(
          static_cast<int>(place >= 0 ? std::min(place, last_place) : 0.0));
      while (x < edges[i]) --i;
      while (x >= edges[i + 1] && i < last) ++i;
      ++counts[kLanes * i + lane];
      lane = (lane + 1) % kLanes;
    }
  }
  std::vector<HistogramBin> histogram;
  for (std::size_t i = 0; i <= last; ++i) {
    const auto of_bin = counts.begin() + static_cast<std::ptrdiff_t>(kLanes * i);
    histogram.push_back(
        {edges[i], edges[i + 1], std::accumulate(of_bin, of_bin + kLanes, std::size_t{0})});
  }
  return histogram;
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
  edges.erase(std::unique(edges.begin(), edges.end()), edges.end());
  return CountIn(edges, ascending);
}

std::string HistogramBar(std::size_t rows, std::size_t most) {
  assert(rows <= most && most > 0);
  const double length =
      static_cast<double>(kSketchWidth) * static_cast<double>(rows) / static_cast<double>(most);
  if (length < 0.5) return rows == 0 ? "" : ".";
  return std::string(static_cast<std::size_t>(std::lround(length)), '#');
}

}  // namespace ladderline
