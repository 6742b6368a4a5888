// The one Boost.Math policy, for every room that uses a distribution or a root finder.
#ifndef LADDERLINE_CORE_SUPPORT_MATH_POLICY_H_
#define LADDERLINE_CORE_SUPPORT_MATH_POLICY_H_

#include <boost/math/policies/policy.hpp>

namespace ladderline {

// double stays double: with promotion on, the digits depend on the platform's long double.
// Overflow yields an infinity (the p = 1 quantile of a t law is an answer, not a failure);
// underflow yields the smallest number or 0. Domains are checked before Boost is called.
using MathPolicy = boost::math::policies::policy<
    boost::math::policies::promote_double<false>, boost::math::policies::promote_float<false>,
    boost::math::policies::overflow_error<boost::math::policies::ignore_error>,
    boost::math::policies::underflow_error<boost::math::policies::ignore_error>,
    boost::math::policies::denorm_error<boost::math::policies::ignore_error>>;

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SUPPORT_MATH_POLICY_H_
