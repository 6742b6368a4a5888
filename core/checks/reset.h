// Whether bending the fit would bring it nearer to the response: Ramsey's RESET, powers 2 and 3.
//
// F test of the square and the cube of the fitted value, added to the design columns. With weights
// the regression with them is weighted, too. A power that repeats the columns already there (two
// distinct fitted values, a fit of categories alone) is left out and lowers the degrees of freedom.
//   source  Ramsey, J. R. Stat. Soc. B 31 (1969)
#ifndef LADDERLINE_CORE_CHECKS_RESET_H_
#define LADDERLINE_CORE_CHECKS_RESET_H_

#include "core/checks/gram_regression.h"
#include "core/checks/projection_sums.h"
#include "core/checks/test_figures.h"
#include "core/regression/least_squares.h"

namespace ladderline {

class Reset {
 public:
  // `fit` must outlive this.
  //   fitted_zero  minus the place of a fitted value of 0 on the scale of block.fitted
  Reset(const LeastSquares& fit, double fitted_zero);
  void Add(const CheckBlock& block);
  // Not computed when no power is left, and with too few rows.
  TestFigures Finish() const;
  // How far the fitted values would move, root mean square of rows scaled by √w, in units of the
  // residuals' root mean square: √(1 − RSS with the powers / RSS). NaN when not computed.
  double Move() const;

 private:
  Explained Explain() const;

  const LeastSquares& fit_;
  double fitted_zero_;
  ProjectionSums square_in_fit_, cube_in_fit_;
  DoubleDouble square_square_, square_cube_, cube_cube_, square_residual_, cube_residual_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_RESET_H_
