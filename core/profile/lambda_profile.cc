#include "core/profile/lambda_profile.h"

#include <cmath>

#include "core/profile/column_profile.h"
#include "core/support/distributions.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

struct PlainPower {
  double power;
  const char* spec;
};
constexpr PlainPower kPlainPowers[] = {
    {-2, "power_of -2"},
    {-1, "negative_reciprocal"},
    {-0.5, "power_of -0.5"},
    {0, "log_offset"},
    {1.0 / 3, "power_of 0.3333333333333333"},
    {0.5, "sqrt_offset"},
    {1, "identity"},
    {2, "square"},
    {3, "power_of 3"},
};

}  // namespace

double SimplePower(double lambda, double low, double high) {
  const PlainPower* nearest = nullptr;
  for (const PlainPower& plain : kPlainPowers) {
    if (plain.power < low || plain.power > high) continue;
    if (nearest == nullptr || std::fabs(plain.power - lambda) < std::fabs(nearest->power - lambda))
      nearest = &plain;
  }
  return nearest == nullptr ? lambda : nearest->power;
}

std::string PowerSpec(PowerFamily family, double power) {
  if (family == PowerFamily::kYeoJohnson) return "yeo_johnson " + NumberText(power);
  for (const PlainPower& plain : kPlainPowers)
    if (plain.power == power) return plain.spec;
  return "box_cox " + NumberText(power);
}

std::optional<LambdaProfile> ProfileLambda(const PowerResponse& response, double level) {
  if (response.IsConstant()) return std::nullopt;
  const auto profile = [&](double lambda) { return ColumnProfileAt(response, lambda); };
  const ProfileMaximum maximum = MaximiseColumnProfile(response);
  const ProfilePoint top = profile(maximum.lambda);
  const auto [low, high] =
      LikelihoodInterval(profile, maximum.lambda, top, level, 1 / response.spread());
  const auto p_value = [&](double lambda) {
    return ChiSquareUpperTail(2 * (top.log_likelihood - profile(lambda).log_likelihood), 1);
  };
  LambdaProfile result;
  result.lambda = maximum.lambda;
  result.low = low;
  result.high = high;
  result.level = level;
  result.log_likelihood = top.log_likelihood;
  result.rows = static_cast<std::int64_t>(response.rows());
  result.simple = SimplePower(maximum.lambda, low, high);
  result.simple_spec = PowerSpec(response.family(), result.simple);
  result.p_identity = p_value(1);
  result.p_log = p_value(0);
  result.at_limit = maximum.at_limit;
  return result;
}

std::optional<double> EstimateLambda(const PowerResponse& response) {
  if (response.IsConstant()) return std::nullopt;
  return MaximiseColumnProfile(response).lambda;
}

}  // namespace ladderline
