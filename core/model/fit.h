// From kept rows to a model: ordinary least squares with everything a Model holds.
#ifndef LADDERLINE_CORE_MODEL_FIT_H_
#define LADDERLINE_CORE_MODEL_FIT_H_

#include <optional>
#include <string>

#include "core/model/columns.h"
#include "core/model/model.h"
#include "core/support/result.h"

namespace ladderline {

struct FitOptions {
  bool intercept = true;
  // Left out: cluster where there is a cluster column, else classical.
  std::optional<ErrorKind> errors;
  double level = 0.95;  // of limits, in (0, 1)
  std::string name;
  bool checks = true;
};

// Why the rows of a model do not carry a fit; empty when they do. Its columns, terms and rows are
// set; the labels of its columns are those of `set`.
std::string Shortage(const ColumnSet& set, const Model& model);

// Too few rows for the terms, no rows, a given reference level without rows, too many levels or
// terms, a transform that cannot be estimated (estimated_transforms.h), and numbers so large or
// small that the fit leaves the range of a double make a refused model. No predictor and no
// intercept is an error in words, and so is a response whose power is to be estimated without an
// intercept.
//   cost  two passes over the rows for the fit (a third, in double-double, where least_squares.h
//         calls for it), one more for each column's quartiles; memory 8 bytes per row besides
//         the columns, and 8 more where the response is re-expressed
Result<Model> FitOls(const ColumnSet& set, const FitOptions& options);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_FIT_H_
