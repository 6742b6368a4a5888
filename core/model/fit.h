// From kept rows to a model: ordinary least squares with everything a Model holds.
#ifndef LADDERLINE_CORE_MODEL_FIT_H_
#define LADDERLINE_CORE_MODEL_FIT_H_

#include <string>

#include "core/model/columns.h"
#include "core/model/model.h"
#include "core/support/result.h"

namespace ladderline {

inline constexpr std::size_t kMostTerms = 1000;

struct FitOptions {
  bool intercept = true;
  ErrorKind errors = ErrorKind::kClassical;  // classical or hc0..hc3
  double level = 0.95;                       // of limits, in (0, 1)
  std::string name;
  bool checks = true;
};

// Too few rows for the terms, no rows, or a given reference level without rows make a refused
// model. More than kMostTerms terms, or no term at all, is an error in words.
//   cost  two passes over the rows for the fit (a third, in double-double, where least_squares.h
//         calls for it), one more for each column's quartiles; memory 8 bytes per row besides
//         the columns
Result<Model> FitOls(const ColumnSet& set, const FitOptions& options);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_FIT_H_
