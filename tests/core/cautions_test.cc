#include "core/report/cautions.h"

#include <gmock/gmock.h>

#include "tests/core/effects_cases.h"

namespace ladderline::testing {
namespace {

using ::testing::Contains;
using ::testing::HasSubstr;
using ::testing::Not;
using ::testing::StartsWith;

TEST(Cautions, EveryModelCarriesTheGeneralOnes) {
  const auto cautions = CautionsOf(CurveByGroup());
  for (const char* part : {"does not show what causes what", "not a league table",
                           "not the persons in them", "may identify people", "Cases still open",
                           "beyond them it is a guess", "someone accountable"})
    EXPECT_THAT(cautions, Contains(HasSubstr(part)));
}

TEST(Cautions, ALeagueTableNeedsACategory) {
  Model bare;
  bare.columns = {NumberColumn("cost"), NumberColumn("age")};
  bare.terms = {{.name = "intercept"}, {.name = "age", .factors = {{.column = 1}}}};
  const auto cautions = CautionsOf(WithCoefficients(bare, {1, 2}));
  EXPECT_THAT(cautions, Not(Contains(HasSubstr("league table"))));
  // Its median response is as fitted, and 30 rows for one term are enough.
  EXPECT_THAT(cautions, Not(Contains(HasSubstr("add up"))));
  EXPECT_THAT(cautions, Not(Contains(HasSubstr("rows for each term"))));
}

TEST(Cautions, RowsLeftOutAreToldWithTheirReasons) {
  Model model = CurveByGroup();  // 30 of 32 rows
  model.columns[1].missing = 2;
  model.columns[0].outside = 1;
  EXPECT_EQ(CautionsOf(model)[0],
            "2 rows of the 32 offered (6%) were left out: cost is outside its re-expression in 1, "
            "age is missing in 2 (some rows for more than one reason). The figures speak of the "
            "others only, which may differ from those left out.");
  model.rows.offered = 30;
  EXPECT_THAT(CautionsOf(model), Not(Contains(HasSubstr("left out:"))));
}

TEST(Cautions, FewRowsForTermsAndLevels) {
  Model model = CurveByGroup();
  model.columns[2].levels = {{"A", 26}, {"B", 4}};
  const auto cautions = CautionsOf(model);
  // 30 rows, 4 terms besides the intercept.
  EXPECT_THAT(cautions, Contains(StartsWith("There are only 7.5 rows for each term (30 rows, 4 "
                                            "terms besides the intercept)")));
  EXPECT_THAT(cautions, Contains(StartsWith("Fewer than 5 rows stand for B in trade.")));
}

TEST(Cautions, ATransformedResponseHasTotalsOnlyByItsMean) {
  EXPECT_THAT(CautionsOf(CurveByGroup("log_offset")), Contains(HasSubstr("use fitted_mean")));
  EXPECT_THAT(CautionsOf(CurveByGroup("z_score 1 2")), Not(Contains(HasSubstr("fitted_mean"))));
}

TEST(Cautions, ExactSaturatedAndReducedFits) {
  Model model = CurveByGroup();
  EXPECT_THAT(CautionsOf(model), Contains(HasSubstr("give cost exactly")));  // no likelihood
  model.facts.log_likelihood = -12;
  EXPECT_THAT(CautionsOf(model), Not(Contains(HasSubstr("give cost exactly"))));
  model.facts.residual_df = 0;
  EXPECT_THAT(CautionsOf(model), Contains(StartsWith("There are as many terms as rows")));
  model.terms[2].coefficient = kNaN;
  EXPECT_THAT(CautionsOf(model), Contains(StartsWith("Left out of the fit, since other columns say "
                                                     "the same: age power 2.")));
}

TEST(Cautions, ProblemsThatChecksFoundAndChecksNotMade) {
  Model model = CurveByGroup();
  model.checks = {Found("reset", "problem", "It is not straight."),
                  Found("rows_left_out", "problem", "Told once."),
                  Found("white", "look", "Slightly uneven.")};
  EXPECT_THAT(CautionsOf(model), Contains("Check reset: It is not straight."));
  EXPECT_THAT(CautionsOf(model), Not(Contains(HasSubstr("uneven"))));
  EXPECT_THAT(CautionsOf(model), Not(Contains(HasSubstr("Told once"))));
  model.checks_wanted = false;
  EXPECT_THAT(CautionsOf(model), Contains(HasSubstr("switched off")));
}

TEST(Cautions, FewClustersAreToldOf) {
  Model model = CurveByGroup();
  EXPECT_THAT(CautionsOf(model), Not(Contains(HasSubstr("clusters"))));
  model.errors = ErrorKind::kCluster;
  model.clusters = 8;
  EXPECT_THAT(CautionsOf(model),
              Contains("On the errors of this fit: only 8 clusters: limits may be too narrow."));
}

TEST(Cautions, WeightsAndKeysAreToldOf) {
  Model model = CurveByGroup();
  model.columns.push_back(NumberColumn("certainty"));
  model.columns.back().role = ColumnRole::kWeight;
  model.columns.push_back(NumberColumn("case"));
  model.columns.back().role = ColumnRole::kKey;
  EXPECT_THAT(CautionsOf(model), Contains(StartsWith("Rows count by certainty")));
  EXPECT_THAT(CautionsOf(model), Not(Contains(HasSubstr("single rows"))));
  model.influence.push_back({.key = std::int64_t{17}});
  EXPECT_THAT(CautionsOf(model), Contains(HasSubstr("may name the case of up to 1 single row,")));
}

}  // namespace
}  // namespace ladderline::testing
