// The covariance of a fit whose errors go together within clusters of rows.
//
// In orthonormal coordinates M = c Σ_g s_g s_g', s_g = Σ e q over the rows of cluster g, with
// c = G/(G−1) · (n−1)/(n−k): CR1. Its t law has G − 1 degrees of freedom.
//   few     fewer than 2 clusters and a saturated fit have scale NaN. Rows of leverage 1 leave
//           directions unknown, as in covariance.h. With few clusters (common practice: under 40)
//           limits come out too narrow.
//   memory  8 bytes per row at most: clusters too many for that are worked in several readings
//   cost    rank multiplications per row, rank² · 1.5 per cluster
//   source  Liang & Zeger, Biometrika 73 (1986); Cameron & Miller, J. Human Resources 50 (2015)
#ifndef LADDERLINE_CORE_REGRESSION_CLUSTER_COVARIANCE_H_
#define LADDERLINE_CORE_REGRESSION_CLUSTER_COVARIANCE_H_

#include <cstdint>
#include <span>

#include "core/regression/covariance.h"

namespace ladderline {

// The cluster of every row, numbered from 0 without gaps.
struct Clusters {
  std::span<const std::uint32_t> of_row;
  std::int64_t count = 0;
};

//   residuals  of rows scaled by √w, as PassResiduals hands them over, one per row of the source
Covariance ClusterCovariance(const RowSource& source, const LeastSquares& fit,
                             const ResidualSummary& summary, std::span<const double> residuals,
                             const Clusters& clusters);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_CLUSTER_COVARIANCE_H_
