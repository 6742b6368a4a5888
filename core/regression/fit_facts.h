// The figures that describe a whole fit, on the scale the model was fitted on.
#ifndef LADDERLINE_CORE_REGRESSION_FIT_FACTS_H_
#define LADDERLINE_CORE_REGRESSION_FIT_FACTS_H_

#include "core/regression/least_squares.h"

namespace ladderline {

struct FitFacts {
  std::int64_t residual_df = 0;
  double residual_sd = 0;  // NaN when saturated
  double r_squared = 0;    // about the mean with an intercept, about 0 without; NaN: flat response
  double adjusted_r_squared = 0;  // NaN also when saturated
  // All columns but the intercept against none. NaN without such columns, when saturated, or for a
  // flat response; +inf with p 0 for an exact fit.
  double f = 0;
  double f_df1 = 0;
  double f_df2 = 0;
  double f_p = 0;
  // Normal log-likelihood at the maximum, ½ Σ ln w included; NaN for saturated and exact fits.
  double log_likelihood = 0;
  double aic = 0;  // −2 log L + 2 (rank + 1): the residual sd counts as a parameter
  double bic = 0;  // −2 log L + ln(n) (rank + 1)
};

FitFacts FactsOf(const LeastSquares& fit);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_FIT_FACTS_H_
