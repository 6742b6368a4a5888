#include "core/regression/residual_pass.h"

#include <gtest/gtest.h>

#include <cmath>
#include <limits>
#include <vector>

#include "core/regression/covariance.h"
#include "tests/core/regression_cases.h"

namespace ladderline {
namespace {

using testing::Agrees;
using testing::AllAgree;
using testing::Case;
using testing::Column;
using testing::Noise;
using testing::OpenCase;

struct Figures {
  LeastSquares fit;
  ResidualSummary summary;
  Column residual, leverage;
};

Figures Measure(const RowSource& source, Extended extended = Extended::kMeasured) {
  Figures out;
  out.fit = FitLeastSquares(source, extended);
  ResidualOptions options;
  options.visit = [&](const ResidualBlock& block) {
    EXPECT_EQ(block.first_row, static_cast<std::int64_t>(out.residual.size()));
    out.residual.insert(out.residual.end(), block.residual, block.residual + block.rows);
    out.leverage.insert(out.leverage.end(), block.leverage, block.leverage + block.rows);
  };
  out.summary = PassResiduals(source, out.fit, options);
  return out;
}

Column Errors(const Figures& figures, ErrorKind kind) {
  return StandardErrors(figures.fit.basis, CovarianceOf(kind, figures.fit, figures.summary));
}

// R 4.2.2 with car and sandwich: regression_checks.json. On longley the robust errors there keep 8
// digits; longley_robust.json has them from 60-digit arithmetic.
class OpenData : public ::testing::TestWithParam<std::string> {
 protected:
  const nlohmann::json truth_ = testing::CaseTruth(GetParam());
  const Case case_ = OpenCase(GetParam());
  const ColumnSource source_ = case_.Source();
};

INSTANTIATE_TEST_SUITE_P(RegressionChecks, OpenData, ::testing::ValuesIn(testing::CaseNames()));

TEST_P(OpenData, CoefficientsAndEveryKindOfError) {
  const bool longley = GetParam() == "longley";
  const nlohmann::json robust = longley ? testing::ReadJson("longley_robust.json") : truth_;
  for (Extended extended : {Extended::kNever, Extended::kAlways}) {
    const Figures figures = Measure(source_, extended);
    EXPECT_TRUE(AllAgree(truth_["coefficient"], RawCoefficients(figures.fit.basis), 10));
    EXPECT_TRUE(AllAgree(truth_["standard_error"], Errors(figures, ErrorKind::kClassical), 10));
    const double digits = longley ? extended == Extended::kAlways ? 14 : 12 : 10;
    EXPECT_TRUE(AllAgree(robust["hc0"], Errors(figures, ErrorKind::kHc0), digits));
    EXPECT_TRUE(AllAgree(robust["hc1"], Errors(figures, ErrorKind::kHc1), digits));
    EXPECT_TRUE(AllAgree(robust["hc2"], Errors(figures, ErrorKind::kHc2), digits));
    EXPECT_TRUE(AllAgree(robust["hc3"], Errors(figures, ErrorKind::kHc3), digits));
  }
}

TEST_P(OpenData, ResidualsLeverageAndPress) {
  const Figures figures = Measure(source_);
  EXPECT_TRUE(AllAgree(truth_["leverage"], figures.leverage, 10));
  for (std::size_t i = 0; i < figures.residual.size(); ++i) {
    EXPECT_NEAR(figures.residual[i], truth_["residual"][i].get<double>(),
                1e-11 * figures.fit.residual_sd() * 10);
  }
  EXPECT_TRUE(Agrees(truth_["press"].get<double>(), figures.summary.press, 10));
  EXPECT_TRUE(Agrees(figures.fit.residual_ss, figures.summary.residual_ss, 12));
  EXPECT_EQ(*std::max_element(figures.leverage.begin(), figures.leverage.end()),
            figures.summary.max_leverage);
}

TEST_P(OpenData, StudentizedResidualsAndCooksDistances) {
  const Figures figures = Measure(source_);
  const LeastSquares& fit = figures.fit;
  Column studentized, cook;
  for (std::size_t i = 0; i < figures.residual.size(); ++i) {
    studentized.push_back(StudentizedResidual(figures.residual[i], figures.leverage[i],
                                              fit.residual_ss, fit.residual_df()));
    cook.push_back(CooksDistance(figures.residual[i], figures.leverage[i], fit.residual_ss,
                                 fit.residual_df(), fit.rank()));
  }
  EXPECT_TRUE(AllAgree(truth_["studentized"], studentized, 9));
  EXPECT_TRUE(AllAgree(truth_["cooks_distance"], cook, 9));

  std::vector<double> sorted = cook;
  std::sort(sorted.rbegin(), sorted.rend());
  const std::vector<InfluentialRow>& listed = figures.summary.influential;
  ASSERT_EQ(listed.size(), std::min<std::size_t>(20, cook.size()));
  for (std::size_t i = 0; i < listed.size(); ++i) {
    const std::size_t row = static_cast<std::size_t>(listed[i].row);
    EXPECT_EQ(listed[i].cooks_distance, sorted[i]);
    EXPECT_EQ(listed[i].cooks_distance, cook[row]);
    EXPECT_EQ(listed[i].leverage, figures.leverage[row]);
    EXPECT_EQ(listed[i].studentized_residual, studentized[row]);
  }
}

// --- Against plain definitions on many rows
// --------------------------------------------------------

// Many blocks, two of them short of anything; weights; a category whose levels come as groups.
Case ManyRows(bool as_groups) {
  const std::size_t n = 5003;
  Case out(true);
  out.AddNumber(testing::Map(Noise(n, 1), [](double v) { return 300 + v; }));
  std::vector<std::string> trade(n);
  const Column draw = Noise(n, 2);
  for (std::size_t i = 0; i < n; ++i)
    trade[i] = std::string(1, static_cast<char>('a' + 3 * std::abs(draw[i])));
  out.AddCategory(trade, as_groups);
  out.AddNumber(Noise(n, 3));
  const Column noise = Noise(n, 4);
  for (std::size_t i = 0; i < n; ++i)
    out.y.push_back(2 + out.x[1][i] / 100 + noise[i] * (3 + out.x.back()[i]));
  out.w = testing::Map(Noise(n, 5), [](double v) { return std::exp(v); });
  return out;
}

TEST(ResidualPass, GroupsChangeNothingButTheLastDigits) {
  const Case dense_case = ManyRows(false), grouped_case = ManyRows(true);
  const Figures dense = Measure(dense_case.Source()), grouped = Measure(grouped_case.Source());
  for (ErrorKind kind : {ErrorKind::kClassical, ErrorKind::kHc0, ErrorKind::kHc2, ErrorKind::kHc3})
    EXPECT_TRUE(AllAgree(Errors(dense, kind), Errors(grouped, kind), 12));
  EXPECT_TRUE(AllAgree(RawCoefficients(dense.fit.basis), RawCoefficients(grouped.fit.basis), 11));
  for (std::size_t i = 0; i < dense.residual.size(); ++i) {
    EXPECT_NEAR(dense.residual[i], grouped.residual[i], 1e-12);
    EXPECT_NEAR(dense.leverage[i], grouped.leverage[i], 1e-15);
  }
  EXPECT_TRUE(Agrees(dense.summary.press, grouped.summary.press, 13));
  EXPECT_TRUE(Agrees(dense.summary.max_unit_leverage, grouped.summary.max_unit_leverage, 12));
  for (std::size_t i = 0; i < 20; ++i)
    EXPECT_EQ(dense.summary.influential[i].row, grouped.summary.influential[i].row);
}

// A source that takes readers at their word and leaves indicators out.
class WithoutIndicators : public RowSource {
 public:
  explicit WithoutIndicators(const RowSource& all) : all_(all) {}
  std::int64_t rows() const override { return all_.rows(); }
  std::span<const DesignColumn> columns() const override { return all_.columns(); }
  bool has_weights() const override { return all_.has_weights(); }
  int groups() const override { return all_.groups(); }
  void Fill(Index block, RowBlock& out) const override {
    all_.Fill(block, out);
    if (!out.may_omit_indicators) return;
    for (std::size_t j = 0; j < columns().size(); ++j)
      if (columns()[j].group != DesignColumn::kEveryGroup) out.x[j] = nullptr;
  }

