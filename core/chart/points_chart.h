// Points as SVG, with limits for each and a line to hold them against where these are given.
#ifndef LADDERLINE_CORE_CHART_POINTS_CHART_H_
#define LADDERLINE_CORE_CHART_POINTS_CHART_H_

#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

namespace ladderline {

struct ChartPoint {
  double x, y;
  // NaN: none. `guide` is where a dashed line passes at x.
  double guide, low, high;
};

// A page of text with more marks than this is slow to show, and no screen parts them.
inline constexpr std::size_t kMostDrawnPoints = 1000;

// A dot for each point, a bar from low to high where there are limits (a half one for one of them),
// and the dashed line through all guides in the order of x. Every dot carries its exact figures
// (data-x, data-y, data-low, data-high) and says them.
//   points   in any order, finite but for NaN; not empty. Of more than kMostDrawnPoints, one is
//            drawn for each cell of a grid that holds any: the cells are the smallest that leave no
//            more, and the description says so
//   skipped  rows without a figure that is needed: the description tells their number
//   cost     O(n log n)
std::string PointsChart(std::string_view title, std::string_view x_axis, std::string_view y_axis,
                        std::vector<ChartPoint> points, std::int64_t skipped);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHART_POINTS_CHART_H_
