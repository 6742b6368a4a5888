// Closed-form models; agreement with R on open data is tested through SQL.
#include "core/model/predict.h"

#include <gmock/gmock.h>

#include <cmath>

#include "tests/reference/reference.h"

namespace ladderline::testing {
namespace {

Transform Spec(const std::string& spec) { return *Transform::ReadSpec(spec).value().transform; }

ModelColumn Number(const std::string& name, double low, double high,
                   const std::string& spec = "identity") {
  ModelColumn column;
  column.name = name;
  column.transform = Spec(spec);
  column.observed_low = low;
  column.observed_high = high;
  column.median = (low + high) / 2;
  return column;
}

ModelColumn Category(const std::string& name, const std::vector<std::string>& levels,
                     int reference) {
  ModelColumn column;
  column.name = name;
  column.kind = ColumnKind::kCategory;
  for (const std::string& level : levels) column.levels.push_back({level, 2});
  column.reference = reference;
  return column;
}

// A straight line z = a + b (x − 3) fitted to 10 rows, two at each of x = 1 … 5: Σ(x − 3)² = 20, so
// the leverage at x is 1/10 + (x − 3)²/20. The residual sd is 0.5 on 8 degrees of freedom.
Model Line(double a, double b, const std::string& response = "identity") {
  Model model;
  const Transform transform = Spec(response);
  const auto back = [&](double z) { return transform.BackHeld(z, z); };
  const double ends[] = {back(a - 2 * b), back(a + 2 * b)};
  model.columns = {Number("y", std::min(ends[0], ends[1]), std::max(ends[0], ends[1]), response),
                   Number("x", 1, 5)};
  model.columns[0].role = ColumnRole::kResponse;
  model.terms = {{.name = "intercept"}, {.name = "x", .factors = {{.column = 1}}}};
  model.facts.residual_df = 8;
  model.facts.residual_sd = 0.5;
  model.basis.fit = {.columns = 2,
                     .intercept = true,
                     .kept = {0, 1},
                     .centre = {0, 3},
                     .coefficient = {a, b},
                     .factor = {std::sqrt(10), 0.0, std::sqrt(20)}};
  model.basis.largest_leverage = 0.3;
  const std::vector<double> residuals = {-0.5, 0.5};
  model.smearing = MakeSmearing(transform, residuals);
  return model;
}

// A row resolved against a predictor.
PredictionRow At(const Predictor& predictor, const std::vector<Input>& inputs) {
  PredictionRow row;
  predictor.Resolve(inputs, row);
  return row;
}
Input Of(double number) { return {.kind = Input::Kind::kNumber, .number = number}; }
Input Of(const char* text) { return {.kind = Input::Kind::kText, .text = text}; }
const Input kMissing;

constexpr double kT8 = 2.3060041352041671;  // qt(0.975, 8), R 4.2

TEST(Predict, AStraightLineHasItsTextbookFigures) {
  const Predictor predictor(Line(10, 2));
  const PredictionRow row = At(predictor, {Of(4)});
  EXPECT_EQ(predictor.FittedScale(row), 12);
  EXPECT_EQ(predictor.FittedTypical(row), 12);
  EXPECT_EQ(predictor.FittedMean(row), 12);
  EXPECT_TRUE(Agrees(0.15, predictor.Leverage(row), 15));
  EXPECT_TRUE(Agrees(0.45, predictor.Leverage(row, 3), 15));
  const double reach = kT8 * 0.5 * std::sqrt(0.15);
  const Interval typical = predictor.TypicalLimits(row, 0.95);
  EXPECT_TRUE(Agrees(12 - reach, typical.low, 14));
  EXPECT_TRUE(Agrees(12 + reach, typical.high, 14));
  const Interval one_case = predictor.CaseLimits(row, 0.95);
  EXPECT_TRUE(Agrees(12 + kT8 * 0.5 * std::sqrt(1.15), one_case.high, 14));
  // RSS = 8 · 0.5² = 2; e = 1: s_(i)² = (2 − 1/0.85)/7.
  EXPECT_EQ(predictor.Residual(row, 13), 1);
  EXPECT_TRUE(
      Agrees(1 / std::sqrt((2 - 1 / 0.85) / 7 * 0.85), predictor.StudentizedResidual(row, 13), 14));
  EXPECT_TRUE(Agrees(0.15 / (0.85 * 0.85 * 2 * 0.25), predictor.CooksDistance(row, 13), 14));
}

TEST(Predict, ALimitOutsideTheWayBackIsHeldAtItsEdge) {
  const Predictor predictor(Line(0.5, 0.3, "sqrt_offset 1"));
  const Interval one_case = predictor.CaseLimits(At(predictor, {Of(3)}), 0.95);
  EXPECT_EQ(one_case.low, -1);  // 0.5 − 2.3 · 0.52 is below 0: √ cannot be, x = 0² − 1
  EXPECT_GT(one_case.high, 1);
  // The fitted value itself, at x = 1: 0.5 − 0.6.
  const std::vector<Input> inputs = {Of(1)};
  const PredictionRow row = At(predictor, inputs);
  EXPECT_EQ(predictor.FittedTypical(row), -1);
  EXPECT_EQ(predictor.Note(inputs, row),
            "the fitted value lies outside the range of sqrt_offset 1 and is held at its edge");
}

TEST(Predict, DecreasingTransformsKeepLimitsInOrder) {
  const Predictor predictor(Line(4, 0.5, "reciprocal"));
  const PredictionRow row = At(predictor, {Of(3)});
  const double reach = kT8 * 0.5 * std::sqrt(0.1);
  for (const Interval limits : {predictor.TypicalLimits(row, 0.95), predictor.CaseLimits(row, 0.95),
                                predictor.MeanLimits(row, 0.95)})
    EXPECT_LT(limits.low, limits.high);
  EXPECT_TRUE(Agrees(1 / (4 + reach), predictor.TypicalLimits(row, 0.95).low, 14));
  EXPECT_TRUE(Agrees(1 / (4 - reach), predictor.TypicalLimits(row, 0.95).high, 14));
  // (1/3.5 + 1/4.5)/2
  EXPECT_TRUE(Agrees((1 / 3.5 + 1 / 4.5) / 2, predictor.FittedMean(row), 14));
}

TEST(Predict, ALimitAcrossZeroOfAReciprocalIsNone) {
  const Predictor predictor(Line(0.7, 0.1, "reciprocal"));
  const PredictionRow row = At(predictor, {Of(3)});
  const Interval one_case = predictor.CaseLimits(row, 0.95);
  EXPECT_TRUE(Agrees(1 / (0.7 + kT8 * 0.5 * std::sqrt(1.1)), one_case.low, 14));
  EXPECT_TRUE(std::isnan(one_case.high));
  EXPECT_EQ(predictor.LimitNote(row, 0.95), "a limit has no way back through reciprocal");
  EXPECT_EQ(predictor.LimitNote(row, 0.1), "");
}

// Responses that were all positive have no reciprocal below zero, fitted value or limit.
TEST(Predict, TheImpossibleSideOfAReciprocalHasNoValues) {
  for (const double sign : {1.0, -1.0}) {
    const Predictor predictor(
        Line(sign * 0.7, sign * 0.1, sign > 0 ? "reciprocal" : "negative_reciprocal"));
    const std::vector<Input> inputs = {Of(-10)};
    const PredictionRow row = At(predictor, inputs);
    EXPECT_LT(sign * predictor.FittedScale(row), 0);
    EXPECT_TRUE(std::isnan(predictor.FittedTypical(row)));
    EXPECT_TRUE(std::isnan(predictor.FittedMean(row)));
    for (const Interval limits :
         {predictor.TypicalLimits(row, 0.01), predictor.CaseLimits(row, 0.01),
          predictor.MeanLimits(row, 0.01)}) {
      EXPECT_TRUE(std::isnan(limits.low));
      EXPECT_TRUE(std::isnan(limits.high));
    }
    EXPECT_THAT(predictor.Note(inputs, row),
                ::testing::HasSubstr("the fitted value has no way back through"));
  }
}

TEST(Predict, BothSidesOfAReciprocalArePossibleWhereBothWereSeen) {
  const Predictor predictor(Line(0, 1, "reciprocal"));  // 1/y from −2 to 2
  EXPECT_EQ(predictor.FittedTypical(At(predictor, {Of(1)})), -0.5);
  const PredictionRow row = At(predictor, {Of(5)});
  EXPECT_EQ(predictor.FittedTypical(row), 0.5);
  const double reach = kT8 * 0.5 * std::sqrt(0.3);
  EXPECT_TRUE(Agrees(1 / (2 - reach), predictor.TypicalLimits(row, 0.95).high, 14));
  EXPECT_TRUE(std::isnan(predictor.TypicalLimits(row, 0.99999).high));
}

// A score from 0 to 100 has no value above 100, though the way back of an inset logit goes on.
TEST(Predict, ALogitWithAnInsetIsHeldWithinItsScale) {
  const Predictor predictor(Line(3.9, 1, "logit 0 100 0.02"));
  const std::vector<Input> inputs = {Of(5)};
  const PredictionRow row = At(predictor, inputs);
  EXPECT_EQ(predictor.FittedTypical(row), 100);
  EXPECT_EQ(predictor.CaseLimits(row, 0.95).high, 100);
  EXPECT_LE(predictor.FittedMean(row), 100);
  EXPECT_EQ(predictor.Note(inputs, row),
            "the fitted value lies outside the range of logit 0 100 0.02 and is held at its edge");
}

TEST(Predict, MeansGoThroughTheSmearing) {
  const Predictor predictor(Line(2, 0.1, "log_offset"));
  const PredictionRow row = At(predictor, {Of(3)});
  const double factor = std::cosh(0.5);  // of residuals ±0.5
  const double reach = kT8 * 0.5 * std::sqrt(0.1);
  EXPECT_TRUE(Agrees(std::exp(2) * factor, predictor.FittedMean(row), 14));
  EXPECT_TRUE(Agrees(std::exp(2 + reach) * factor, predictor.MeanLimits(row, 0.95).high, 14));
}

TEST(Predict, ASaturatedFitHasNoLimits) {
  Model model = Line(10, 2);
  model.facts.residual_df = 0;
  model.facts.residual_sd = kNaN;
  const Predictor predictor(model);
  const PredictionRow row = At(predictor, {Of(4)});
  EXPECT_EQ(predictor.FittedTypical(row), 12);
  EXPECT_TRUE(std::isnan(predictor.TypicalLimits(row, 0.95).low));
  EXPECT_TRUE(std::isnan(predictor.CaseLimits(row, 0.95).high));
  EXPECT_TRUE(std::isnan(predictor.StudentizedResidual(row, 13)));
  EXPECT_TRUE(std::isnan(predictor.CooksDistance(row, 13)));
}

TEST(Predict, RobustErrorsGovernTheLimits) {
  Model model = Line(10, 2);
  model.errors = ErrorKind::kHc3;
  // At the centre the coordinates are (1/√10, 0): variance 4/10.
  model.basis.robust = Covariance{.scale = 1, .matrix = {4, 0, 9}, .unknown = {}};
  const Predictor predictor(model);
  const Interval typical = predictor.TypicalLimits(At(predictor, {Of(3)}), 0.95);
  EXPECT_TRUE(Agrees(10 + kT8 * std::sqrt(0.4), typical.high, 14));
  const Interval one_case = predictor.CaseLimits(At(predictor, {Of(3)}), 0.95);
  EXPECT_TRUE(Agrees(10 + kT8 * std::sqrt(0.4 + 0.25), one_case.high, 14));
}

TEST(Predict, ADirectionWithoutAVarianceHasNoLimits) {
  Model model = Line(10, 2);
  model.errors = ErrorKind::kHc3;
  model.basis.robust = Covariance{.scale = 1, .matrix = {4, 0, 0}, .unknown = {{0, 1}}};
  const Predictor predictor(model);
  EXPECT_TRUE(std::isnan(predictor.TypicalLimits(At(predictor, {Of(4)}), 0.95).low));
  EXPECT_FALSE(std::isnan(predictor.TypicalLimits(At(predictor, {Of(3)}), 0.95).low));
}

TEST(Predict, AResponseOutsideItsDomainHasNoResidual) {
  const Predictor log(Line(2, 0.1, "log_offset"));
  EXPECT_TRUE(std::isnan(log.Residual(At(log, {Of(3)}), 0)));
  const Predictor square(Line(9, 1, "square"));
  EXPECT_TRUE(std::isnan(square.Residual(At(square, {Of(3)}), -3)));
  EXPECT_EQ(square.Residual(At(square, {Of(3)}), 3), 0);
}

// z = 5 + 1·[Damp] − 2·[Roof] against Heating, all centred at 0.25, then 0.5·(u·[Roof] − 1) as a
// product and 0.125·(2u² − ½) as a polynomial, u = (x − 3)/2.
Model Mixed() {
  Model model = Line(5, 0);
  model.columns = {model.columns[0], Category("trade", {"Damp", "Heating", "Roof"}, 1),
                   Number("x", 1, 5)};
  model.columns[2].kind = ColumnKind::kPolynomial;
  model.columns[2].degree = 2;
  model.columns[0].observed_low = 0;
  model.columns[0].observed_high = 9;
  model.terms = {
      {.name = "intercept"},
      {.name = "trade is Damp", .factors = {{.column = 1, .level = 0}}},
      {.name = "trade is Roof", .factors = {{.column = 1, .level = 2}}},
      {.name = "x by trade is Roof", .factors = {{.column = 2}, {.column = 1, .level = 2}}},
      {.name = "left out", .factors = {{.column = 2}}},
      {.name = "x power 2", .factors = {{.column = 2, .power = 2}}}};
  model.basis.fit = {.columns = 6,
                     .intercept = true,
                     .kept = {0, 1, 2, 3, 5},
                     .centre = {0, 0.25, 0.25, 1, -0.5},
                     .coefficient = {5, 1, -2, 0.5, 0.125},
                     .factor = {}};
  for (Index j = 0; j < 5; ++j)
    for (Index i = 0; i <= j; ++i) model.basis.fit.factor.push_back(i == j ? 2 : 0);
  model.basis.largest_leverage = 100;
  return model;
}

TEST(Predict, CategoriesProductsAndPowersAddUp) {
  const Predictor predictor(Mixed());
  const auto scale = [&](const char* trade, double x) {
    return predictor.FittedScale(At(predictor, {Of(trade), Of(x)}));
  };
  const double base = 5 - 0.25 + 2 * 0.25;  // no trade's indicator on
  EXPECT_EQ(scale("Heating", 2), base - 0.5);
  EXPECT_EQ(scale("Damp", 2), base + 1 - 0.5);
  EXPECT_EQ(scale("Roof", 2), base - 2 + 0.5 * (-0.5 - 1));
  EXPECT_EQ(scale("Roof", 5), base - 2 + 0.5 * (1 - 1) + 0.125 * (1 + 0.5));
  // Coordinates are (1, −.25, .75, −1.5, 0)/2 for Roof at 2.
  EXPECT_TRUE(Agrees((1 + 0.0625 + 0.5625 + 2.25) / 4,
                     predictor.Leverage(At(predictor, {Of("Roof"), Of(2)})), 15));
}

TEST(Predict, NotesNameEveryReason) {
  const Predictor predictor(Mixed());
  const auto note = [&](const std::vector<Input>& inputs) {
    return predictor.Note(inputs, At(predictor, inputs));
  };
  EXPECT_EQ(note({Of("Damp"), Of(3)}), "");
  EXPECT_EQ(note({kMissing, kMissing}), "trade is missing; x is missing");
  EXPECT_EQ(note({Of("damp"), Of(3)}), "trade 'damp' was never seen (there is 'Damp')");
  EXPECT_EQ(note({Of(" ROOF "), Of(3)}), "trade ' ROOF ' was never seen (there is 'Roof')");
  EXPECT_EQ(note({Of("Damp"), Of(5.5)}), "x 5.5 lies outside 1 to 5");
  EXPECT_EQ(note({Of("Mould"), Of(0.5)}),
            "trade 'Mould' was never seen; x 0.5 lies outside 1 to 5");
}

TEST(Predict, AnUnusableRowHasNoAnswers) {
  const Predictor predictor(Mixed());
  for (const std::vector<Input>& inputs :
       {std::vector<Input>{kMissing, Of(3)}, {Of("Mould"), Of(3)}}) {
    const PredictionRow row = At(predictor, inputs);
    EXPECT_FALSE(row.usable);
    for (const double answer :
         {predictor.FittedScale(row), predictor.FittedTypical(row), predictor.FittedMean(row),
          predictor.Leverage(row), predictor.Residual(row, 5), predictor.CooksDistance(row, 5),
          predictor.StudentizedResidual(row, 5), predictor.TypicalLimits(row, 0.9).low,
          predictor.MeanLimits(row, 0.9).high, predictor.CaseLimits(row, 0.9).low})
      EXPECT_TRUE(std::isnan(answer));
  }
}

TEST(Predict, DatesCountInDaysAndReadAsDates) {
  Model model = Line(10, 2);
  model.columns[1] = Number("opened", 18262, 18627, "date_days");  // 2020-01-01 to 2020-12-31
  model.basis.fit.centre[1] = 18262;
  const Predictor predictor(model);
  EXPECT_TRUE(predictor.TakesText(0));
  const auto note = [&](const Input& input) {
    const std::vector<Input> inputs = {input};
    return predictor.Note(inputs, At(predictor, inputs));
  };
  EXPECT_EQ(predictor.FittedScale(At(predictor, {Of("2020-01-11")})), 30);
  EXPECT_EQ(note(Of("2020-02-30")), "opened '2020-02-30' is no date as YYYY-MM-DD");
  EXPECT_EQ(note(Of("2021-01-01")), "opened 2021-01-01 lies outside 2020-01-01 to 2020-12-31");
}

TEST(Predict, ARowOfAFittedLeverageIsUsual) {
  Model model = Line(10, 2);
  const Predictor predictor(model);
  const std::vector<Input> edge = {Of(5)};  // leverage 0.1 + 4/20, the largest fitted
  EXPECT_EQ(predictor.Note(edge, At(predictor, edge)), "");
  model.basis.largest_leverage = 0.29;
  const Predictor stricter(model);
  EXPECT_EQ(stricter.Note(edge, At(stricter, edge)),
            "unusual combination: leverage above any fitted row");
}

TEST(Predict, TermsThatCancelLoseNoDigits) {
  // 1e9 (u − 1e6) − 1e9 (v − 1e6) + 1 at u = 1e6 + 3/1024, v = 1e6 + 3/1024 − 2^-33: the sum is
  // 1 + 1e9 · 2^-33; each part is 3e6 and carries a rounding of 2^-32.
  Model model = Line(1, 0);
  model.columns = {model.columns[0], Number("u", 0, 2e6), Number("v", 0, 2e6)};
  model.columns[0].observed_high = 2;
  model.terms = {{.name = "intercept"},
                 {.name = "u", .factors = {{.column = 1}}},
                 {.name = "v", .factors = {{.column = 2}}}};
  model.basis.fit = {.columns = 3,
                     .intercept = true,
                     .kept = {0, 1, 2},
                     .centre = {0, 1e6 + 0.3, 1e6 + 0.3},
                     .coefficient = {1, 1e9, -1e9},
                     .factor = {1, 0, 1, 0, 0, 1}};
  const Predictor predictor(model);
  const double u = 1e6 + 3.0 / 1024, v = u - 0x1p-33;
  const double fit = predictor.FittedScale(At(predictor, {Of(u), Of(v)}));
  EXPECT_TRUE(Agrees(1 + 1e9 * 0x1p-33, fit, 15));
}

}  // namespace
}  // namespace ladderline::testing
