#include "core/model/response_histogram.h"

#include <algorithm>
#include <cmath>

#include "core/elementary/elementary.h"
#include "core/model/numbers_column.h"

namespace ladderline {

ResponseHistogram CountResponse(const Blocked<double>& raw, std::span<const double> scaled) {
  if (raw.size() < kFewestHistogramRows) return {};
  constexpr double kFewestBins = 6;
  const double wanted = 2 * Pow(static_cast<double>(raw.size()), 1.0 / 3);
  const auto most = static_cast<std::size_t>(
      std::clamp(std::floor(wanted), kFewestBins, static_cast<double>(kMostHistogramBins)));
  ResponseHistogram histogram;
  histogram.original = Histogram(NumbersColumn(raw), most);
  if (!scaled.empty()) histogram.scaled = Histogram(SpanColumn(scaled), most);
  return histogram;
}

}  // namespace ladderline
