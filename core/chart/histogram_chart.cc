#include "core/chart/histogram_chart.h"

#include <algorithm>
#include <cmath>

#include "core/chart/plot.h"
#include "core/chart/told.h"
#include "core/describe/histogram.h"
#include "core/support/prose.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

// What is wrong with bins in rising order; empty if nothing is.
std::string FaultOf(const std::vector<ChartBin>& bins) {
  if (bins.size() > kMostBins)
    return "takes at most " + std::to_string(kMostBins) + " bins, got " +
           std::to_string(bins.size());
  double total = 0;
  for (std::size_t i = 0; i < bins.size(); ++i) {
    const ChartBin& bin = bins[i];
    total += bin.rows;
    const std::string range = NumberText(bin.low) + " to " + NumberText(bin.high);
    if (bin.high < bin.low) return "high must not be below low, got " + range;
    if (bin.high == bin.low && bins.size() > 1) return "high must lie above low, got " + range;
    if (bin.rows < 0) return "rows must not be negative, got " + NumberText(bin.rows);
    if (i > 0 && bin.low < bins[i - 1].high)
      return "bins must not overlap, got " + NumberText(bins[i - 1].low) + " to " +
             NumberText(bins[i - 1].high) + " and " + range;
  }
  if (!std::isfinite(total)) return "rows of all bins together must be a number, got an overflow";
  return "";
}

// The narrowest width, or 0 where all are the same but for the rounding of edges.
double UnequalWidth(const std::vector<ChartBin>& bins) {
  double least = HUGE_VAL, most = 0, largest = 0;
  for (const ChartBin& bin : bins) {
    const double width = bin.high - bin.low;
    least = std::min(least, width);
    most = std::max(most, width);
    largest = std::max({largest, std::abs(bin.low), std::abs(bin.high)});
  }
  constexpr double kRounding = 0x1p-50;  // four steps of a double
  const double same = std::max(1e-9 * most, kRounding * largest);
  return std::isfinite(most) && most - least > same ? least : 0;
}

std::string Description(std::string_view axis, const std::vector<ChartBin>& bins,
                        std::int64_t skipped) {
  double total = 0;
  const ChartBin* fullest = &bins.front();
  for (const ChartBin& bin : bins) {
    total += bin.rows;
    if (bin.rows > fullest->rows) fullest = &bin;
  }
  std::string text = "Histogram of " + std::string(axis) + ": " + ShownNumber(total) +
                     (total == 1 ? " row" : " rows") + " in " +
                     Counted(static_cast<std::int64_t>(bins.size()), "bin") + " from " +
                     ShownRange(bins.front().low, bins.back().high) + ".";
  if (total > 0 && bins.size() > 1) {
    double below = 0;
    const ChartBin* middle = &bins.back();
    for (const ChartBin& bin : bins) {
      below += bin.rows;
      if (below >= total / 2) {
        middle = &bin;
        break;
      }
    }
    text += " The fullest bin, " + ShownRange(fullest->low, fullest->high) + ", has " +
            ShownNumber(fullest->rows) + "; the middle row lies in " +
            ShownRange(middle->low, middle->high) + ".";
  }
  return text + SkippedTold(skipped);
}

}  // namespace

Result<std::string> HistogramChart(std::string_view title, std::string_view axis,
                                   std::vector<ChartBin> bins, std::int64_t skipped) {
  std::sort(bins.begin(), bins.end(), [](const ChartBin& a, const ChartBin& b) {
    return a.low < b.low || (a.low == b.low && a.high < b.high);
  });
  // The same bin given more than once.
  std::size_t kept = 0;
  for (std::size_t i = 1; i < bins.size(); ++i) {
    if (bins[i].low == bins[kept].low && bins[i].high == bins[kept].high) {
      bins[kept].rows += bins[i].rows;
    } else {
      bins[++kept] = bins[i];
    }
  }
  bins.resize(kept + 1);
  if (std::string fault = FaultOf(bins); !fault.empty()) return Error{std::move(fault)};
  const double per = UnequalWidth(bins);
  const auto height = [&](const ChartBin& bin) {
    return per == 0 ? bin.rows : bin.rows / ((bin.high - bin.low) / per);
  };
  double highest = 0;
  bool whole = true;
  for (const ChartBin& bin : bins) {
    highest = std::max(highest, height(bin));
    whole = whole && height(bin) == std::nearbyint(height(bin));
  }

  Svg svg;
  const Plot plot = DrawPlot(svg, title, axis, per == 0 ? "rows" : "rows per " + ShownNumber(per),
                             {.low = bins.front().low, .high = bins.back().high, .tight = true},
                             {.low = 0, .high = highest == 0 ? 1 : highest, .whole = whole});
  for (const ChartBin& bin : bins) {
    double left = plot.X(bin.low), right = plot.X(bin.high);
    if (bin.low == bin.high) {
      constexpr double kHalfBar = 12;
      left -= kHalfBar;
      right += kHalfBar;
    }
    // A hair between bars, where they are wide enough to spare it.
    const double gap = right - left > 4 ? 1 : 0;
    const double top = plot.Y(height(bin));
    svg.Open("rect")
        .Set("x", left + gap / 2)
        .Set("y", top)
        .Set("width", right - left - gap)
        .Set("height", plot.top + plot.height - top)
        .Set("fill", kMarkColour)
        .Value("data-low", bin.low)
        .Value("data-high", bin.high)
        .Value("data-rows", bin.rows)
        .Close(NumberText(bin.low) + " to " + NumberText(bin.high) + ": " + NumberText(bin.rows) +
               (bin.rows == 1 ? " row" : " rows"));
  }
  return svg.Document(plot.bottom, title, Description(axis, bins, skipped));
}

}  // namespace ladderline
