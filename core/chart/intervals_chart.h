// Named figures with their limits as SVG, one under the other.
#ifndef LADDERLINE_CORE_CHART_INTERVALS_CHART_H_
#define LADDERLINE_CORE_CHART_INTERVALS_CHART_H_

#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

#include "core/support/result.h"

namespace ladderline {

struct ChartInterval {
  std::string name;
  double middle;
  double low, high;  // NaN: that side is open; both: no limits are known
};

inline constexpr std::size_t kMostDrawnIntervals = 100;

// For each: its name and figures as text, beneath them a dot in a line from low to high, with an
// arrow to an open side; all over one axis, on which 0 stands out where it is in sight. Every dot
// carries its exact figures (data-middle, data-low, data-high) and says them.
//   intervals  in the order of showing, finite but for NaN; not empty. The first
//              kMostDrawnIntervals are drawn, and the chart says how many are not
//   skipped    rows without a figure that is needed: the description tells their number
//   errors     in words: high below low
Result<std::string> IntervalsChart(std::string_view title, std::string_view axis,
                                   const std::vector<ChartInterval>& intervals,
                                   std::int64_t skipped);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHART_INTERVALS_CHART_H_
