// The Yeo–Johnson profile of a plain column.
#include "tests/core/lambda_cases.h"

namespace ladderline {
namespace {

using testing::Printed;
using testing::PrintedList;
using testing::PublishedLambda;

constexpr PowerFamily kFamily = PowerFamily::kYeoJohnson;

std::optional<LambdaProfile> Profile(std::vector<double> values, double level = 0.95) {
  return ProfileLambda(PowerResponse(kFamily, std::move(values)), level);
}

TEST(YeoJohnsonProfile, AgreesWithHighPrecision) { testing::ExpectProfilesAgree(kFamily); }
TEST(YeoJohnsonProfile, LikelihoodAgreesAtAnyLambda) { testing::ExpectPointsAgree(kFamily); }
TEST(YeoJohnsonProfile, LikelihoodAgreesWithScipy) { testing::ExpectScipyAgrees(kFamily); }

// published.json: Yeo & Johnson (2000), Darwin's plants, λ printed with 3 decimals; SciPy 1.10.1
// beside it stops its search about 1e-6 from the maximum, so that its likelihood ratio is sharper
// than its λ.
TEST(YeoJohnsonProfile, DarwinsPlants) {
  const nlohmann::json example = PublishedLambda("darwin_plants_yeo_johnson");
  const nlohmann::json scipy = example["reproduced"]["scipy 1.10.1 yeojohnson"];
  const auto profile = Profile(PrintedList(example["data"]));
  EXPECT_NEAR(profile->lambda, Printed(example["published"]["lambda"]), 5e-4);
  EXPECT_NEAR(profile->lambda, scipy["lambda"].get<double>(), 1e-5);
  EXPECT_NEAR(profile->p_identity, scipy["p"].get<double>(), 1e-9);
}

TEST(YeoJohnsonProfile, SaysNothingOfDataWithoutSpread) {
  EXPECT_FALSE(Profile({}).has_value());
  EXPECT_FALSE(Profile({-7}).has_value());
  EXPECT_FALSE(Profile({0, 0, 0}).has_value());
  EXPECT_FALSE(Profile({0, -0.0}).has_value());
  EXPECT_FALSE(Profile({-2, -2, -2}).has_value());
  EXPECT_FALSE(Profile({1e-80, 2e-80, 4e-80}).has_value());
}

TEST(YeoJohnsonProfile, NegationMirrorsAroundOne) {
  for (const testing::LambdaCase& c : testing::LambdaCases(kFamily)) {
    SCOPED_TRACE(c.expected["name"]);
    if (c.expected["at_limit"].get<bool>() || c.expected["lambda"] < -3) continue;
    std::vector<double> negated = c.values;
    for (double& v : negated) v = -v;
    EXPECT_NEAR(*EstimateLambda(PowerResponse(kFamily, negated)),
                2 - *EstimateLambda(PowerResponse(kFamily, c.values)), 1e-9);
  }
}

TEST(YeoJohnsonProfile, IsBoxCoxOfOneMoreWhereNothingIsNegative) {
  std::vector<double> values = testing::ReadCsvColumn("boxcox/ornstein.csv", "interlocks");
  const auto profile = Profile(values);
  for (double& v : values) v += 1;
  const auto shifted = ProfileLambda(PowerResponse(PowerFamily::kBoxCox, values), 0.95);
  EXPECT_NEAR(profile->lambda, shifted->lambda, 1e-10);
  EXPECT_NEAR(profile->low, shifted->low, 1e-8);
  EXPECT_TRUE(testing::Agrees(shifted->log_likelihood, profile->log_likelihood, 13));
}

TEST(YeoJohnsonProfile, EstimateIsTheProfilesLambda) {
  for (const testing::LambdaCase& c : testing::LambdaCases(kFamily))
    EXPECT_EQ(EstimateLambda(PowerResponse(kFamily, c.values)), Profile(c.values)->lambda);
}

TEST(YeoJohnsonProfile, SpecNamesTheSimplePower) {
  EXPECT_EQ(PowerSpec(kFamily, 0), "yeo_johnson 0");
  EXPECT_EQ(PowerSpec(kFamily, 1), "yeo_johnson 1");
  EXPECT_EQ(PowerSpec(kFamily, 1.0 / 3), "yeo_johnson 0.3333333333333333");
  EXPECT_EQ(PowerSpec(kFamily, 1.25), "yeo_johnson 1.25");
}

}  // namespace
}  // namespace ladderline
