// The maximum of a profile likelihood in λ, and the likelihood-ratio interval around it, whatever
// model the likelihood is of.
#ifndef LADDERLINE_CORE_PROFILE_LAMBDA_SEARCH_H_
#define LADDERLINE_CORE_PROFILE_LAMBDA_SEARCH_H_

#include <functional>

namespace ladderline {

// λ is searched between these.
constexpr double kLeastLambda = -5, kLargestLambda = 5;

// The log-likelihood at one λ, its derivative (the score) and its second derivative.
struct ProfilePoint {
  double log_likelihood, score, score_slope;
};
using Profile = std::function<ProfilePoint(double lambda)>;

struct ProfileMaximum {
  double lambda;
  bool at_limit;  // the likelihood still rises at that end of the search
};

// Where the score is zero, to 1e-10 where its rounding allows: from `start`, Newton steps and
// inverse interpolation kept inside a bracket; two or three evaluations from a good start. Of
// several maxima it finds one.
//   unit   a length of λ over which the profile changes its shape; for one column, one over the
//          spread of the logarithms
ProfileMaximum MaximiseProfile(const Profile& profile, double start, double unit);

struct ProfileInterval {
  double low, high;  // NaN: open on that side, the likelihood is not low enough within the search
};

// The λ on both sides at which twice the drop of log-likelihood is the χ²(1) quantile at `level`
// (0 < level < 1), to 1e-9. `top` is the profile at its maximum `lambda`.
ProfileInterval LikelihoodInterval(const Profile& profile, double lambda, const ProfilePoint& top,
                                   double level, double unit);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_PROFILE_LAMBDA_SEARCH_H_
