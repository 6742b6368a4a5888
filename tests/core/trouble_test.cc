#include "core/checks/trouble.h"

#include <gtest/gtest.h>

#include <cmath>

#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::Agrees;
using testing::ReadCsvColumn;

ResidualBin Bin(double low, std::int64_t rows, double mean, double sd) {
  return {.fitted_low = low, .fitted_high = low + 1, .rows = rows, .mean = mean, .sd = sd};
}

// By hand. 60 rows: 10 make a stretch. The first two bins: rows 4 + 8, mean (4 · 1 + 8 · 4) / 12,
// squares 3 · 1 + 7 · 4 with 10 degrees of freedom. A bin without rows is none. The lone row at the
// end goes to the one before.
TEST(Stretches, NeighboursAreJoinedUntilTheyHoldRowsEnough) {
  const std::vector<ResidualBin> bins = {Bin(0, 4, 1, 1), Bin(1, 8, 4, 2), Bin(2, 0, kNaN, kNaN),
                                         Bin(3, 47, 0, 3), Bin(4, 1, 5, kNaN)};
  const std::vector<FittedStretch> stretches = Stretches(bins);
  ASSERT_EQ(stretches.size(), 2u);
  EXPECT_EQ(stretches[0].rows, 12);
  EXPECT_EQ(stretches[0].low, 0);
  EXPECT_EQ(stretches[0].high, 2);
  EXPECT_DOUBLE_EQ(stretches[0].mean, 3);
  EXPECT_DOUBLE_EQ(stretches[0].sd, std::sqrt(31.0 / 10));
  EXPECT_EQ(stretches[1].low, 3);
  EXPECT_EQ(stretches[1].high, 5);
  EXPECT_DOUBLE_EQ(stretches[1].mean, 5.0 / 48);
  EXPECT_DOUBLE_EQ(stretches[1].sd, 3);
  EXPECT_TRUE(Stretches({}).empty());
  EXPECT_TRUE(Stretches(std::vector<ResidualBin>{Bin(0, 3, 1, 1)}).empty());
}

// n R² of 35 in 100 rows with 3 degrees of freedom, of residuals with normal tails: the part beyond
// chance is 0.32 Var(e²) = 0.64 σ⁴, a variance that moves by 0.8 of its mean: √(1.8 / 0.2) = 3.
TEST(SpreadChange, IsARatioOfSds) {
  Model model;
  model.rows.fitted = 100;
  model.residuals.bins = {Bin(0, 50, 0, 1.5), Bin(1, 50, 0, 6)};
  ResidualTests tests;
  tests.breusch_pagan.statistic = 35;
  tests.breusch_pagan.df = 3;
  tests.shape.excess_kurtosis = 0;
  const SpreadChange change = SpreadChangeOf(model, tests);
  EXPECT_DOUBLE_EQ(change.by_fitted, 4);
  EXPECT_EQ(change.widest.low, 1);
  EXPECT_NEAR(change.by_predictors, 3, 1e-12);
}

TEST(SpreadChange, StretchWithoutSpreadGivesNoInfinity) {
  Model model;
  model.rows.fitted = 40;
  model.residuals.bins = {Bin(0, 20, 0, 0), Bin(1, 20, 0, 6)};
  ResidualTests tests;
  tests.breusch_pagan = TestFigures::Not("none");
  EXPECT_EQ(SpreadChangeOf(model, tests).by_fitted, kMostSpread);
  EXPECT_TRUE(std::isnan(SpreadChangeOf(model, tests).by_predictors));
}

TEST(ErrorShift, IsTheLargestFactorUpOrDown) {
  Model model;
  const auto term = [](double classical, double hc2) {
    ModelTerm out{.name = "x", .factors = {{.column = 1}}};
    out.standard_error[0] = classical;
    out.standard_error[static_cast<size_t>(ErrorKind::kHc2)] = hc2;
    return out;
  };
  model.terms = {term(1, 9), term(2, 3), term(2, 0.5), term(1, kNaN), term(0, 0)};
  model.terms[0].factors.clear();  // the intercept
  const ErrorShift shift = ErrorShiftOf(model);
  EXPECT_EQ(shift.term, 2);
  EXPECT_EQ(shift.ratio, 0.25);
  EXPECT_EQ(shift.size(), 4);
  // A level of three rows tells little of spread, where there are terms that tell more.
  model.rows.fitted = 100;
  model.columns.resize(3);
  model.columns[2].levels = {{"a", 97}, {"b", 3}};
  model.terms[2].factors = {{.column = 2, .level = 1}};
  EXPECT_EQ(ErrorShiftOf(model).term, 1);
  model.terms = {model.terms[0], model.terms[2]};
  EXPECT_EQ(ErrorShiftOf(model).term, 1);
  model.terms.resize(1);
  EXPECT_EQ(ErrorShiftOf(model).term, -1);
}

// R 4.2.2: cor(trees$Girth, trees$Height).
TEST(Companion, CorrelationComesFromTheTriangle) {
  const std::vector<double> girth = ReadCsvColumn("boxcox/trees.csv", "Girth");
  const std::vector<double> height = ReadCsvColumn("boxcox/trees.csv", "Height");
  std::vector<double> alternating(girth.size());
  for (size_t i = 0; i < girth.size(); ++i) alternating[i] = i % 2 == 0 ? 1 : -1;
  const ColumnSource source(true, {girth, alternating, height}, girth);
  Model model;
  model.basis.fit = FitLeastSquares(source).basis;
  model.terms = {{.name = "intercept"},
                 {.name = "girth", .factors = {{.column = 1}}},
                 {.name = "turn", .factors = {{.column = 2}}},
                 {.name = "height", .factors = {{.column = 3}}}};
  const Companion companion = CompanionOf(model, 1);
  EXPECT_EQ(companion.term, 3);
  EXPECT_TRUE(Agrees(0.51928007194993731, companion.correlation, 13));
  EXPECT_EQ(CompanionOf(model, 3).term, 1);
}

}  // namespace
}  // namespace ladderline
