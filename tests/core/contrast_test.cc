// By hand; against R in tests/sql/effects_test.cc.
#include "core/effects/contrast.h"

#include <cmath>

#include "tests/core/effects_cases.h"
#include "tests/reference/reference.h"

namespace ladderline::testing {
namespace {

Setting Age(double years) { return {1, {.number = years}}; }
Setting Trade(int level) { return {2, {.level = level}}; }

// The rows (1, x, x², g, xg) of ages 2 and 6 differ by (0, 4, 32, 0, 4g).
TEST(Contrast, MovesEveryTermThatHasTheInput) {
  const Predictor predictor(CurveByGroup());
  const Contrasts contrasts(predictor, ErrorKind::kClassical);
  const Setting low[] = {Age(2)}, high[] = {Age(6)};
  const Change change = contrasts.OnScale(low, high);
  EXPECT_DOUBLE_EQ(change.estimate, 2 * 4 - 0.5 * 32);
  EXPECT_DOUBLE_EQ(change.error, std::sqrt(16 + 1024));
  const Setting low_b[] = {Age(2), Trade(1)}, high_b[] = {Age(6), Trade(1)};
  const Change in_b = contrasts.InUnits(low_b, high_b);
  EXPECT_DOUBLE_EQ(in_b.estimate, 2 * 4 - 0.5 * 32 + 0.25 * 4);
  EXPECT_DOUBLE_EQ(in_b.error, std::sqrt(16 + 1024 + 16));
  // A level at the mean age of 4: (0, 0, 0, 1, 4).
  const Setting a[] = {Trade(0)}, b[] = {Trade(1)};
  EXPECT_DOUBLE_EQ(contrasts.OnScale(a, b).estimate, 3 + 0.25 * 4);
  EXPECT_DOUBLE_EQ(contrasts.OnScale(a, b).error, std::sqrt(1 + 16));
}

// z = √y: fits at ages 2 and 4 are 1 + 4 − 2 = 3 and 1 + 8 − 8 = 1, so y goes from 9 to 1 with
// gradient 2·1·(1, 4, 16, 0, 0) − 2·3·(1, 2, 4, 0, 0) = (−4, −4, 8, 0, 0).
TEST(Contrast, CarriesErrorsBackByTheDeltaMethod) {
  const Predictor predictor(CurveByGroup("sqrt_offset"));
  const Contrasts contrasts(predictor, ErrorKind::kClassical);
  const Setting from[] = {Age(2)}, to[] = {Age(4)};
  const Change change = contrasts.InUnits(from, to);
  EXPECT_DOUBLE_EQ(change.estimate, -8);
  EXPECT_DOUBLE_EQ(change.error, std::sqrt(16 + 16 + 64));
  // At 6 the fit is 1 + 12 − 18 = −5, below what a root can be: held at 0, and without limits.
  const Setting far[] = {Age(6)};
  EXPECT_DOUBLE_EQ(contrasts.InUnits(from, far).estimate, -9);
  EXPECT_TRUE(std::isnan(contrasts.InUnits(from, far).error));
}

TEST(Contrast, RobustErrorsOfOneTermAreKnownEvenWhereTheirCovarianceIsNot) {
  const Predictor predictor(CurveByGroup());
  const Contrasts contrasts(predictor, ErrorKind::kHc3);
  const Setting a[] = {Trade(0), Age(0)}, b[] = {Trade(1), Age(0)};
  EXPECT_DOUBLE_EQ(contrasts.OnScale(a, b).error, 2);
  const Setting low[] = {Age(2)}, high[] = {Age(6)};
  EXPECT_DOUBLE_EQ(contrasts.OnScale(low, high).estimate, -8);
  EXPECT_TRUE(std::isnan(contrasts.OnScale(low, high).error));
}

TEST(Contrast, WhatRestsOnAColumnLeftOutHasNoFigure) {
  Model model = CurveByGroup();
  model = WithCoefficients(
      [&] {
        Model bare;
        bare.columns = model.columns;
        for (const ModelTerm& term : model.terms)
          bare.terms.push_back({.name = term.name, .factors = term.factors});
        return bare;
      }(),
      {1, 2, kNaN, 3, 0.25});
  const Predictor predictor(model);
  const Contrasts contrasts(predictor, ErrorKind::kClassical);
  const Setting low[] = {Age(2)}, high[] = {Age(6)}, a[] = {Trade(0)}, b[] = {Trade(1)};
  EXPECT_TRUE(std::isnan(contrasts.OnScale(low, high).estimate));
  EXPECT_TRUE(contrasts.RestsOnDropped(low, high));
  EXPECT_DOUBLE_EQ(contrasts.OnScale(a, b).estimate, 4);
  EXPECT_FALSE(contrasts.RestsOnDropped(a, b));
}

TEST(Contrast, AnInputOutsideItsDomainHasNoFigure) {
  Model model = CurveByGroup();
  model.columns[1].transform = Spec("log_offset");
  model.columns[1].mean = -1;  // as of values on both sides of an edge
  const Predictor predictor(model);
  const Contrasts contrasts(predictor, ErrorKind::kClassical);
  const Setting a[] = {Trade(0)}, b[] = {Trade(1)};
  EXPECT_TRUE(std::isnan(contrasts.OnScale(a, b).estimate));
  EXPECT_TRUE(std::isnan(contrasts.InUnits(a, b).estimate));
}

TEST(Contrast, OnlyACurvedResponseRestsOnInputsThatStay) {
  Model model;
  model.columns = {NumberColumn("cost"), NumberColumn("u", "", "reciprocal"),
                   CategoryColumn("trade", {{"A", 18}, {"B", 12}})};
  model.columns[1].mean = 0;  // of values on both sides
  model.terms = {{.name = "intercept"},
                 {.name = "u", .factors = {{.column = 1}}},
                 {.name = "trade is B", .factors = {{.column = 2, .level = 1}}}};
  const Setting a[] = {Trade(0)}, b[] = {Trade(1)};
  const Predictor straight(WithCoefficients(model, {1, 2, 3}));
  const Change change = Contrasts(straight, ErrorKind::kClassical).InUnits(a, b);
  EXPECT_DOUBLE_EQ(change.estimate, 3);
  EXPECT_DOUBLE_EQ(change.error, 1);
  model.columns[0].transform = Spec("sqrt_offset");
  const Predictor curved(WithCoefficients(model, {1, 2, 3}));
  const Contrasts contrasts(curved, ErrorKind::kClassical);
  EXPECT_DOUBLE_EQ(contrasts.OnScale(a, b).estimate, 3);
  EXPECT_TRUE(std::isnan(contrasts.InUnits(a, b).estimate));
}

TEST(Contrast, WithoutAReferenceACategoryIsHeldAtItsCommonestLevel) {
  ModelColumn column = CategoryColumn("trade", {{"A", 3}, {"B", 9}, {"C", 9}});
  column.reference = -1;
  EXPECT_EQ(HeldPlace(column).level, 1);
  column.reference = 2;
  EXPECT_EQ(HeldPlace(column).level, 2);
}

}  // namespace
}  // namespace ladderline::testing
