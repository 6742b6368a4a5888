#include "core/regression/fit_facts.h"

#include <gtest/gtest.h>

#include <cmath>
#include <limits>

#include "tests/core/regression_cases.h"

namespace ladderline {
namespace {

using testing::Agrees;
using testing::Case;
using testing::Column;
using testing::Map;
using testing::Noise;
using testing::OpenCase;

// R 4.2.2, summary(lm), logLik, AIC, BIC: regression_checks.json.
class FactsOnOpenData : public ::testing::TestWithParam<std::string> {};

INSTANTIATE_TEST_SUITE_P(RegressionChecks, FactsOnOpenData,
                         ::testing::ValuesIn(testing::CaseNames()));

TEST_P(FactsOnOpenData, Agree) {
  const nlohmann::json truth = testing::CaseTruth(GetParam());
  const LeastSquares fit = FitLeastSquares(OpenCase(GetParam()).Source());
  const FitFacts facts = FactsOf(fit);
  const auto agrees = [&](const char* name, double value) {
    EXPECT_TRUE(Agrees(truth[name].get<double>(), value, 10)) << name;
  };
  agrees("residual_sd", facts.residual_sd);
  agrees("r_squared", facts.r_squared);
  agrees("adjusted_r_squared", facts.adjusted_r_squared);
  agrees("f", facts.f);
  agrees("f_df1", facts.f_df1);
  agrees("f_p", facts.f_p);
  agrees("log_likelihood", facts.log_likelihood);
  agrees("aic", facts.aic);
  agrees("bic", facts.bic);
  EXPECT_EQ(facts.residual_df, fit.rows - fit.rank());
  EXPECT_EQ(facts.f_df2, static_cast<double>(facts.residual_df));
}

// Weights mean precision: the density of y is normal with variance σ²/w, so that multiplying all
// weights by c must leave the likelihood where it is.
TEST(FitFacts, LikelihoodDoesNotDependOnTheUnitOfWeights) {
  Case trees = OpenCase("trees_weighted");
  const FitFacts before = FactsOf(FitLeastSquares(trees.Source()));
  for (double& w : trees.w) w *= 1000;
  const FitFacts after = FactsOf(FitLeastSquares(trees.Source()));
  EXPECT_TRUE(Agrees(before.log_likelihood, after.log_likelihood, 13));
  EXPECT_TRUE(Agrees(before.r_squared, after.r_squared, 13));
  EXPECT_TRUE(Agrees(before.f, after.f, 12));
}

TEST(FitFacts, SaturatedFitHasRSquaredOnly) {
  Case points(true);
  points.AddNumber({1, 2, 4});
  points.AddNumber({1, 4, 16});
  points.y = {5, 3, 8};
  const FitFacts facts = FactsOf(FitLeastSquares(points.Source()));
  EXPECT_TRUE(Agrees(1, facts.r_squared, 15));
  EXPECT_EQ(facts.residual_df, 0);
  EXPECT_EQ(facts.f_df1, 2);
  EXPECT_EQ(facts.f_df2, 0);
  for (double missing : {facts.residual_sd, facts.adjusted_r_squared, facts.f, facts.f_p,
                         facts.log_likelihood, facts.aic, facts.bic})
    EXPECT_TRUE(std::isnan(missing));
}

TEST(FitFacts, ExactFitHasNoLikelihood) {
  Case line(true);
  line.AddNumber(Noise(30, 1));
  line.y = Map(line.x[1], [](double v) { return 1 + v / 3; });
  const FitFacts facts = FactsOf(FitLeastSquares(line.Source()));
  EXPECT_TRUE(Agrees(1, facts.r_squared, 15));
  EXPECT_EQ(facts.f, std::numeric_limits<double>::infinity());
  EXPECT_EQ(facts.f_p, 0);
  EXPECT_LT(facts.residual_sd, 1e-15);
  EXPECT_TRUE(std::isnan(facts.log_likelihood));
  EXPECT_TRUE(std::isnan(facts.aic));
  EXPECT_TRUE(std::isnan(facts.bic));
}

TEST(FitFacts, FlatResponseHasNothingToExplain) {
  Case flat(true);
  flat.AddNumber(Noise(30, 1));
  flat.y = Column(30, 0.1);
  const FitFacts facts = FactsOf(FitLeastSquares(flat.Source()));
  EXPECT_TRUE(std::isnan(facts.r_squared));
  EXPECT_TRUE(std::isnan(facts.f));
}

TEST(FitFacts, MeanAloneHasNoTest) {
  Case mean(true);
  mean.y = Noise(30, 1);
  const FitFacts facts = FactsOf(FitLeastSquares(mean.Source()));
  EXPECT_EQ(facts.r_squared, 0);
  EXPECT_TRUE(Agrees(0, facts.adjusted_r_squared, 15));
  EXPECT_EQ(facts.f_df1, 0);
  EXPECT_TRUE(std::isnan(facts.f));
  EXPECT_TRUE(std::isfinite(facts.log_likelihood));
}

TEST(FitFacts, NoRowsHaveNone) {
  Case empty(true);
  empty.AddNumber({});
  const FitFacts facts = FactsOf(FitLeastSquares(empty.Source()));
  EXPECT_TRUE(std::isnan(facts.r_squared));
  EXPECT_TRUE(std::isnan(facts.residual_sd));
  EXPECT_TRUE(std::isnan(facts.log_likelihood));
}

}  // namespace
}  // namespace ladderline
