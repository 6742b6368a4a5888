// The arithmetic of the power family, for values and exponents known to more than double precision.
//
// Box–Cox takes u = x + offset, Yeo–Johnson u = 1 + |x| with an exponent λ or 2 − λ: all sums of
// two doubles, whose rounding would cost digits where u is near 1 or the exponent near 0. So u and
// λ are double-doubles.
#ifndef LADDERLINE_CORE_TRANSFORM_POWER_FAMILY_H_
#define LADDERLINE_CORE_TRANSFORM_POWER_FAMILY_H_

#include "core/support/double_double.h"

namespace ladderline {

// ln(u), given log_hi = Log(u.hi). NaN for u < 0, -inf at 0.
double LogOfSum(DoubleDouble u, double log_hi);

// (u^λ − 1)/λ, ln(u) at λ = 0; given log_u = LogOfSum(u). NaN unless u > 0. Within 4 ulp.
double BoxCoxOf(DoubleDouble u, double log_u, DoubleDouble lambda);

// (1 + λz)^(1/λ) − offset, exp(z) − offset at λ = 0. NaN where 1 + λz < 0, and where it is 0 and
// λ < 0; at 0 with λ > 0 it is −offset. Whether it is 0 or below is judged by the rounded product,
// so that every z that BoxCoxOf gives has a way back.
double BoxCoxBack(double z, DoubleDouble lambda, double offset);

// exp(w) − offset, given exp_w = Exp(w); without cancellation for offsets near 1.
double ExpMinus(double w, double exp_w, double offset);

// u^(1/p) for u ≥ 0, with 1/p carried beyond double precision. At u = 0: 0 for p > 0, inf for p <
// 0.
double Root(DoubleDouble u, DoubleDouble p);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_TRANSFORM_POWER_FAMILY_H_
