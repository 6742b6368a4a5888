#include "core/chart/intervals_chart.h"

#include <algorithm>
#include <cmath>

#include "core/chart/plot.h"
#include "core/chart/told.h"
#include "core/support/prose.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

constexpr double kLeft = 16, kWidth = kChartWidth - 2 * kLeft;
constexpr double kBand = 14;  // height of the strip with the mark
constexpr double kGridOpacity = 0.18, kZeroOpacity = 0.7;

// `12.5 (8.1 to 17)`, `12.5 (to 17)`, `12.5 (from 8.1)`, `12.5`.
template <class Show>
std::string Figures(const ChartInterval& interval, Show show) {
  const bool has_low = !std::isnan(interval.low), has_high = !std::isnan(interval.high);
  std::string text = show(interval.middle);
  if (has_low && has_high)
    return text + " (" + show(interval.low) + " to " + show(interval.high) + ")";
  if (has_low) return text + " (from " + show(interval.low) + ")";
  if (has_high) return text + " (to " + show(interval.high) + ")";
  return text;
}

// The range of all figures, with 0 where that is not far off.
PlotRange RangeOf(const std::vector<ChartInterval>& intervals, std::size_t shown) {
  PlotRange range{.low = HUGE_VAL, .high = -HUGE_VAL};
  for (std::size_t i = 0; i < shown; ++i) {
    for (const double value : {intervals[i].middle, intervals[i].low, intervals[i].high}) {
      if (std::isnan(value)) continue;
      range.low = std::min(range.low, value);
      range.high = std::max(range.high, value);
    }
  }
  const double room = range.high / 2 - range.low / 2;
  if (range.low > 0 && range.low / 4 <= room) range.low = 0;
  if (range.high < 0 && -range.high / 4 <= room) range.high = 0;
  return range;
}

// A line to an open side ends in an arrow at the edge of the field.
void DrawArrow(Svg& svg, double x, double y, double direction) {
  const double back = x - 6 * direction;
  svg.Open("path")
      .Set("d", "M" + PixelText(back) + " " + PixelText(y - 4) + "L" + PixelText(x) + " " +
                    PixelText(y) + "L" + PixelText(back) + " " + PixelText(y + 4))
      .Set("fill", "none")
      .Set("stroke", kMarkColour)
      .Set("stroke-width", 2)
      .Close();
}

void DrawMark(Svg& svg, const Axis& axis, const ChartInterval& interval, double y) {
  const auto x = [&](double value) { return kLeft + kWidth * axis.Place(value); };
  const bool has_low = !std::isnan(interval.low), has_high = !std::isnan(interval.high);
  constexpr double kPast = 8;  // an arrow points out of the field
  if (has_low || has_high) {
    const double from = has_low ? x(interval.low) : kLeft - kPast;
    const double to = has_high ? x(interval.high) : kLeft + kWidth + kPast;
    svg.Open("line")
        .Set("x1", from)
        .Set("x2", to)
        .Set("y1", y)
        .Set("y2", y)
        .Set("stroke", kMarkColour)
        .Set("stroke-width", 2)
        .Close();
    if (!has_low) DrawArrow(svg, from, y, -1);
    if (!has_high) DrawArrow(svg, to, y, 1);
  }
  svg.Open("circle")
      .Set("cx", x(interval.middle))
      .Set("cy", y)
      .Set("r", 4.5)
      .Set("fill", kMarkColour)
      .Set("data-name", interval.name)
      .Value("data-middle", interval.middle);
  if (has_low) svg.Value("data-low", interval.low);
  if (has_high) svg.Value("data-high", interval.high);
  svg.Close(interval.name + ": " + Figures(interval, NumberText));
}

