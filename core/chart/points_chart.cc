#include "core/chart/points_chart.h"

#include <algorithm>
#include <cmath>
#include <set>
#include <utility>

#include "core/chart/plot.h"
#include "core/chart/told.h"
#include "core/support/prose.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

struct Range {
  double low = HUGE_VAL, high = -HUGE_VAL;
  void Cover(double value) {
    if (std::isnan(value)) return;
    low = std::min(low, value);
    high = std::max(high, value);
  }
};

// One of the points in each cell of the plot; `points` lie in order.
std::vector<ChartPoint> Thinned(const std::vector<ChartPoint>& points, const Plot& plot) {
  std::vector<ChartPoint> kept;
  for (double cell = 2;; cell *= 1.25) {
    kept.clear();
    std::set<std::pair<int, int>> taken;
    for (const ChartPoint& point : points) {
      const std::pair place(static_cast<int>(plot.X(point.x) / cell),
                            static_cast<int>(plot.Y(point.y) / cell));
      if (!taken.insert(place).second) continue;
      if (kept.size() == kMostDrawnPoints) {
        kept.clear();
        break;
      }
      kept.push_back(point);
    }
    if (!kept.empty()) return kept;
  }
}

void DrawGuide(Svg& svg, const Plot& plot, const std::vector<ChartPoint>& points) {
  std::vector<const ChartPoint*> guided;
  for (const ChartPoint& point : points) {
    if (!std::isnan(point.guide)) guided.push_back(&point);
  }
  if (guided.size() < 2) return;
  constexpr std::size_t kMostCorners = 200;
  const std::size_t corners = std::min(guided.size(), kMostCorners);
  std::string path;
  for (std::size_t i = 0; i < corners; ++i) {
    const ChartPoint& point = *guided[i * (guided.size() - 1) / (corners - 1)];
    path += (path.empty() ? "" : " ") + PixelText(plot.X(point.x)) + "," +
            PixelText(plot.Y(point.guide));
  }
  svg.Open("polyline")
      .Set("points", path)
      .Set("fill", "none")
      .Set("stroke", "currentColor")
      .Set("stroke-opacity", 0.7)
      .Set("stroke-dasharray", "5 4")
      .Close();
}

void DrawPoint(Svg& svg, const Plot& plot, const ChartPoint& point, bool many) {
  const double x = plot.X(point.x), y = plot.Y(point.y);
  const bool has_low = !std::isnan(point.low), has_high = !std::isnan(point.high);
  if (has_low || has_high) {
    svg.Open("line")
        .Set("x1", x)
        .Set("x2", x)
        .Set("y1", has_low ? plot.Y(point.low) : y)
        .Set("y2", has_high ? plot.Y(point.high) : y)
        .Set("stroke", kMarkColour)
        .Set("stroke-width", 1.5)
        .Close();
  }
  std::string told = NumberText(point.x) + ", " + NumberText(point.y);
  if (has_low) told += ", from " + NumberText(point.low);
  if (has_high) told += ", to " + NumberText(point.high);
  svg.Open("circle")
      .Set("cx", x)
      .Set("cy", y)
      .Set("r", many ? 2 : 3.5)
      .Set("fill", kMarkColour)
      .Value("data-x", point.x)
      .Value("data-y", point.y);
  if (has_low) svg.Value("data-low", point.low);
  if (has_high) svg.Value("data-high", point.high);
  svg.Close(told);
}

}  // namespace

std::string PointsChart(std::string_view title, std::string_view x_axis, std::string_view y_axis,
                        std::vector<ChartPoint> points, std::int64_t skipped) {
  std::sort(points.begin(), points.end(), [](const ChartPoint& a, const ChartPoint& b) {
    return a.x < b.x || (a.x == b.x && a.y < b.y);
  });
  Range x, y, all_y;
  for (const ChartPoint& point : points) {
    x.Cover(point.x);
    y.Cover(point.y);
    for (const double value : {point.y, point.guide, point.low, point.high}) all_y.Cover(value);
  }
  Svg svg;
  const Plot plot = DrawPlot(svg, title, x_axis, y_axis, {.low = x.low, .high = x.high},
                             {.low = all_y.low, .high = all_y.high});
  DrawGuide(svg, plot, points);
  const bool thin = points.size() > kMostDrawnPoints;
  const std::vector<ChartPoint> drawn = thin ? Thinned(points, plot) : std::vector<ChartPoint>();
  for (const ChartPoint& point : thin ? drawn : points)
    DrawPoint(svg, plot, point, points.size() > 100);

  std::string description = Counted(static_cast<std::int64_t>(points.size()), "point") + ": " +
                            std::string(x_axis) + " from " + ShownRange(x.low, x.high) + ", " +
                            std::string(y_axis) + " from " + ShownRange(y.low, y.high) + ".";
  if (points.size() > 1) {
    description += " At the left end " + std::string(y_axis) + " is " +
                   ShownNumber(points.front().y) + ", at the right end " +
                   ShownNumber(points.back().y) + ".";
  }
  if (thin) {
    description += " " + std::to_string(drawn.size()) +
                   " are drawn; the others would lie on or close to one of these.";
  }
  return svg.Document(plot.bottom, title, description + SkippedTold(skipped));
}

}  // namespace ladderline
