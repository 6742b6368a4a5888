#include "core/regression/collinearity.h"

#include <gtest/gtest.h>

#include <cmath>
#include <vector>

#include "core/regression/least_squares.h"
#include "tests/core/regression_cases.h"

namespace ladderline {
namespace {

using testing::Agrees;
using testing::AllAgree;
using testing::Case;
using testing::Column;
using testing::Noise;
using testing::OpenCase;

// R 4.2.2: singular values of the scaled design, and car 3.1.1 vif(): regression_checks.json.
class CollinearityOnOpenData : public ::testing::TestWithParam<std::string> {};

INSTANTIATE_TEST_SUITE_P(RegressionChecks, CollinearityOnOpenData,
                         ::testing::ValuesIn(testing::CaseNames()));

TEST_P(CollinearityOnOpenData, ConditionNumberAndInflation) {
  const nlohmann::json truth = testing::CaseTruth(GetParam());
  const Case open = OpenCase(GetParam());
  const CentredBasis basis = FitLeastSquares(open.Source()).basis;
  EXPECT_TRUE(Agrees(truth["condition_number"].get<double>(), ConditionNumber(basis), 10));
  if (!truth.contains("inflation")) return;  // not given without an intercept
  EXPECT_TRUE(AllAgree(truth["inflation"], VarianceInflation(basis, open.predictors), 10));
}

// 1 / (1 − R²) of the regression of a column on the others.
TEST(Collinearity, InflationIsWhatTheOtherColumnsExplain) {
  const std::size_t n = 200;
  const Column a = Noise(n, 1), b = Noise(n, 2);
  const Column rest = Noise(n, 3);
  Column c(n);
  for (std::size_t i = 0; i < n; ++i) c[i] = 5 + a[i] + 0.01 * b[i] + 1e-3 * rest[i];
  Case design(true), on_others(true);
  for (Case* both : {&design, &on_others}) {
    both->AddNumber(a);
    both->AddNumber(b);
  }
  design.AddNumber(c);
  design.y = Noise(n, 4);
  on_others.y = c;
  const LeastSquares helper = FitLeastSquares(on_others.Source());
  const std::vector<double> inflation =
      VarianceInflation(FitLeastSquares(design.Source()).basis, design.predictors);
  EXPECT_TRUE(Agrees(helper.total_ss / helper.residual_ss, inflation[2], 11));
  EXPECT_GT(inflation[2], 1e5);
}

// Two unit columns at an angle φ have singular values √(1 ± cos φ).
TEST(Collinearity, ConditionNumberOfTwoColumnsIsThatOfTheirAngle) {
  Case two(false);
  two.AddNumber({3, 4});
  two.AddNumber({8, 6});
  two.y = {1, 1};
  const double cosine = (3 * 8 + 4 * 6) / (5.0 * 10.0);
  EXPECT_TRUE(Agrees(std::sqrt((1 + cosine) / (1 - cosine)),
                     ConditionNumber(FitLeastSquares(two.Source()).basis), 13));
}

// Raw, uncentred columns: with the intercept a column far from 0 is nearly constant. For large c
// the condition number of (1, c + x) is 2 c / sd(x), sd with divisor n.
TEST(Collinearity, ColumnFarFromZeroLeansOnTheIntercept) {
  Case far(true);
  const Column x = {-1, 1, -1, 1};
  far.AddNumber(testing::Map(x, [](double v) { return 1e6 + v; }));
  far.y = {1, 2, 4, 3};
  EXPECT_TRUE(Agrees(2e6, ConditionNumber(FitLeastSquares(far.Source()).basis), 11));
}

TEST(Collinearity, OrthogonalColumnsInflateNothing) {
  Case cross(true);
  cross.AddNumber({-1, -1, 1, 1});
  cross.AddNumber({-1, 1, -1, 1});
  cross.y = {1, 2, 4, 3};
  const CentredBasis basis = FitLeastSquares(cross.Source()).basis;
  for (double inflation : VarianceInflation(basis, cross.predictors))
    EXPECT_TRUE(Agrees(1, inflation, 15));
  EXPECT_TRUE(Agrees(1, ConditionNumber(basis), 15));
}

TEST(Collinearity, DroppedColumnsAndEmptyFits) {
  Case twice(true);
  twice.AddNumber(Noise(20, 1));
  twice.AddNumber(twice.x[1]);
  twice.y = Noise(20, 2);
  const CentredBasis basis = FitLeastSquares(twice.Source()).basis;
  const std::vector<double> inflation = VarianceInflation(basis, twice.predictors);
  EXPECT_TRUE(Agrees(1, inflation[0], 15));
  EXPECT_TRUE(std::isnan(inflation[1]));

  Case nothing(true);
  EXPECT_TRUE(std::isnan(ConditionNumber(FitLeastSquares(nothing.Source()).basis)));
  Case mean(true);
  mean.y = {1, 2};
  EXPECT_EQ(ConditionNumber(FitLeastSquares(mean.Source()).basis), 1);
}

TEST(Collinearity, UnitsDoNotMatter) {
  Case ornstein = OpenCase("ornstein");
  const CentredBasis before = FitLeastSquares(ornstein.Source()).basis;
  for (std::size_t j = 1; j < ornstein.x.size(); ++j)
    for (double& v : ornstein.x[j]) v *= j % 2 == 0 ? 1e-150 : 1e150;
  const CentredBasis after = FitLeastSquares(ornstein.Source()).basis;
  const std::vector<double> expected = VarianceInflation(before, ornstein.predictors);
  const std::vector<double> inflation = VarianceInflation(after, ornstein.predictors);
  for (std::size_t i = 0; i < expected.size(); ++i)
    EXPECT_TRUE(Agrees(expected[i], inflation[i], 13));
  EXPECT_TRUE(Agrees(ConditionNumber(before), ConditionNumber(after), 12));
}

}  // namespace
}  // namespace ladderline
