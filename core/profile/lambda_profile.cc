#include "core/profile/lambda_profile.h"

#include <cmath>
#include <limits>

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

LambdaProfile MakeLambdaProfile(const PowerResponse& response, const ProfileMaximum& maximum,
                                const ProfilePoint& top, const Profile& slope, const Profile& value,
                                double level, double unit) {
  const auto [low, high] = LikelihoodInterval(slope, maximum.lambda, top, level, unit);
  const auto p_value = [&](double lambda) {
    return ChiSquareUpperTail(2 * (top.log_likelihood - value(lambda).log_likelihood), 1);
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

LambdaProfile ExactLambdaProfile(const PowerResponse& response, double lambda, double level) {
  const auto p_value = [&](double other) { return other == lambda ? 1.0 : 0.0; };
  return {.lambda = lambda,
          .low = lambda,
          .high = lambda,
          .level = level,
          .log_likelihood = std::numeric_limits<double>::quiet_NaN(),
          .rows = static_cast<std::int64_t>(response.rows()),
          .simple = lambda,
          .simple_spec = PowerSpec(response.family(), lambda),
          .p_identity = p_value(1),
          .p_log = p_value(0),
          .at_limit = false,
          .exact = true};
}

std::optional<LambdaProfile> ProfileLambda(const PowerResponse& response, double level) {
  if (response.IsConstant()) return std::nullopt;
  const auto profile = [&](double lambda) { return ColumnProfileAt(response, lambda); };
  const ProfileMaximum maximum = MaximiseColumnProfile(response);
  return MakeLambdaProfile(response, maximum, profile(maximum.lambda), profile, profile, level,
                           1 / response.spread());
}

std::optional<double> EstimateLambda(const PowerResponse& response) {
  if (response.IsConstant()) return std::nullopt;
  return MaximiseColumnProfile(response).lambda;
}

}  // namespace ladderline
