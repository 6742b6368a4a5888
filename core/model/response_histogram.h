// How the response of the fitted rows is spread, before and after its re-expression.
#ifndef LADDERLINE_CORE_MODEL_RESPONSE_HISTOGRAM_H_
#define LADDERLINE_CORE_MODEL_RESPONSE_HISTOGRAM_H_

#include <cstdint>
#include <span>
#include <vector>

#include "core/describe/histogram.h"
#include "core/model/blocked.h"

namespace ladderline {

// Counts of rows, weights left aside. Empty: not available.
struct ResponseHistogram {
  std::vector<HistogramBin> original;  // raw values, in the response's unit
  std::vector<HistogramBin> scaled;    // on the model's scale; empty where that is the same
};

// A picture of fewer rows would be a list of them.
inline constexpr std::size_t kFewestHistogramRows = 10;
inline constexpr std::size_t kMostHistogramBins = 25;  // of each: as many as a phone shows apart

// Twice the cube root of the number of rows is the most bins taken, 6 to kMostHistogramBins, so
// that readable widths give no fewer than the (2n)^(1/3) below which shape is lost.
//   scaled  the re-expressed values; empty where the response stands as it is
//   errors  both are empty for fewer than kFewestHistogramRows rows or values that are not finite
//   cost    histogram.h; reads the rows in place
//   source  Terrell & Scott, "Oversmoothed nonparametric density estimates", JASA 80 (1985)
ResponseHistogram CountResponse(const Blocked<double>& raw, std::span<const double> scaled);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_RESPONSE_HISTOGRAM_H_
