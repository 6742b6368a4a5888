// The search for a maximum and its limits, on profiles whose answers are known in closed form.
#include "core/profile/lambda_search.h"

#include <gtest/gtest.h>

#include <cmath>

namespace ladderline {
namespace {

// c − k (λ − m)²/2: a normal likelihood.
Profile Parabola(double middle, double k) {
  return [=](double lambda) {
    const double d = lambda - middle;
    return ProfilePoint{3 - k * d * d / 2, -k * d, -k};
  };
}

// m λ − e^λ: a Poisson likelihood, maximum at ln m, far from a parabola.
Profile Poisson(double m) {
  return [=](double lambda) {
    const double e = std::exp(lambda);
    return ProfilePoint{m * lambda - e, m - e, -e};
  };
}

TEST(LambdaSearch, AParabolaNeedsOneStep) {
  int calls = 0;
  const Profile parabola = Parabola(0.75, 40);
  const ProfileMaximum maximum = MaximiseProfile(
      [&](double lambda) {
        ++calls;
        return parabola(lambda);
      },
      -2, 1);
  EXPECT_NEAR(maximum.lambda, 0.75, 1e-14);
  EXPECT_FALSE(maximum.at_limit);
  EXPECT_LE(calls, 2);
}

TEST(LambdaSearch, FindsTheMaximumFromAnyStart) {
  for (double m : {0.05, 0.9, 1.0, 7.0, 120.0})
    for (double start : {-5.0, -1.0, 0.0, 2.5, 5.0, -1000.0, 1000.0})
      EXPECT_NEAR(MaximiseProfile(Poisson(m), start, 1).lambda, std::log(m), 1e-10)
          << m << " from " << start;
}

TEST(LambdaSearch, StopsAtTheEndsOfTheSearch) {
  for (double start : {-4.0, 0.0, 4.0}) {
    const ProfileMaximum above = MaximiseProfile(Parabola(5.5, 1), start, 1);
    EXPECT_EQ(above.lambda, kLargestLambda);
    EXPECT_TRUE(above.at_limit);
    const ProfileMaximum below = MaximiseProfile(Poisson(1e-4), start, 1);
    EXPECT_EQ(below.lambda, kLeastLambda);
    EXPECT_TRUE(below.at_limit);
  }
}

// χ²(1) quantile at 0.95, R 4.2.2 qchisq(0.95, 1): 3.841458820694124.
TEST(LambdaSearch, LimitsOfAParabolaAreItsStandardErrors) {
  const Profile profile = Parabola(0.75, 40);
  const auto [low, high] = LikelihoodInterval(profile, 0.75, profile(0.75), 0.95, 1);
  const double half_width = std::sqrt(3.841458820694124 / 40);
  EXPECT_NEAR(low, 0.75 - half_width, 1e-12);
  EXPECT_NEAR(high, 0.75 + half_width, 1e-12);
}

TEST(LambdaSearch, LimitsLieAtTheStatedDrop) {
  for (double m : {0.9, 7.0, 30.0}) {
    const Profile profile = Poisson(m);
    const double lambda = std::log(m), top = profile(lambda).log_likelihood;
    const auto [low, high] = LikelihoodInterval(profile, lambda, profile(lambda), 0.95, 1);
    EXPECT_LT(low, lambda);
    EXPECT_GT(high, lambda);
    EXPECT_NEAR(2 * (top - profile(low).log_likelihood), 3.841458820694124, 1e-8);
    EXPECT_NEAR(2 * (top - profile(high).log_likelihood), 3.841458820694124, 1e-8);
  }
}

TEST(LambdaSearch, LimitsBeyondTheSearchAreOpen) {
  const Profile flat = Parabola(1, 1e-3);
  auto [low, high] = LikelihoodInterval(flat, 1, flat(1), 0.95, 1);
  EXPECT_TRUE(std::isnan(low) && std::isnan(high));
  const Profile rising = Parabola(5.5, 10);
  const auto held = LikelihoodInterval(rising, 5, rising(5), 0.95, 1);
  EXPECT_FALSE(std::isnan(held.low));
  EXPECT_TRUE(std::isnan(held.high));
}

}  // namespace
}  // namespace ladderline
