// The profile likelihood of λ for the response of a regression: the transformed values are normal
// about a linear function of the predictors, with variance σ²/w under weights.
//
// One QR of the predictors serves every λ; each λ takes one pass over the rows, in which the
// transformed response and its derivatives are projected. Where so much of the response is
// explained that the difference of the two sums of squares would lose digits, a second pass sums
// the residuals themselves.
//
// Unlike a column's, this likelihood can have several maxima, so that the search starts from the
// best of the plain powers and the whole ones. It is infinite where the predictors fit the response
// exactly; that is looked for, and said.
//   source  Box & Cox, J. R. Statist. Soc. B 26 (1964), sections 3 and 4
#ifndef LADDERLINE_CORE_PROFILE_RESPONSE_PROFILE_H_
#define LADDERLINE_CORE_PROFILE_RESPONSE_PROFILE_H_

#include "core/profile/lambda_profile.h"
#include "core/profile/lambda_search.h"
#include "core/profile/power_response.h"
#include "core/regression/least_squares.h"
#include "core/regression/row_source.h"
#include "core/support/result.h"

namespace ladderline {

class ResponseProfile {
 public:
  struct Point {
    ProfilePoint profile;  // full log-likelihood on the original scale, ½ Σ ln w included
    double residual_ss;    // of the values as PowerResponse gives them out
    double unexplained;    // its share of the sum of squares about the mean
  };

  //   response  of the design's rows, in their order; IsConstant() is false
  //   design    with an intercept; its own y is not read
  //   fit       of any response on the design; residual_df() > 0
  // All must outlive this.
  ResponseProfile(const PowerResponse& response, const RowSource& design, const LeastSquares& fit);

  // At any finite λ. Derivatives beyond those asked for (0, 1 or 2) are NaN.
  //   accuracy  the share of what is unexplained to 1e-11
  //   cost      (1 + derivatives) multiplications per row and design column; three times as many
  //             where a second pass is needed
  Point At(double lambda, int derivatives) const;

  // Whether sums over the design's columns stay within the range of a double.
  bool InRange() const;
  // Whether residuals that are such a share of the response are no more than rounding.
  bool IsExact(double unexplained) const;

  const PowerResponse& response() const { return response_; }
  const RowSource& design() const { return design_; }

 private:
  struct Projected;
  Projected Pass(const PowerResponse::Transformed& transformed, int derivatives,
                 const std::vector<double>* fitted) const;

  const PowerResponse& response_;
  const RowSource& design_;
  const LeastSquares& fit_;
  std::vector<double> factor_;
  double amplification_;  // by how much projections blow up a rounding of the columns
};

// λ with its interval, as for a column (lambda_profile.h). Where the predictors fit the response
// exactly at some power, `exact` is set, that power is λ and both limits, and the log-likelihood,
// which is infinite, is NaN.
//   response, design  as above, in any number of rows
//   errors            in words: too few rows for the design, a constant response, a response that
//                     the predictors fit exactly at every power, columns whose squares leave the
//                     range of a double
//   cost              the QR, and some ten passes; long data start from a systematic sample
Result<LambdaProfile> ProfileLambda(const PowerResponse& response, const RowSource& design,
                                    double level);

// The same λ alone, to the last bit. With a fit of any response on the design, its QR serves.
Result<double> EstimateLambda(const PowerResponse& response, const RowSource& design);
Result<double> EstimateLambda(const PowerResponse& response, const RowSource& design,
                              const LeastSquares& fit);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_PROFILE_RESPONSE_PROFILE_H_