std::string Description(std::string_view axis, const std::vector<ChartInterval>& intervals,
                        std::size_t shown, std::int64_t skipped) {
  const auto by_middle = [](const ChartInterval& a, const ChartInterval& b) {
    return a.middle < b.middle;
  };
  const auto [least, largest] = std::minmax_element(intervals.begin(), intervals.end(), by_middle);
  const auto told = [](const ChartInterval& interval) {
    return Excerpt(interval.name, 100) + ", " + Figures(interval, ShownNumber);
  };
  std::string text = Counted(static_cast<std::int64_t>(intervals.size()), "figure") + " of " +
                     std::string(axis) + ".";
  if (intervals.size() == 1) {
    text = std::string(axis) + ": " + told(*least) + ".";
  } else {
    text += " Largest: " + told(*largest) + ". Smallest: " + told(*least) + ".";
  }
  std::int64_t above = 0, below = 0, across = 0;
  for (const ChartInterval& interval : intervals) {
    if (interval.low > 0) ++above;
    if (interval.high < 0) ++below;
    if (interval.low <= 0 && interval.high >= 0) ++across;
  }
  if (below > 0 || across > 0) {
    text += " Limits lie above 0 for " + std::to_string(above) + ", below 0 for " +
            std::to_string(below) + ", and hold 0 for " + std::to_string(across) + ".";
  }
  if (shown < intervals.size()) text += " The first " + std::to_string(shown) + " are drawn.";
  return text + SkippedTold(skipped);
}

}  // namespace

Result<std::string> IntervalsChart(std::string_view title, std::string_view axis,
                                   const std::vector<ChartInterval>& intervals,
                                   std::int64_t skipped) {
  for (const ChartInterval& interval : intervals) {
    if (interval.high < interval.low) {
      return Error{"high must not be below low, got " + NumberText(interval.low) + " to " +
                   NumberText(interval.high)};
    }
  }
  const std::size_t shown = std::min(intervals.size(), kMostDrawnIntervals);
  const PlotRange range = RangeOf(intervals, shown);
  const Axis scale = FittingAxis(
      kLeft, kWidth, [&](std::size_t most) { return RoundAxis(range.low, range.high, most); });
  Svg svg;
  double at = DrawTitle(svg, title);
  for (std::size_t i = 0; i < shown; ++i) {
    const ChartInterval& interval = intervals[i];
    const std::string figures = Figures(interval, ShownNumber);
    const double figures_width = TextWidth(figures, kTextSize);
    constexpr double kFull = kChartWidth - 2 * kChartMargin, kApart = 10, kLeastName = 110;
    // Figures that leave the name little room get a line of their own.
    const bool beside = kFull - figures_width - kApart >= kLeastName;
    const auto lines =
        Wrapped(interval.name, beside ? kFull - figures_width - kApart : kFull, kTextSize, 2);
    if (beside) svg.Text(kChartWidth - kChartMargin, at + kTextSize, Anchor::kEnd, figures);
    double end = svg.Lines(kChartMargin, at, lines, kTextSize, Face::kPlain, interval.name);
    if (beside) {
      end = std::max(end, at + kTextSize * kLineHeight);
    } else {
      end = svg.Lines(kChartMargin, end, Wrapped(figures, kFull, kTextSize, 3), kTextSize,
                      Face::kPlain, figures);
    }
    end += 2;
    for (const double tick : scale.ticks) {
      const double x = kLeft + kWidth * scale.Place(tick);
      svg.Line(x, end, x, end + kBand, tick == 0 ? kZeroOpacity : kGridOpacity);
    }
    DrawMark(svg, scale, interval, end + kBand / 2);
    at = end + kBand + 8;
  }
  if (shown < intervals.size()) {
    svg.Text(kChartMargin, at + kTextSize, Anchor::kStart,
             "and " + std::to_string(intervals.size() - shown) + " more");
    at += 2 * kTextSize;
  }
  const double bottom = DrawHorizontalAxis(svg, scale, kLeft, kWidth, at, axis);
  return svg.Document(bottom, title, Description(axis, intervals, shown, skipped));
}

}  // namespace ladderline
