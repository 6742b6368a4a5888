// The columns a fit works on: (x − centre) · factor, factor a power of two, so that squares of any
// finite data neither overflow nor underflow and nothing but the subtraction rounds.
#ifndef LADDERLINE_CORE_REGRESSION_COLUMN_SCALING_H_
#define LADDERLINE_CORE_REGRESSION_COLUMN_SCALING_H_

#include <vector>

#include "core/regression/row_source.h"

namespace ladderline {

struct ColumnScaling {
  struct Column {
    double centre = 0;
    double factor = 1;  // a power of two
    double scaled_centre() const { return centre * factor; }
  };

  std::vector<Column> x;
  Column y;
  double weight_factor = 1;   // a power of four, so that its root is one of two
  double weight_sum = 0;      // of the raw weights; rows without
  double log_weight_sum = 0;  // Σ ln w
  double y_mean = 0;          // weighted; NaN without rows
};

// Reads all rows once. Columns are centred at their weighted means where the source leaves it open
// and the design has an intercept; a column whose range overflows is measured from 0.
ColumnScaling MeasureColumns(const RowSource& source);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_COLUMN_SCALING_H_
