// How the residuals are distributed: their lean and tails, and two tests of normality.
//
// About the residuals' own mean, which is not 0 without an intercept. With weights the residuals
// are those of rows scaled by √w.
#ifndef LADDERLINE_CORE_CHECKS_RESIDUAL_SHAPE_H_
#define LADDERLINE_CORE_CHECKS_RESIDUAL_SHAPE_H_

#include <cstdint>
#include <limits>
#include <span>

#include "core/checks/test_figures.h"

namespace ladderline {

struct ResidualShape {
  double skewness = std::numeric_limits<double>::quiet_NaN();         // adjusted, G1
  double excess_kurtosis = std::numeric_limits<double>::quiet_NaN();  // g2
  TestFigures jarque_bera;
  // Of a systematic sample of 5,000 residuals (systematic_sample.h) where there are more.
  TestFigures shapiro_wilk;
  std::int64_t shapiro_wilk_rows = 0;
};

// The residuals are finite. What too few or equal ones do not give is NaN or not computed.
ResidualShape ResidualShapeOf(std::span<const double> residuals);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_RESIDUAL_SHAPE_H_
