// What anyone who shows a fitted model should show with it.
#ifndef LADDERLINE_CORE_REPORT_CAUTIONS_H_
#define LADDERLINE_CORE_REPORT_CAUTIONS_H_

#include <string>
#include <vector>

#include "core/model/model.h"

namespace ladderline {

// Below so many rows for a term its figures would be others in other rows (common practice).
inline constexpr double kRowsPerTerm = 10;

// One sentence or two each: first what this very model calls for (rows left out, few rows for a
// term or a level, columns left out, an exact or saturated fit, what the checks found, totals of a
// re-expressed response, …), then what goes for every regression. `model` is fitted.
std::vector<std::string> CautionsOf(const Model& model);

// Of the rows left out, column by column: `building age is missing in 12, cost is outside its
// re-expression in 3`; empty when none was.
std::string LeftOutPhrase(const Model& model);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REPORT_CAUTIONS_H_
