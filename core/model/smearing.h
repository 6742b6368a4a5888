// The mean in original units of a model whose response was re-expressed: Duan's smearing estimate.
//
// Going back from a fitted value gives a median-type value. The mean of a case with fitted value f
// is estimated by the average of back(f + e) over the residuals e of the fitted rows, weighted as
// the fit was. What is stored is enough to compute that average for any f without the rows:
//
//   kNone        linear responses (identity, z_score, rescale, center, date_days, yeo_johnson 1):
//                mean = back(f), the fit itself.
//   kFactor      log_offset, log_reflected, box_cox 0. values = {F}, F = mean of base^e (of e^-e
//                for log_reflected, e^e for box_cox 0).
//                mean = F back(f) + (1 − F) edge, edge = −offset or top. Exact.
//   kHyperbolic  asinh_scaled. values = {mean of cosh(θe), mean of sinh(θe)}.
//                mean = (sinh(θf) values[0] + cosh(θf) values[1]) / θ. Exact.
//   kMoments     sqrt_offset, power_of p and box_cox λ whose inverse power n = 1/p (2 for sqrt) is
//                whole, 1..12: back(z) = (α + βz)^n − offset with α, β = 0, 1 (box_cox: 1, λ).
//                values = {least βe, mean of βe, mean of (βe)², …, mean of (βe)^n}.
//                With u = α + βf, where u + least βe ≥ 0, mean = Σ_k C(n,k) u^(n−k) mean of (βe)^k
//                − offset. Exact. Elsewhere some row's back(f + e) is held at the domain's edge,
//                and the points serve.
//   kPoints      all others. points = {e_1, weight_1, e_2, weight_2, …}, in rising order of e:
//                mean = Σ weight_i back(f + e_i) / Σ weight_i, each term held at the domain's edge
//                as Transform::BackHeld says; NaN when one of them has no value.
//
// The points stand for the sorted residuals in 25 groups of (nearly) equal numbers of rows; each
// group by the two points that have its weight, mean, variance and third moment (a group of one or
// two rows by those). Exact up to 50 rows. Beyond, the mean misses the average over all rows by
// 1e-4 of the correction, mean less median, or less for smooth ways back, by about 1e-3 of it where
// an edge of the domain cuts through a group.
//
//   residuals  on the transformed scale, observed less fitted, not scaled by weights; finite
//   weights    as many, above 0; empty: all equal
//   overflow   a stored value or a result that overflows is NaN
//   source     Duan, "Smearing Estimate: A Nonparametric Retransformation Method", J. Amer.
//              Statist. Assoc. 78 (1983)
#ifndef LADDERLINE_CORE_MODEL_SMEARING_H_
#define LADDERLINE_CORE_MODEL_SMEARING_H_

#include <array>
#include <cstdint>
#include <span>
#include <string_view>
#include <vector>

#include "core/transform/transform.h"

namespace ladderline {

struct Smearing {
  enum class Kind { kNone, kFactor, kHyperbolic, kMoments, kPoints };
  Kind kind = Kind::kNone;
  std::vector<double> values = {};
  std::vector<double> points = {};  // kMoments and kPoints; empty: not available, a mean that needs
                                    // them is NaN
};
inline constexpr std::array<std::string_view, 5> kSmearingKindNames = {
    "none", "factor", "hyperbolic", "moments", "points"};

// The kind that a response's transform calls for, and how many `values` it has.
Smearing::Kind SmearingKindOf(const Transform& response);
std::size_t SmearingValueCount(const Transform& response);

// One pass over the residuals; for kMoments and kPoints also a sort of a copy. The order of the
// rows matters in the last digits only. No rows: values NaN, no points.
Smearing MakeSmearing(const Transform& response, std::span<const double> residuals,
                      std::span<const double> weights = {});

// The same with points that stand for at least `floor` of the `rows` residuals each pair, put
// together in their order as above, and without the least residual: means that need it come from
// the points. The other values are averages of all rows already.
Smearing CoarseSmearing(const Smearing& smearing, std::int64_t rows, std::int64_t floor);

// The same for residuals `factor` times as large. Of kFactor and kHyperbolic the moments beyond the
// second are those of a normal law, so that a factor near 1 is meant.
Smearing ScaledSmearing(const Smearing& smearing, double factor);

// The mean in original units where the fitted value on the transformed scale is `fit`; NaN where
// there is none. O(1), with points O(50).
double SmearedMean(const Smearing& smearing, const Transform& response, double fit);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_SMEARING_H_
