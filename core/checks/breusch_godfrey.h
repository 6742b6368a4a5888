// Whether a residual goes with that of the row before: the test for first-order serial correlation.
//
// n R² of the regression of the residuals on the design columns and the residual of the row before
// (0 for the first row), against χ² with one degree of freedom. Rows are scaled by √w throughout.
//   source  Breusch, Australian Econ. Papers 17 (1978); Godfrey, Econometrica 46 (1978)
#ifndef LADDERLINE_CORE_CHECKS_BREUSCH_GODFREY_H_
#define LADDERLINE_CORE_CHECKS_BREUSCH_GODFREY_H_

#include "core/checks/projection_sums.h"
#include "core/checks/test_figures.h"
#include "core/regression/least_squares.h"

namespace ladderline {

class BreuschGodfrey {
 public:
  // `fit` must outlive this.
  explicit BreuschGodfrey(const LeastSquares& fit);
  void Add(const CheckBlock& block);
  // Not computed with too few rows for one more column, or when the residuals of the rows before
  // repeat the design columns.
  TestFigures Finish() const;
  // Σ e_t e_(t−1) / Σ e².
  double LagCorrelation() const;

 private:
  const LeastSquares& fit_;
  ProjectionSums lagged_in_fit_;
  DoubleDouble lagged_lagged_, lagged_residual_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_BREUSCH_GODFREY_H_
