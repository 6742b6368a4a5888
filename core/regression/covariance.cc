#include "core/regression/covariance.h"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>

#include "core/regression/column_kernels.h"

namespace ladderline {
namespace {

// Rounding leaves a few 1e-16 of a coordinate that is truly 0.
constexpr double kLeans = 1e-8;

}  // namespace

Covariance CovarianceOf(ErrorKind kind, const LeastSquares& fit, const ResidualSummary& summary) {
  Covariance covariance;
  const double df = static_cast<double>(fit.residual_df());
  if (fit.residual_df() <= 0) {
    covariance.scale = std::numeric_limits<double>::quiet_NaN();
    return covariance;
  }
  switch (kind) {
    case ErrorKind::kClassical:
      covariance.scale = fit.residual_ss / df;
      return covariance;
    case ErrorKind::kHc0:
      covariance.scale = 1;
      covariance.matrix = summary.hc0;
      break;
    case ErrorKind::kHc1:
      covariance.scale = static_cast<double>(fit.rows) / df;
      covariance.matrix = summary.hc0;
      break;
    case ErrorKind::kHc2:
      covariance.scale = 1;
      covariance.matrix = summary.hc2;
      break;
    case ErrorKind::kHc3:
      covariance.scale = 1;
      covariance.matrix = summary.hc3;
      break;
    case ErrorKind::kCluster:
      assert(false && "clusters are no part of a residual pass");
      break;
  }
  covariance.unknown = summary.decided_alone;
  return covariance;
}

double Variance(const Covariance& covariance, std::span<const double> coordinates) {
  const double* a = coordinates.data();
  const Index n = static_cast<Index>(coordinates.size());
  const double square = Dot(a, a, n);
  for (const std::vector<double>& direction : covariance.unknown) {
    if (std::abs(Dot(a, direction.data(), n)) > kLeans * std::sqrt(square))
      return std::numeric_limits<double>::quiet_NaN();
  }
  if (covariance.matrix.empty()) return covariance.scale * square;
  double sum = 0;
  for (Index j = 0; j < n; ++j) {
    const double* column = covariance.matrix.data() + PackedIndex(0, j);
    sum += a[j] * (2 * Dot(a, column, j) + a[j] * column[j]);
  }
  return covariance.scale * std::max(sum, 0.0);
}

double StandardError(const Covariance& covariance, std::span<const double> coordinates) {
  const int exponent = SizeExponent(coordinates.data(), static_cast<Index>(coordinates.size()));
  std::vector<double> scaled(coordinates.begin(), coordinates.end());
  for (double& coordinate : scaled) coordinate = std::ldexp(coordinate, -exponent);
  return std::ldexp(std::sqrt(Variance(covariance, scaled)), exponent + covariance.exponent);
}

std::vector<double> StandardErrors(const CentredBasis& basis, const Covariance& covariance) {
  const std::size_t rank = static_cast<std::size_t>(basis.rank());
  const std::vector<double> rows = TermCoordinates(basis);
  std::vector<double> errors(basis.columns, std::numeric_limits<double>::quiet_NaN());
  for (Index column : basis.kept)
    errors[column] = StandardError(covariance, std::span(rows).subspan(column * rank, rank));
  return errors;
}

}  // namespace ladderline
