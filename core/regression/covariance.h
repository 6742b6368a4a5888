// Covariances of a fit, kept in its orthonormal coordinates, where nothing cancels.
//
// The coefficients are β = R^-1 θ with θ = Q'y; a Covariance is that of θ, and the variance of a
// functional with coordinates a (centred_basis.h) is a'Ma.
//   classical  s² I
//   hc0..hc3   White 1980, n/(n−k) of it, and MacKinnon & White 1985
//   cluster    cluster_covariance.h
#ifndef LADDERLINE_CORE_REGRESSION_COVARIANCE_H_
#define LADDERLINE_CORE_REGRESSION_COVARIANCE_H_

#include <span>
#include <vector>

#include "core/regression/error_kind.h"
#include "core/regression/least_squares.h"
#include "core/regression/residual_pass.h"

namespace ladderline {

struct Covariance {
  double scale = 0;            // M = scale · 4^exponent · matrix; an empty matrix stands for I
  int exponent = 0;            // other than 0 where M itself may leave the range of a double
  std::vector<double> matrix;  // packed rank × rank, or empty
  // Unit directions of which no row tells the variance (rows of leverage 1, robust kinds only).
  std::vector<std::vector<double>> unknown;
};

// `kind` is classical or one of hc0..hc3. A saturated fit has scale NaN in every kind. `summary`
// must have been made with `robust` for the kinds other than classical, which does not read it.
Covariance CovarianceOf(ErrorKind kind, const LeastSquares& fit, const ResidualSummary& summary);

// a'Ma / 4^exponent ≥ 0; NaN when the scale is NaN or when a leans on an unknown direction u: |a'u|
// > 1e-8 ‖a‖.
double Variance(const Covariance& covariance, std::span<const double> coordinates);
// √a'Ma, also where the square would overflow or underflow.
double StandardError(const Covariance& covariance, std::span<const double> coordinates);

// Standard errors of the raw coefficients: one per source column, NaN for a dropped one.
std::vector<double> StandardErrors(const CentredBasis& basis, const Covariance& covariance);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_COVARIANCE_H_
