#include "core/regression/joint_test.h"

#include <gtest/gtest.h>

#include <cmath>
#include <vector>

#include "tests/core/regression_cases.h"

namespace ladderline {
namespace {

using testing::Agrees;
using testing::AllAgree;
using testing::Case;
using testing::Column;
using testing::Noise;
using testing::OpenCase;

// R 4.2.2, drop1(test = "F"): regression_checks.json.
class JointTestOnOpenData : public ::testing::TestWithParam<std::string> {};

INSTANTIATE_TEST_SUITE_P(RegressionChecks, JointTestOnOpenData,
                         ::testing::ValuesIn(testing::CaseNames()));

TEST_P(JointTestOnOpenData, SumsOfSquaresFAndTails) {
  const nlohmann::json truth = testing::CaseTruth(GetParam());
  const Case open = OpenCase(GetParam());
  const LeastSquares fit = FitLeastSquares(open.Source());
  Column df, ss, f, p;
  for (const JointTest& test : JointTests(fit, open.predictors)) {
    df.push_back(static_cast<double>(test.df));
    ss.push_back(test.sum_of_squares);
    f.push_back(test.f);
    p.push_back(test.p_value);
  }
  EXPECT_TRUE(AllAgree(truth["joint_df"], df, 15));
  EXPECT_TRUE(AllAgree(truth["joint_ss"], ss, 9));
  EXPECT_TRUE(AllAgree(truth["joint_f"], f, 9));
  EXPECT_TRUE(AllAgree(truth["joint_p"], p, 9));
}

// What a group explains is what leaving it out adds to the residuals; t² for a single column.
TEST(JointTest, IsTheGrowthOfTheResidualsWithoutTheGroup) {
  const std::size_t n = 300;
  Case with(true), without(true);
  const Column a = Noise(n, 1), b = Noise(n, 2), c = Noise(n, 3), noise = Noise(n, 4);
  for (Case* design : {&with, &without}) {
    design->AddNumber(a);
    if (design == &with) {
      design->AddNumber(b);
      design->AddNumber(c);
    }
    for (std::size_t i = 0; i < n; ++i) design->y.push_back(a[i] + b[i] + noise[i]);
  }
  const LeastSquares full = FitLeastSquares(with.Source());
  const LeastSquares reduced = FitLeastSquares(without.Source());
  const std::vector<std::vector<Index>> groups = {{2, 3}};
  const JointTest test = JointTests(full, groups)[0];
  EXPECT_EQ(test.df, 2);
  EXPECT_TRUE(Agrees(reduced.residual_ss - full.residual_ss, test.sum_of_squares, 12));
}

// 40,000 rows on a line with little noise: p is far below what 1 − cdf could show. The tail itself
// is tested in distributions_test.
TEST(JointTest, TailIsNotLostWhereOneMinusIs) {
  Case line(true);
  line.AddNumber(Noise(150, 1));
  const Column noise = Noise(150, 2);
  for (std::size_t i = 0; i < 150; ++i) line.y.push_back(line.x[1][i] + 0.1 * noise[i]);
  const JointTest test = JointTests(FitLeastSquares(line.Source()), line.predictors)[0];
  EXPECT_GT(test.p_value, 0);
  EXPECT_LT(test.p_value, 1e-100);
}

TEST(JointTest, DroppedColumnsCountForNothing) {
  const Column a = Noise(50, 1), b = Noise(50, 2), y = Noise(50, 3);
  Case once(true), twice(true);
  for (Case* design : {&once, &twice}) {
    design->AddNumber(a);
    design->AddNumber(b);
    design->y = y;
  }
  twice.AddNumber(a);
  const LeastSquares alone = FitLeastSquares(once.Source());
  const LeastSquares repeated = FitLeastSquares(twice.Source());
  const std::vector<std::vector<Index>> groups = {{1}, {3}, {2, 3}};
  const std::vector<JointTest> tests = JointTests(repeated, groups);
  const std::vector<JointTest> expected = JointTests(alone, once.predictors);
  EXPECT_TRUE(Agrees(expected[0].f, tests[0].f, 12));
  EXPECT_EQ(tests[1].df, 0);
  EXPECT_TRUE(std::isnan(tests[1].sum_of_squares));
  EXPECT_TRUE(std::isnan(tests[1].p_value));
  EXPECT_EQ(tests[2].df, 1);
  EXPECT_TRUE(Agrees(expected[1].p_value, tests[2].p_value, 12));
}

TEST(JointTest, SaturatedFitHasASumOfSquaresOnly) {
  Case points(true);
  points.AddNumber({0, 1});
  points.y = {0, 4};
  const JointTest test = JointTests(FitLeastSquares(points.Source()), points.predictors)[0];
  EXPECT_TRUE(Agrees(8, test.sum_of_squares, 14));
  EXPECT_TRUE(std::isnan(test.f));
  EXPECT_TRUE(std::isnan(test.p_value));
}

TEST(JointTest, UnitsDoNotMatter) {
  Case trees = OpenCase("trees");
  const std::vector<JointTest> before =
      JointTests(FitLeastSquares(trees.Source()), trees.predictors);
  for (double& v : trees.x[1]) v *= 1e-200;
  for (double& v : trees.x[2]) v *= 1e200;
  for (double& v : trees.y) v *= 1e120;
  const std::vector<JointTest> after =
      JointTests(FitLeastSquares(trees.Source()), trees.predictors);
  for (int i = 0; i < 2; ++i) {
    EXPECT_TRUE(Agrees(before[i].f, after[i].f, 12));
    EXPECT_TRUE(Agrees(before[i].p_value, after[i].p_value, 11));
  }
}

}  // namespace
}  // namespace ladderline
