// All rows of a source, reduced to one triangle.
#ifndef LADDERLINE_CORE_REGRESSION_FOLD_ROWS_H_
#define LADDERLINE_CORE_REGRESSION_FOLD_ROWS_H_

#include <vector>

#include "core/regression/column_scaling.h"
#include "core/regression/row_source.h"

namespace ladderline {

// The factor of the scaled design columns and, last, the scaled response, all times √(scaled w):
// packed, columns + 1 wide. Diagonal signs are arbitrary.
std::vector<double> FoldRows(const RowSource& source, const ColumnScaling& scaling);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_FOLD_ROWS_H_
