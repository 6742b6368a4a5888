// The power that a column of data asks for: maximum-likelihood λ with its likelihood-ratio
// interval, and the plain power an analyst would rather use.
//
//   no rows, one row, one value    nullopt: the likelihood says nothing about λ
//   two rows                       Box–Cox: λ = 0 by symmetry
//   two distinct values            a λ like any other, though the data can hardly tell
//   NaN, infinity, (Box–Cox) ≤ 0   not allowed: the caller leaves such rows out and counts them
//   all of double's range          no overflow, nothing special
//   source  Box & Cox, J. R. Statist. Soc. B 26 (1964); Yeo & Johnson, Biometrika 87 (2000)
#ifndef LADDERLINE_CORE_PROFILE_LAMBDA_PROFILE_H_
#define LADDERLINE_CORE_PROFILE_LAMBDA_PROFILE_H_

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "core/profile/lambda_search.h"
#include "core/profile/power_response.h"

namespace ladderline {

struct LambdaProfile {
  double lambda;          // largest likelihood between −5 and 5
  double low, high;       // likelihood-ratio interval; NaN: beyond the search, open on that side
  double level;           // of the interval
  double log_likelihood;  // at λ; full, on the original scale; NaN where it is infinite
  std::int64_t rows;
  double simple;             // the plain power nearest λ inside the interval, else λ
  std::string simple_spec;   // the re-expression of that power: `sqrt_offset`, `power_of 3`
  double p_identity, p_log;  // likelihood-ratio tests (χ², 1 df) of λ = 1 and λ = 0
  bool at_limit;             // the likelihood still rises at λ = −5 or 5
  bool exact = false;        // predictors fit the response exactly at λ (response_profile.h)
};

// The plain power −2, −1, −½, 0, ⅓, ½, 1, 2 or 3 nearest λ inside [low, high] (NaN: open); λ itself
// where the interval holds none.
double SimplePower(double lambda, double low, double high);

// The re-expression that a power stands for. A plain power of Box–Cox has its plain name; any power
// of Yeo–Johnson is `yeo_johnson POWER`.
std::string PowerSpec(PowerFamily family, double power);

//   accuracy  λ to 1e-9 (where values differ by a share s of their size, to 1e-15/s if that is
//             more), limits to 1e-7, log-likelihood to 1e-10 relative
//   level     above 0, below 1
//   cost      as EstimateLambda, and ten passes or so for limits and tests
std::optional<LambdaProfile> ProfileLambda(const PowerResponse& response, double level);

// The profile around a maximum, whatever model the likelihood is of.
//   top    the likelihood at the maximum, with its derivatives
//   slope  the likelihood and its score at any λ
//   value  the likelihood at any λ
//   unit   as lambda_search.h has it
LambdaProfile MakeLambdaProfile(const PowerResponse& response, const ProfileMaximum& maximum,
                                const ProfilePoint& top, const Profile& slope, const Profile& value,
                                double level, double unit);

// The profile of a response that is fitted exactly at λ.
LambdaProfile ExactLambdaProfile(const PowerResponse& response, double lambda, double level);

// The same λ alone, to the last bit. Two or three passes over long columns.
std::optional<double> EstimateLambda(const PowerResponse& response);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_PROFILE_LAMBDA_PROFILE_H_
