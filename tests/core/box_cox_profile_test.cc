// The Box–Cox profile of a plain column.
#include <algorithm>
#include <limits>
#include <numeric>

#include "core/elementary/elementary.h"
#include "tests/core/lambda_cases.h"

namespace ladderline {
namespace {

using testing::Agrees;
using testing::Printed;
using testing::PrintedList;
using testing::PublishedLambda;

constexpr PowerFamily kFamily = PowerFamily::kBoxCox;

std::optional<LambdaProfile> Profile(std::vector<double> values, double level = 0.95) {
  return ProfileLambda(PowerResponse(kFamily, std::move(values)), level);
}

std::vector<double> Trees() { return testing::ReadCsvColumn("boxcox/trees.csv", "Volume"); }

TEST(BoxCoxProfile, AgreesWithHighPrecision) { testing::ExpectProfilesAgree(kFamily); }
TEST(BoxCoxProfile, LikelihoodAgreesAtAnyLambda) { testing::ExpectPointsAgree(kFamily); }
TEST(BoxCoxProfile, LikelihoodAgreesWithScipy) { testing::ExpectScipyAgrees(kFamily); }

// published.json, trees_intercept_only: recomputed there at 70 digits.
TEST(BoxCoxProfile, TreesInterceptOnly) {
  const nlohmann::json exact = PublishedLambda("trees_intercept_only")["exact"];
  const auto profile = Profile(Trees());
  EXPECT_NEAR(profile->lambda, Printed(exact["lambda_hat"]), 1e-9);
  EXPECT_NEAR(profile->low, Printed(exact["ci95_lr"][0]), 1e-7);
  EXPECT_NEAR(profile->high, Printed(exact["ci95_lr"][1]), 1e-7);
  // max_profile_loglik lacks n/2 (1 + ln 2π).
  EXPECT_TRUE(Agrees(Printed(exact["max_profile_loglik"]),
                     profile->log_likelihood + 15.5 * (1 + std::log(2 * std::acos(-1.0))), 12));
  const double likelihood_at[] = {profile->log_likelihood - Printed(exact["lr_stat_lambda_0"]) / 2,
                                  profile->log_likelihood - Printed(exact["lr_stat_lambda_1"]) / 2};
  const PowerResponse response(kFamily, Trees());
  EXPECT_TRUE(Agrees(likelihood_at[0], ColumnProfileAt(response, 0).log_likelihood, 12));
  EXPECT_TRUE(Agrees(likelihood_at[1], ColumnProfileAt(response, 1).log_likelihood, 12));
}

// published.json, squared_ten: R MASS 7.3-58.2 boxcox on a grid of step 0.00001.
TEST(BoxCoxProfile, SquaredTen) {
  const nlohmann::json example = PublishedLambda("squared_ten");
  std::vector<double> values = PrintedList(example["data"]);
  for (double& v : values) v *= v;
  const auto profile = Profile(values);
  EXPECT_NEAR(profile->lambda, Printed(example["published"]["lambda"]), 1e-5);
  EXPECT_NEAR(profile->low, Printed(example["published"]["ci95_lower"]), 1e-5);
  EXPECT_NEAR(profile->high, Printed(example["published"]["ci95_upper"]), 1e-5);
}

// published.json, llf_cancellation: SciPy's own test, stated there to come from mpmath.
TEST(BoxCoxProfile, LikelihoodFarOffDoesNotCancel) {
  const nlohmann::json example = PublishedLambda("llf_cancellation");
  const PowerResponse response(kFamily, PrintedList(example["data"]));
  EXPECT_TRUE(Agrees(Printed(example["exact"]["profile_loglik"]),
                     ColumnProfileAt(response, Printed(example["lambda"])).log_likelihood +
                         2 * (1 + std::log(2 * std::acos(-1.0))),
                     12));
}

TEST(BoxCoxProfile, SaysNothingOfDataWithoutSpread) {
  EXPECT_FALSE(Profile({}).has_value());
  EXPECT_FALSE(Profile({7}).has_value());
  EXPECT_FALSE(Profile({7, 7, 7}).has_value());
  EXPECT_FALSE(Profile(std::vector<double>(1000, 0.1)).has_value());
  EXPECT_FALSE(EstimateLambda(PowerResponse(kFamily, {7, 7})).has_value());
}

TEST(BoxCoxProfile, TwoRowsGiveTheLogAndAnOpenInterval) {
  const auto profile = Profile({3, 5});
  EXPECT_NEAR(profile->lambda, 0, 1e-9);
  EXPECT_TRUE(std::isnan(profile->low) && std::isnan(profile->high));
  EXPECT_EQ(profile->simple_spec, "log_offset");
  EXPECT_FALSE(profile->at_limit);
}

TEST(BoxCoxProfile, NeighbouringDoublesAreSpread) {
  const double next = std::nextafter(1e10, 2e10);
  const auto profile = Profile({1e10, next, 1e10, next});
  ASSERT_TRUE(profile.has_value());
  EXPECT_TRUE(std::isfinite(profile->log_likelihood));
}

TEST(BoxCoxProfile, MaximumBeyondTheSearchIsHeldAtItsEnd) {
  std::vector<double> values;  // of the 9th power of x: λ = 1/9 would do; of x^(1/9): 9
  for (int i = 1; i <= 200; ++i) values.push_back(Pow(i, 1.0 / 9));
  auto profile = Profile(values);
  EXPECT_EQ(profile->lambda, 5);
  EXPECT_TRUE(profile->at_limit);
  EXPECT_TRUE(std::isnan(profile->high));
  EXPECT_FALSE(std::isnan(profile->low));
  for (double& v : values) v = 1 / v;
  profile = Profile(values);
  EXPECT_EQ(profile->lambda, -5);
  EXPECT_TRUE(profile->at_limit);
  EXPECT_TRUE(std::isnan(profile->low));
  EXPECT_FALSE(std::isnan(profile->high));
}

TEST(BoxCoxProfile, UnitsDoNotMatter) {
  std::vector<double> values = Trees();
  const auto cubic_feet = Profile(values);
  for (double& v : values) v *= 1024;  // exact
  const auto other = Profile(values);
  EXPECT_NEAR(other->lambda, cubic_feet->lambda, 1e-12);
  EXPECT_NEAR(other->low, cubic_feet->low, 1e-9);
  EXPECT_NEAR(other->log_likelihood, cubic_feet->log_likelihood - 31 * std::log(1024.0), 1e-10);
}

TEST(BoxCoxProfile, ReciprocalTurnsTheSign) {
  std::vector<double> values = Trees();
  const auto profile = Profile(values);
  for (double& v : values) v = 1 / v;
  const auto turned = Profile(values);
  EXPECT_NEAR(turned->lambda, -profile->lambda, 1e-9);
  EXPECT_NEAR(turned->low, -profile->high, 1e-7);
  EXPECT_NEAR(turned->high, -profile->low, 1e-7);
}

TEST(BoxCoxProfile, OrderOfRowsDoesNotMatter) {
  std::vector<double> values = Trees();
  const auto profile = Profile(values);
  std::reverse(values.begin(), values.end());
  EXPECT_NEAR(Profile(values)->lambda, profile->lambda, 1e-12);
}

TEST(BoxCoxProfile, AHigherLevelIsWider) {
  const auto narrow = Profile(Trees(), 0.8), wide = Profile(Trees(), 0.99);
  EXPECT_EQ(narrow->lambda, wide->lambda);
  EXPECT_LT(wide->low, narrow->low);
  EXPECT_GT(wide->high, narrow->high);
}

TEST(BoxCoxProfile, EstimateIsTheProfilesLambda) {
  for (const testing::LambdaCase& c : testing::LambdaCases(kFamily))
    EXPECT_EQ(EstimateLambda(PowerResponse(kFamily, c.values)), Profile(c.values)->lambda);
}

TEST(BoxCoxProfile, SimpleIsTheNearestPlainPowerInside) {
  constexpr double kOpen = std::numeric_limits<double>::quiet_NaN();
  EXPECT_EQ(SimplePower(-0.07, -0.7, 0.57), 0);
  EXPECT_EQ(SimplePower(0.36, 0.3, 0.55), 1.0 / 3);
  EXPECT_EQ(SimplePower(0.36, 0.35, 0.55), 0.5);  // ⅓ lies outside
  EXPECT_EQ(SimplePower(0.25, 0.2, 0.3), 0.25);   // none inside
  EXPECT_EQ(SimplePower(4.5, kOpen, kOpen), 3);
  EXPECT_EQ(SimplePower(4.5, 3.2, kOpen), 4.5);
  EXPECT_EQ(SimplePower(-4, kOpen, -1.5), -2);
}

// The words of each plain power, as DESIGN's table of specs has them.
TEST(BoxCoxProfile, EveryPlainPowerHasItsSpec) {
  const std::pair<double, const char*> specs[] = {{-2, "power_of -2"},
                                                  {-1, "negative_reciprocal"},
                                                  {-0.5, "power_of -0.5"},
                                                  {0, "log_offset"},
                                                  {1.0 / 3, "power_of 0.3333333333333333"},
                                                  {0.5, "sqrt_offset"},
                                                  {1, "identity"},
                                                  {2, "square"},
                                                  {3, "power_of 3"},
                                                  {0.25, "box_cox 0.25"},
                                                  {-4.5, "box_cox -4.5"}};
  for (const auto& [power, spec] : specs) EXPECT_EQ(PowerSpec(kFamily, power), spec);
}

}  // namespace
}  // namespace ladderline
