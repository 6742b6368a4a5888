// Columns of double-doubles, kept as a column of high and one of low parts so that loops over rows
// run several rows at a time.
#ifndef LADDERLINE_CORE_REGRESSION_DOUBLE_DOUBLE_COLUMNS_H_
#define LADDERLINE_CORE_REGRESSION_DOUBLE_DOUBLE_COLUMNS_H_

#include <vector>

#include "core/regression/centred_basis.h"
#include "core/regression/column_scaling.h"
#include "core/regression/row_source.h"
#include "core/support/double_double.h"

namespace ladderline {

class DoubleDoubleColumns {
 public:
  // Rows per column: a multiple of the lanes of `Dot`, short enough for a dozen columns to stay in
  // the first-level cache.
  static constexpr Index kRows = 64;

  explicit DoubleDoubleColumns(Index columns) : numbers_(2 * kRows * columns) {}

  double* hi(Index j) { return numbers_.data() + 2 * kRows * j; }
  double* lo(Index j) { return hi(j) + kRows; }
  const double* hi(Index j) const { return numbers_.data() + 2 * kRows * j; }
  const double* lo(Index j) const { return hi(j) + kRows; }
  DoubleDouble at(Index j, Index row) const { return {hi(j)[row], lo(j)[row]}; }

  // Column j := (x + x_low − centre) · factor for n rows, zeros behind them; x_low may be null.
  void Set(Index j, const double* x, const double* x_low, const ColumnScaling::Column& scaling,
           Index n);
  // Column j −= factor · column of `other`.
  void SubtractMultiple(Index j, DoubleDouble factor, const DoubleDoubleColumns& other,
                        Index other_column);
  // Column j := factor · itself.
  void Multiply(Index j, DoubleDouble factor);
  // Column j := w · column of `other`; w null: 1. Rows from n on stay zero.
  void SetWeighted(Index j, const double* w, Index n, const DoubleDoubleColumns& other,
                   Index other_column);

  // Columns 0..n-1 := those of R^-T, row by row; `r` packed, `reciprocal` that of its diagonal.
  void SolveTransposed(Index n, const DoubleDouble* r, const DoubleDouble* reciprocal);

  static DoubleDouble Dot(const DoubleDoubleColumns& a, Index a_column,
                          const DoubleDoubleColumns& b, Index b_column);

 private:
  std::vector<double> numbers_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_DOUBLE_DOUBLE_COLUMNS_H_
