#include "core/chart/plot.h"

#include <algorithm>

#include "core/support/prose.h"

namespace ladderline {
namespace {

constexpr double kFieldHeight = 180;
constexpr double kGridOpacity = 0.18, kAxisOpacity = 0.6;
constexpr double kFullWidth = kChartWidth - 2 * kChartMargin;

}  // namespace

double DrawTitle(Svg& svg, std::string_view title) {
  const auto lines = Wrapped(title, kFullWidth, kTitleSize, 3, Face::kBold);
  return svg.Lines(kChartMargin, kChartMargin, lines, kTitleSize, Face::kBold, title) +
         kChartMargin;
}

double DrawHorizontalAxis(Svg& svg, const Axis& axis, double left, double width, double y,
                          std::string_view name) {
  svg.Line(left, y, left + width, y, kAxisOpacity);
  for (const PlacedTick& tick : PlaceTicks(axis, left, width)) {
    svg.Line(tick.x, y, tick.x, y + 4, kAxisOpacity);
    if (!tick.label.empty()) svg.Text(tick.label_x, y + 9 + kTextSize, Anchor::kMiddle, tick.label);
  }
  const auto lines = Wrapped(name, kFullWidth, kTextSize, 2);
  return svg.Lines(kChartMargin, y + 13 + kTextSize, lines, kTextSize, Face::kPlain, name) +
         kChartMargin;
}

Plot DrawPlot(Svg& svg, std::string_view title, std::string_view x_name, std::string_view y_name,
              const PlotRange& x, const PlotRange& y) {
  Plot plot;
  plot.y = RoundAxis(y.low, y.high, 5, y.whole);
  double labels = 0;
  for (const double tick : plot.y.ticks)
    labels = std::max(labels, TextWidth(PlainNumber(tick), kTextSize));
  plot.left = kChartMargin + labels + 6;
  plot.width = kChartWidth - kChartMargin - 6 - plot.left;
  plot.height = kFieldHeight;
  plot.x = FittingAxis(plot.left, plot.width, [&](std::size_t most) {
    return x.tight ? TightAxis(x.low, x.high, most) : RoundAxis(x.low, x.high, most, x.whole);
  });

  const auto y_lines = Wrapped(y_name, kFullWidth, kTextSize, 2);
  plot.top =
      svg.Lines(kChartMargin, DrawTitle(svg, title), y_lines, kTextSize, Face::kPlain, y_name) +
      kTextSize / 2 + 2;
  for (const double tick : plot.y.ticks) {
    const double at = plot.Y(tick);
    svg.Line(plot.left, at, plot.left + plot.width, at, kGridOpacity);
    svg.Text(plot.left - 6, at + kTextSize * 0.36, Anchor::kEnd, PlainNumber(tick));
  }
  plot.bottom =
      DrawHorizontalAxis(svg, plot.x, plot.left, plot.width, plot.top + plot.height, x_name);
  return plot;
}

}  // namespace ladderline
