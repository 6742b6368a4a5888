// What the descriptions of all charts say alike.
#ifndef LADDERLINE_CORE_CHART_TOLD_H_
#define LADDERLINE_CORE_CHART_TOLD_H_

#include <cstdint>
#include <string>

#include "core/chart/chart_text.h"
#include "core/support/prose.h"

namespace ladderline {

// `3 to 17.5`, as charts show numbers.
inline std::string ShownRange(double low, double high) {
  return ShownNumber(low) + " to " + ShownNumber(high);
}

// ` 2 rows with a missing value are left out.`, or nothing.
inline std::string SkippedTold(std::int64_t skipped) {
  if (skipped == 0) return "";
  return " " + Counted(skipped, "row") + " with a missing value " + (skipped == 1 ? "is" : "are") +
         " left out.";
}

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHART_TOLD_H_
