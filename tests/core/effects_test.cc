// Which effects a model has, with hand arithmetic; against R in tests/sql/effects_test.cc.
#include "core/effects/effects.h"

#include <cmath>

#include "core/support/distributions.h"
#include "tests/core/effects_cases.h"
#include "tests/reference/reference.h"

namespace ladderline::testing {
namespace {

std::vector<Effect> All(const Model& model) {
  return EffectsOf(Predictor(model), 0.95, ErrorKind::kClassical);
}

void ExpectEffect(const Effect& effect, double estimate, double error) {
  const double t = StudentTCritical(0.95, 20);
  EXPECT_TRUE(Agrees(estimate, effect.effect, 13));
  EXPECT_TRUE(Agrees(estimate - t * error, effect.low, 13));
  EXPECT_TRUE(Agrees(estimate + t * error, effect.high, 13));
}

// Columns first, then the product: age at the other trade, trade at both quartiles of age.
TEST(Effects, PolynomialAndProductBelongToTheirParts) {
  const std::vector<Effect> effects = All(CurveByGroup());
  ASSERT_EQ(effects.size(), 9U);
  ExpectEffect(effects[0], 2 * 4 - 0.5 * 32, std::sqrt(4 * 4 + 32 * 32));  // 2 to 6
  ExpectEffect(effects[1], 2 * 2 - 0.5 * 12, std::sqrt(2 * 2 + 12 * 12));  // 2 to 4
  ExpectEffect(effects[2], 2 * 2 - 0.5 * 20, std::sqrt(2 * 2 + 20 * 20));  // 4 to 6
  ExpectEffect(effects[3], 3 + 0.25 * 4, std::sqrt(1 + 4 * 4));            // at the mean age
  ExpectEffect(effects[4], -8 + 0.25 * 4, std::sqrt(4 * 4 + 32 * 32 + 4 * 4));
  ExpectEffect(effects[5], -2 + 0.25 * 2, std::sqrt(2 * 2 + 12 * 12 + 2 * 2));
  ExpectEffect(effects[6], -6 + 0.25 * 2, std::sqrt(2 * 2 + 20 * 20 + 2 * 2));
  ExpectEffect(effects[7], 3 + 0.25 * 2, std::sqrt(1 + 2 * 2));
  ExpectEffect(effects[8], 3 + 0.25 * 6, std::sqrt(1 + 6 * 6));
  const Model model = CurveByGroup();
  for (size_t i = 0; i < effects.size(); ++i) {
    const bool level = i == 3 || i >= 7;
    EXPECT_EQ(effects[i].kind, level ? EffectKind::kLevel : EffectKind::kQuartiles) << i;
    EXPECT_EQ(EffectColumnName(model, effects[i]), i < 3    ? "age"
                                                   : i == 3 ? "trade"
                                                   : i < 7  ? "age by trade"
                                                            : "trade by age");
  }
}

// y = 1 + 2 x
Model Line() {
  Model model;
  model.columns = {NumberColumn("cost"), NumberColumn("late")};
  model.terms = {{.name = "intercept"}, {.name = "late", .factors = {{.column = 1}}}};
  return WithCoefficients(model, {1, 2});
}

TEST(Effects, EqualQuartilesGiveWayToTheRange) {
  Model model = Line();
  ModelColumn& late = model.columns[1];
  late.lower_quartile = late.median = late.upper_quartile = 0;
  late.observed_low = 0;
  late.observed_high = 1;
  const std::vector<Effect> effects = All(model);
  ASSERT_EQ(effects.size(), 1U);
  ExpectEffect(effects[0], 2, 1);
  EXPECT_EQ(effects[0].kind, EffectKind::kQuartiles);
  EXPECT_EQ(effects[0].step, EffectStep::kRange);
  EXPECT_EQ(effects[0].from.number, 0);
  EXPECT_EQ(effects[0].to.number, 1);
  // One value alone: no change that could be mistaken for one of 0.
  late.observed_high = 0;
  EXPECT_TRUE(std::isnan(All(model)[0].effect));
  EXPECT_TRUE(std::isnan(All(model)[0].low));
}

TEST(Effects, OfEqualQuartilesAPartnerIsReadAtItsEnds) {
  Model model = CurveByGroup();
  model.columns[1].lower_quartile = model.columns[1].median = model.columns[1].upper_quartile = 0;
  const std::vector<Effect> effects = All(model);
  ASSERT_EQ(effects.size(), 5U);  // a curve over its range, without ways by the median
  ExpectEffect(effects[3], 3 - 0.25, std::sqrt(2));
  ExpectEffect(effects[4], 3 + 0.25, std::sqrt(2));
}

// y = exp(1 + ½ x + ¼ [g is B] x): a year is the same percent wherever it starts, in each trade.
TEST(Effects, AStepIsAPercentInEachLevelOfItsPartner) {
  Model model = CurveByGroup("log_offset");
  model.columns[1].kind = ColumnKind::kNumber;
  Model bare;
  bare.columns = model.columns;
  bare.terms = {
      {.name = "intercept"},
      {.name = "age", .factors = {{.column = 1}}},
      {.name = "trade is B", .factors = {{.column = 2, .level = 1}}},
      {.name = "age by trade is B", .factors = {{.column = 1}, {.column = 2, .level = 1}}}};
  const std::vector<Effect> effects = All(WithCoefficients(bare, {1, 0.5, 3, 0.25}));
  const auto find = [&](EffectKind kind, bool of_product) {
    for (const Effect& effect : effects) {
      if (effect.column == 1 && effect.kind == kind && effect.partner.has_value() == of_product)
        return effect;
    }
    return Effect();
  };
  EXPECT_TRUE(Agrees(100 * std::expm1(0.5), find(EffectKind::kPercent, false).effect, 14));
  EXPECT_TRUE(Agrees(100 * std::expm1(0.75), find(EffectKind::kPercent, true).effect, 14));
  const Effect rule = find(EffectKind::kRuleOfThumb, true);
  ExpectEffect(rule, 75, 100 * std::sqrt(2));
  EXPECT_EQ(rule.exact, find(EffectKind::kPercent, true).effect);
  EXPECT_EQ(rule.from.number, 4);
  EXPECT_EQ(rule.to.number, 5);
}

TEST(Effects, ASaturatedFitHasFiguresWithoutLimits) {
  Model model = CurveByGroup("log_offset");
  model.facts.residual_df = 0;
  model.facts.residual_sd = kNaN;
  for (const Effect& effect : All(model)) {
    EXPECT_TRUE(std::isfinite(effect.effect));
    EXPECT_TRUE(std::isnan(effect.low));
    EXPECT_TRUE(std::isnan(effect.high));
  }
}

TEST(Effects, AColumnLeftOutSaysSo) {
  Model bare;
  bare.columns = CurveByGroup("log_offset").columns;
  bare.columns[1].kind = ColumnKind::kNumber;
  bare.terms = {{.name = "intercept"},
                {.name = "age", .factors = {{.column = 1}}},
                {.name = "trade is B", .factors = {{.column = 2, .level = 1}}}};
  const std::vector<Effect> effects = All(WithCoefficients(bare, {1, kNaN, 3}));
  ASSERT_EQ(effects.size(), 4U);
  for (size_t i = 0; i < 3; ++i) {
    EXPECT_TRUE(effects[i].left_out);
    EXPECT_TRUE(std::isnan(effects[i].effect));
  }
  EXPECT_FALSE(effects[3].left_out);
  EXPECT_TRUE(Agrees(100 * std::expm1(3.0), effects[3].effect, 14));
}

}  // namespace
}  // namespace ladderline::testing
