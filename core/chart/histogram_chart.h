// A histogram as SVG, from bins that were counted elsewhere.
#ifndef LADDERLINE_CORE_CHART_HISTOGRAM_CHART_H_
#define LADDERLINE_CORE_CHART_HISTOGRAM_CHART_H_

#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

#include "core/support/result.h"

namespace ladderline {

struct ChartBin {
  double low, high, rows;
};

// Bars that touch, their area as the rows they stand for: as high as these where all bins are
// equally wide, else as rows per width of the narrowest bin. Every bar carries its exact figures
// (data-low, data-high, data-rows) and says them.
//   bins     in any order, finite, the same one more than once adds up; one alone may have no
//            width
//   skipped  rows without a figure that is needed: the description tells their number
//   errors   in words: high below low, a negative count, counts whose sum overflows, bins that
//            overlap, no width beside others, more than kMostBins bins (describe/histogram.h)
//   empty    the bins must not be
//   cost     O(n log n)
Result<std::string> HistogramChart(std::string_view title, std::string_view axis,
                                   std::vector<ChartBin> bins, std::int64_t skipped);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHART_HISTOGRAM_CHART_H_