 private:
  const RowSource& all_;
};

TEST(ResidualPass, OmittedIndicatorsChangeNoBit) {
  const Case many = ManyRows(true);
  const ColumnSource with = many.Source();
  const WithoutIndicators without(with);
  for (Extended extended : {Extended::kNever, Extended::kAlways}) {
    const Figures expected = Measure(with, extended), figures = Measure(without, extended);
    EXPECT_EQ(RawCoefficients(expected.fit.basis), RawCoefficients(figures.fit.basis));
    EXPECT_EQ(expected.residual, figures.residual);
    EXPECT_EQ(expected.leverage, figures.leverage);
    EXPECT_EQ(expected.summary.hc3, figures.summary.hc3);
  }
}

// Numbers of one group only, one of them a repeat; a group with none but common columns and one
// without rows.
TEST(ResidualPass, GroupsMayOwnNumbersRepeatsOrNothing) {
  const std::size_t n = 2500;
  const Column x = Noise(n, 1), z = Noise(n, 2);
  std::vector<std::uint16_t> group(n);
  for (std::size_t i = 0; i < n; ++i) group[i] = static_cast<std::uint16_t>(i * i % 7 % 4);
  Case dense(true), grouped(true);
  for (Case* design : {&dense, &grouped}) {
    design->AddNumber(x);
    for (int owner : {1, 2, 3, 2, 2}) {
      Column own(n);
      const bool indicator = design->x.size() < 5;
      for (std::size_t i = 0; i < n; ++i)
        own[i] = group[i] == owner ? indicator ? 1 : z[i] + (design->x.size() == 6 ? x[i] : 0) : 0;
      design->AddNumber(own);
      if (design == &grouped) design->columns.back().group = owner;
    }
    design->AddNumber(z);
    design->y = Noise(n, 3);
  }
  grouped.group = group;
  grouped.groups = 5;
  const Figures expected = Measure(dense.Source()), figures = Measure(grouped.Source());
  EXPECT_EQ(expected.fit.basis.kept, figures.fit.basis.kept);
  for (Index j : figures.fit.basis.kept) {
    const std::size_t at = static_cast<std::size_t>(j);
    EXPECT_TRUE(Agrees(RawCoefficients(expected.fit.basis)[at],
                       RawCoefficients(figures.fit.basis)[at], 11));
    EXPECT_TRUE(
        Agrees(Errors(expected, ErrorKind::kHc3)[at], Errors(figures, ErrorKind::kHc3)[at], 12));
  }
  for (std::size_t i = 0; i < n; ++i) EXPECT_NEAR(expected.leverage[i], figures.leverage[i], 1e-14);
}

// Without an intercept the rows of a reference level are all zeros: their residual is the response.
TEST(ResidualPass, RowsOfZerosAddNothing) {
  const std::size_t n = 60;
  Case indicators(false);
  for (std::size_t i = 0; i < n; ++i) indicators.group.push_back(static_cast<std::uint16_t>(i % 6));
  indicators.groups = 6;
  for (int level = 1; level < 6; ++level) {
    Column indicator(n);
    for (std::size_t i = 0; i < n; ++i) indicator[i] = indicators.group[i] == level;
    indicators.AddNumber(indicator);
    indicators.columns.back().group = level;
  }
  indicators.y = Noise(n, 1);
  const Figures figures = Measure(indicators.Source());
  for (std::size_t i = 0; i < n; ++i) {
    EXPECT_TRUE(Agrees(i % 6 == 0 ? 0 : 0.1, figures.leverage[i], 14));
    if (i % 6 == 0) {
      EXPECT_EQ(figures.residual[i], indicators.y[i]);
    }
  }
  // A level's mean has HC0 variance Σ e² / 10².
  double square = 0;
  for (std::size_t i = 1; i < n; i += 6) square += figures.residual[i] * figures.residual[i];
  EXPECT_TRUE(Agrees(std::sqrt(square) / 10, Errors(figures, ErrorKind::kHc0)[0], 13));
}

TEST(ResidualPass, LeveragesSumToTheRankAndMatchCoordinates) {
  const Case many = ManyRows(true);
  const Figures figures = Measure(many.Source());
  double sum = 0, largest_unit = 0;
  Column row(many.columns.size()), a(figures.fit.rank());
  for (std::size_t i = 0; i < figures.leverage.size(); ++i) {
    sum += figures.leverage[i];
    largest_unit = std::max(largest_unit, figures.leverage[i] / many.w[i]);
    if (i % 97 != 0) continue;
    for (std::size_t j = 0; j < row.size(); ++j)
      row[j] = many.columns[j].intercept ? 1 : many.x[j][i];
    Coordinates(figures.fit.basis, row, a);
    double h = 0;
    for (double q : a) h += q * q;
    EXPECT_TRUE(Agrees(many.w[i] * h, figures.leverage[i], 12));
    EXPECT_NEAR(std::sqrt(many.w[i]) * (many.y[i] - Estimate(figures.fit.basis, row)),
                figures.residual[i], 1e-12);
  }
  EXPECT_TRUE(Agrees(static_cast<double>(figures.fit.rank()), sum, 13));
  EXPECT_EQ(largest_unit, figures.summary.max_unit_leverage);
}

// PRESS is the sum of squared errors of predicting each row from all others (Allen 1974).
TEST(ResidualPass, PressIsWhatLeavingEachRowOutGives) {
  const Case trees = OpenCase("trees");
  double press = 0;
  for (std::size_t left_out = 0; left_out < trees.y.size(); ++left_out) {
    Case others = trees;
    for (Column* column : {&others.x[1], &others.x[2], &others.y})
      column->erase(column->begin() + static_cast<std::ptrdiff_t>(left_out));
    const Column row = {1, trees.x[1][left_out], trees.x[2][left_out]};
    const double error = trees.y[left_out] - Estimate(FitLeastSquares(others.Source()).basis, row);
    press += error * error;
  }
  EXPECT_TRUE(Agrees(press, Measure(trees.Source()).summary.press, 12));
}

// --- Leverage 1 ----------------------------------------------------------------------------------

// A level with a single row: that row alone decides the level's coefficient. Everything else must
// be as if the row were not there.
TEST(ResidualPass, RowThatDecidesATermAloneLeavesTheOthersAlone) {
  for (bool as_groups : {false, true}) {
    const std::size_t n = 60;
    const Column x = Noise(n, 1), y = Noise(n, 2);
    std::vector<std::string> level(n);
    for (std::size_t i = 0; i < n; ++i) level[i] = std::string(1, static_cast<char>('a' + i % 5));
    level[40] = std::string(1, 'z');
    Case with(true), without(true);
    with.AddNumber(x);
    with.AddCategory(level, as_groups);
    with.y = y;
    Column short_x = x;
    short_x.erase(short_x.begin() + 40);
    level.erase(level.begin() + 40);
    without.AddNumber(short_x);
    without.AddCategory(level, as_groups);
    without.y = y;
    without.y.erase(without.y.begin() + 40);

    const Figures all = Measure(with.Source()), rest = Measure(without.Source());
    EXPECT_EQ(all.summary.decided_alone.size(), 1u);
    EXPECT_NEAR(all.leverage[40], 1, 1e-14);
    EXPECT_NEAR(all.residual[40], 0, 1e-14);
    EXPECT_TRUE(Agrees(rest.summary.press, all.summary.press, 13));
    for (ErrorKind kind : {ErrorKind::kHc0, ErrorKind::kHc2, ErrorKind::kHc3}) {
      const Column errors = Errors(all, kind), expected = Errors(rest, kind);
      for (int j = 0; j < 6; ++j) EXPECT_TRUE(Agrees(expected[j], errors[j], 12)) << j;
      EXPECT_TRUE(std::isnan(errors[6]));
    }
    // The classical error borrows the spread of the others.
    EXPECT_GT(Errors(all, ErrorKind::kClassical)[6], all.fit.residual_sd());
    for (const InfluentialRow& row : all.summary.influential) EXPECT_NE(row.row, 40);
    EXPECT_TRUE(std::isnan(StudentizedResidual(all.residual[40], all.leverage[40],
                                               all.fit.residual_ss, all.fit.residual_df())));
    EXPECT_TRUE(std::isnan(CooksDistance(all.residual[40], all.leverage[40], all.fit.residual_ss,
                                         all.fit.residual_df(), all.fit.rank())));
  }
}

// --- Corners -------------------------------------------------------------------------------------

TEST(ResidualPass, SaturatedFitHasNeitherErrorsNorInfluence) {
  Case points(true);
  points.AddNumber({1, 2, 4});
  points.AddNumber({1, 4, 16});
  points.y = {5, 3, 8};
  const Figures figures = Measure(points.Source());
  EXPECT_EQ(figures.summary.decided_alone.size(), 3u);
  EXPECT_TRUE(figures.summary.influential.empty());
  EXPECT_EQ(figures.summary.press, 0);
  for (ErrorKind kind : {ErrorKind::kClassical, ErrorKind::kHc0, ErrorKind::kHc1, ErrorKind::kHc3})
    for (double error : Errors(figures, kind)) EXPECT_TRUE(std::isnan(error));
}

TEST(ResidualPass, ExactFitListsNoInfluence) {
  Case line(true);
  line.AddNumber(Noise(30, 1));
  line.y = testing::Map(line.x[1], [](double v) { return 1 + 2 * v; });
  const Figures figures = Measure(line.Source());
  EXPECT_TRUE(figures.summary.influential.empty());
  for (double e : figures.residual) EXPECT_NEAR(e, 0, 1e-15);
}

TEST(ResidualPass, NoRowsAndOneRow) {
  Case empty(true);
  empty.AddNumber({});
  const Figures none = Measure(empty.Source());
  EXPECT_EQ(none.summary.press, 0);
  EXPECT_TRUE(none.summary.hc3.empty());
  Case single(true);
  single.AddNumber({3});
  single.y = {4};
  const Figures one = Measure(single.Source());
  EXPECT_EQ(one.leverage, Column{1});
  EXPECT_EQ(one.residual, Column{0});
  EXPECT_EQ(one.summary.decided_alone.size(), 1u);
}

TEST(ResidualPass, OptionsLeaveOutWhatIsNotWanted) {
  const Case trees = OpenCase("trees");
  const ColumnSource source = trees.Source();
  const LeastSquares fit = FitLeastSquares(source);
  ResidualOptions options;
  options.robust = false;
  options.influential_rows = 3;
  const ResidualSummary summary = PassResiduals(source, fit, options);
  EXPECT_TRUE(summary.hc0.empty());
  EXPECT_EQ(summary.influential.size(), 3u);
  options.influential_rows = 0;
  EXPECT_TRUE(PassResiduals(source, fit, options).influential.empty());
}

TEST(ResidualPass, EqualCooksDistancesKeepRowOrder) {
  Case cross(true);
  cross.AddNumber({-1, -1, 1, 1, -1, -1, 1, 1});
  cross.y = {1, -1, 1, -1, 1, -1, 1, -1};
  const std::vector<InfluentialRow> listed = Measure(cross.Source()).summary.influential;
  ASSERT_EQ(listed.size(), 8u);
  for (std::size_t i = 0; i < 8; ++i) EXPECT_EQ(listed[i].row, static_cast<std::int64_t>(i));
}

// Longley's columns are collinear enough for R itself to lose digits in double; in the extended
// basis leverages still sum to the rank to full precision.
TEST(ResidualPass, ExtendedBasisKeepsLeverage) {
  const Case longley = OpenCase("longley");
  const Figures figures = Measure(longley.Source(), Extended::kAlways);
  double sum = 0;
  for (double h : figures.leverage) sum += h;
  EXPECT_TRUE(Agrees(7, sum, 14.5));
}

TEST(Covariance, VarianceOfAContrastIsItsQuadraticForm) {
  const Case trees = OpenCase("trees");
  const Figures figures = Measure(trees.Source());
  // Classical: s² ‖a‖² for the change from one row to another, intercept cancelled.
  Column a(3);
  Coordinates(figures.fit.basis, Column{0, 2.5, -4}, a);
  const Covariance classical = CovarianceOf(ErrorKind::kClassical, figures.fit, figures.summary);
  const double sd = figures.fit.residual_sd();
  EXPECT_TRUE(
      Agrees(sd * sd * (a[0] * a[0] + a[1] * a[1] + a[2] * a[2]), Variance(classical, a), 14));
  EXPECT_TRUE(Agrees(std::sqrt(Variance(classical, a)), StandardError(classical, a), 15));
  // HC1 is HC0 times n / (n − k).
  const Covariance hc0 = CovarianceOf(ErrorKind::kHc0, figures.fit, figures.summary);
  const Covariance hc1 = CovarianceOf(ErrorKind::kHc1, figures.fit, figures.summary);
  EXPECT_TRUE(Agrees(31.0 / 28.0 * Variance(hc0, a), Variance(hc1, a), 14));
  EXPECT_EQ(StandardError(hc0, Column(3, 0.0)), 0);
}

}  // namespace
}  // namespace ladderline
