// Every test of the residuals of one fit, from one reading of the rows.
#ifndef LADDERLINE_CORE_CHECKS_RESIDUAL_TESTS_H_
#define LADDERLINE_CORE_CHECKS_RESIDUAL_TESTS_H_

#include <limits>
#include <span>

#include "core/checks/residual_shape.h"
#include "core/checks/test_figures.h"
#include "core/regression/least_squares.h"
#include "core/regression/row_source.h"

namespace ladderline {

struct ResidualTests {
  TestFigures breusch_pagan;
  TestFigures white;
  bool white_by_fitted = false;  // its short form, see white.h
  TestFigures reset;
  // How far the powers of RESET would move the fitted values, in residual sds; see reset.h.
  double reset_move = std::numeric_limits<double>::quiet_NaN();
  ResidualShape shape;
  double durbin_watson = std::numeric_limits<double>::quiet_NaN();
  TestFigures breusch_godfrey;
  double lag_correlation = std::numeric_limits<double>::quiet_NaN();
};

//   residuals  of rows scaled by √w, as PassResiduals hands them over, one per row of the source
//   order      order[t] is the row that comes t-th, for serial correlation; empty: the rows' order
//   domain     every test of a saturated and of an exact fit is not computed, and says so
//   cost       one reading of the rows and 1 + 4 p multiplications per row and design column; White
//              147 more for 5 columns, 238 for 6, 2 from 7 on; one more fit for a weighted fit and
//              one without intercept; 8 bytes per row when an order is given
ResidualTests TestResiduals(const RowSource& source, const LeastSquares& fit,
                            std::span<const double> residuals, std::span<const Index> order = {});

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_RESIDUAL_TESTS_H_
