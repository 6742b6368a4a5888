#include "core/effects/sentences.h"

#include <gtest/gtest.h>

#include "tests/core/effects_cases.h"

namespace ladderline::testing {
namespace {

std::vector<std::string> Sentences(const Model& model, ErrorKind errors = ErrorKind::kClassical,
                                   double level = 0.95) {
  std::vector<std::string> sentences;
  for (const Effect& effect : EffectsOf(Predictor(model), level, errors))
    sentences.push_back(EffectSentence(model, effect, level, errors));
  return sentences;
}

// t(0.975, 20) = 2.086 (any table of the t law). -8 ± 2.086 √1040 = −8 ± 67.3; the limits are 134
// apart, so that figures are rounded to tens.
TEST(Sentences, SayWhereThePartnersOfAProductStand) {
  const auto sentences = Sentences(CurveByGroup());
  EXPECT_EQ(
      sentences[0],
      "With trade at A, 6 rather than 2 years of age (its upper and lower quartile) goes with "
      "10 EUR less in average cost (95% limits 80 EUR less to 60 EUR more), other columns held "
      "fixed, in the 30 rows fitted; these rows do not settle in which direction.");
  // 4 ± 2.086 √17 = 4 ± 8.6
  EXPECT_EQ(sentences[3],
            "With age at its mean of 4 years, B rather than A in trade goes with 4 EUR more in "
            "average cost (95% limits 5 EUR less to 13 EUR more), other columns held fixed, in 12 "
            "and 18 of the 30 rows fitted; these rows do not settle in which direction.");
  // 4.5 ± 2.086 √37 = 4.5 ± 12.7
  EXPECT_EQ(
      sentences[8],
      "With age at 6 years, B rather than A in trade goes with 4 EUR more in average cost "
      "(95% limits 8 EUR less to 17 EUR more), in 12 and 18 of the 30 rows fitted; these rows "
      "do not settle in which direction.");
}

// ln(y + 20) = 1 + 0.08 ln(x + 1) with an error of 0.01: 1% more of x + 1 is 1.01^0.08 − 1 =
// 0.0796% ± about 0.021; x goes from its median of 4 to 4.05; y + 20 is 24 at the median of y.
Model Offsets() {
  Model model;
  model.columns = {NumberColumn("cost", "EUR", "log_offset 20"),
                   NumberColumn("dwellings", "", "log_offset 1")};
  model.terms = {{.name = "intercept"}, {.name = "dwellings", .factors = {{.column = 1}}}};
  model = WithCoefficients(model, {1, 0.08});
  model.facts.residual_sd = 0.01;
  return model;
}

TEST(Sentences, WithOffsetsThePercentConcernsTheSumAndIsToldAtTheMedian) {
  const auto sentences = Sentences(Offsets());
  EXPECT_EQ(sentences[0],
            "1% more in dwellings + 1 goes with 0.080% more in cost + 20 EUR (95% limits 0.059% to "
            "0.100% more), in the 30 rows fitted; at the median of dwellings that is 4.05 rather "
            "than 4; at the median cost of 4 EUR that is 0.0191 EUR more.");
  EXPECT_EQ(sentences[1],
            "As a rule of thumb, 1% more in dwellings + 1 goes with about 0.080% more in cost + 20 "
            "EUR (95% limits 0.059% to 0.101% more), in the 30 rows fitted; the exact figure is "
            "0.0796% more.");
}

TEST(Sentences, NameRobustErrorsAndTheLevel) {
  EXPECT_NE(Sentences(Offsets(), ErrorKind::kHc1, 0.9)[0].find("(90% limits by hc1 errors "),
            std::string::npos);
}

TEST(Sentences, ALevelWithFewRowsHasNoFigure) {
  Model model = CurveByGroup();
  model.columns[2].levels = {{"A", 26}, {"B", 4}};
  const std::string few =
      "Only 4 rows of the 30 fitted have B in trade: too few for a figure that could be quoted.";
  const auto sentences = Sentences(model);
  EXPECT_EQ(sentences[3], few);
  EXPECT_EQ(sentences[4], few);
  model.columns[2].levels = {{"A", 1}, {"B", 29}};
  EXPECT_EQ(Sentences(model)[3],
            "Only 1 row of the 30 fitted has A in trade: too few for a figure that could be "
            "quoted.");
}

TEST(Sentences, SayWhyThereIsNoFigureOrNoLimit) {
  Model model = CurveByGroup();
  model.columns[1].observed_low = model.columns[1].observed_high = 2;
  model.columns[1].lower_quartile = model.columns[1].upper_quartile = 2;
  EXPECT_EQ(Sentences(model)[0],
            "All values of age are 2 years, so there is no step between them to read.");
  model = CurveByGroup();
  EXPECT_NE(Sentences(model, ErrorKind::kHc3)[0].find(
                "(no limits: hc3 errors of several terms at once need a fit with that option)"),
            std::string::npos);
  model.errors = ErrorKind::kCluster;
  model.clusters = 1;
  EXPECT_NE(Sentences(model, ErrorKind::kCluster)[0].find(
                "(no limits: all rows are of one cluster: no cluster errors)"),
            std::string::npos);
  for (ModelTerm& term : model.terms) term.standard_error.fill(kNaN);
  model.facts.residual_df = 0;
  EXPECT_NE(Sentences(model)[0].find("(no limits: as many terms as rows)"), std::string::npos);
}

// y = 1 + b x, with an error of 1.
Model Line(const ModelColumn& response, const ModelColumn& column, double b) {
  Model model;
  model.columns = {response, column};
  model.terms = {{.name = "intercept"}, {.name = column.name, .factors = {{.column = 1}}}};
  return WithCoefficients(model, {1, b});
}

// Over 4 years 12 ± 4 · 2.086 = 12 ± 8.3.
TEST(Sentences, PercentsDifferByPercentagePoints) {
  EXPECT_EQ(Sentences(Line(NumberColumn("share", "%"), NumberColumn("age", "years"), 3))[0],
            "6 rather than 2 years of age (its upper and lower quartile) goes with 12 percentage "
            "points more in average share (95% limits 4 to 20 percentage points more), in the 30 "
            "rows fitted.");
  // Of a logged share the percent is one of the share: e^0.08 is 1.0833, and 8.33% of 4% is 0.33%;
  // its limits are exp(0.08 ± 0.02086).
  Model logged = Line(NumberColumn("share", "percent", "log_offset"), NumberColumn("age"), 0.08);
  logged.facts.residual_sd = 0.01;
  EXPECT_EQ(Sentences(logged)[0],
            "1 more in age goes with 8.3% more in typical share (95% limits 6.1% to 10.6% more), "
            "in the 30 rows fitted; at the median share of 4% that is 0.33 percentage points "
            "more.");
}

// 6 ± 2.086 · 3 = 6 ± 6.3
TEST(Sentences, EqualQuartilesGiveWayToTheRange) {
  ModelColumn late = NumberColumn("late");
  late.lower_quartile = late.median = late.upper_quartile = 0;
  late.observed_low = 0;
  late.observed_high = 3;
  EXPECT_EQ(
      Sentences(Line(NumberColumn("cost", "EUR"), late, 2))[0],
      "3 rather than 0 in late (its largest and least value) goes with 6 EUR more in average "
      "cost (95% limits 0.3 EUR less to 12 EUR more), in the 30 rows fitted; these rows do not "
      "settle in which direction.");
}

// ln y = 1 + b x, with errors of 0.1, from x = 2 to 6. On the scale 4 b ± 4 · 0.1 · 2.086 = 4 b ±
// 0.834. In units y2 − y1 with gradient (y2 − y1, 6 y2 − 2 y1):
//   b = 0.22   10.176 − 4.221 = 5.96 ± 0.2086 √(5.96² + 52.6²) = 5.96 ± 11.0
//   b = 0.20    9.025 − 4.055 = 4.97 ± 0.2086 √(4.97² + 46.0²) = 4.97 ± 9.7
TEST(Sentences, TheFittedScaleDecidesOnTheDirection) {
  const auto quartiles = [](double b) {
    Model model = Line(NumberColumn("cost", "EUR", "log_offset"), NumberColumn("age", "years"), b);
    model.facts.residual_sd = 0.1;
    return Sentences(model)[2];
  };
  const std::string moved =
      "6 rather than 2 years of age (its upper and lower quartile) goes with ";
  EXPECT_EQ(quartiles(0.22), moved +
                                 "6 EUR more in typical cost (95% limits 0 to 17 EUR more), in the "
                                 "30 rows fitted.");
  EXPECT_EQ(quartiles(0.20), moved +
                                 "5 EUR more in typical cost (95% limits 5 EUR less to 15 EUR "
                                 "more), in the 30 rows fitted; these rows do not settle in which "
                                 "direction.");
}

TEST(Sentences, RoundNumbersOfReExpressions) {
  const Model model =
      Line(NumberColumn("cost", "EUR", "log_offset 20.09916478508375"), NumberColumn("age"), 0.08);
  EXPECT_NE(Sentences(model)[0].find(" more in cost + 20.0992 EUR ("), std::string::npos);
  EXPECT_EQ(ScalePhrase(NumberColumn("cost", "", "box_cox 0.123456789")),
            "cost by box_cox 0.123457");
}

TEST(Sentences, HaveNoInfinities) {
  ModelColumn cost = NumberColumn("cost", "", "log_offset 1");
  cost.median = 1.7e308;
  // 1.7e308 (e^0.08 − 1) = 1.416e307 with limits 7.7e306 apart; e^0.8 − 1 is 1.2255.
  Model model = Line(cost, NumberColumn("age"), 0.08);
  model.facts.residual_sd = 0.01;
  EXPECT_NE(Sentences(model)[0].find(" that is 1.42e+307 more."), std::string::npos);
  model = Line(cost, NumberColumn("age"), 0.8);
  model.facts.residual_sd = 0.01;
  EXPECT_EQ(Sentences(model)[0].find("that is"), std::string::npos);
  EXPECT_EQ(Sentences(model)[0].find("inf"), std::string::npos);
}

TEST(Sentences, NameTheColumnHeldOutsideItsDomain) {
  Model model;
  model.columns = {NumberColumn("cost", "EUR", "sqrt_offset"), NumberColumn("age", "years"),
                   NumberColumn("u", "", "reciprocal")};
  model.columns[2].mean = 0;
  model.terms = {{.name = "intercept"},
                 {.name = "age", .factors = {{.column = 1}}},
                 {.name = "u", .factors = {{.column = 2}}}};
  model = WithCoefficients(model, {1, 2, 3});
  EXPECT_EQ(Sentences(model)[0],
            "No figure for age: other columns are held at their means, and u at 0 lies outside the "
            "domain of reciprocal.");
  model.columns[2].mean = 4;
  model.columns[2].lower_quartile = 0;
  EXPECT_EQ(Sentences(model)[1], "No figure for u: u at 0 lies outside the domain of reciprocal.");
}

}  // namespace
}  // namespace ladderline::testing
