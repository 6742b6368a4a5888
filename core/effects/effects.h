// What the terms of a model come to, in plain units: one effect for each way a predictor can be
// read.
//
//   kPercent      where a logarithm makes the change the same wherever it starts: one unit more of
//                 a predictor that is a straight line of its raw value, or 1% more of one under a
//                 logarithm (of x + offset; 1% less of top − x for log_reflected). Under a logged
//                 response the effect is the exact percent of y + offset (of top − y): 100 (exp c −
//                 1), its limits those of c carried over. Under a straight response it is the
//                 change of y. Other predictors of a logged response, polynomials among them: the
//                 percent between the same two values. `from` and `to` give an instance of the
//                 step, starting at the median
//   kRuleOfThumb  the same step read off the coefficient, without exponentials
//   kQuartiles    any number: the change of the typical value in original units from its lower to
//                 its upper quartile; of polynomials also by way of the median. Where the quartiles
//                 are equal, as of a column that is mostly 0, from its least to its largest value
//   kLevel        any category: each level against the reference; under a logged response as
//                 percent, else in original units
//
// A change holds the other columns as contrast.h says. A column that is part of a product gets
// these effects with its partner where it would be held, and then again, as effects of the product,
// at the partner's other levels, or at both quartiles (where equal: ends) of a partner that is a
// number.
//   limits  effect ± t · error, t with the degrees of freedom of the errors in use; ordered.
//   NaN     as in contrast.h, and of a column with one value alone
#ifndef LADDERLINE_CORE_EFFECTS_EFFECTS_H_
#define LADDERLINE_CORE_EFFECTS_EFFECTS_H_

#include <array>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "core/effects/contrast.h"

namespace ladderline {

enum class EffectKind { kPercent, kRuleOfThumb, kQuartiles, kLevel };
inline constexpr std::array<std::string_view, 4> kEffectKindNames = {"percent", "rule_of_thumb",
                                                                     "quartiles", "level"};

enum class EffectUnit { kPercent, kResponse };

// What moves a number from `from` to `to`.
enum class EffectStep { kNone, kOneUnit, kOnePercent, kQuartiles, kRange, kToMedian, kFromMedian };

struct Effect {
  EffectKind kind = EffectKind::kQuartiles;
  EffectStep step = EffectStep::kNone;  // kNone: between levels
  int column = 0;                       // what moves
  RawPlace from = {}, to = {};
  std::optional<Setting> partner = {};  // of a product, set elsewhere than where it is held
  EffectUnit unit = EffectUnit::kResponse;
  double effect = kNaN, low = kNaN, high = kNaN;
  double exact = kNaN;    // of a rule of thumb: the kPercent effect beside it
  bool open = false;      // the change on the fitted scale has limits on both sides of 0
  bool left_out = false;  // rests on a coefficient left out as collinear
};

// Every effect of a model, column by column in their order; of products after all columns.
//   errors  a kind the model has (ErrorKind)
std::vector<Effect> EffectsOf(const Predictor& predictor, double level, ErrorKind errors);

// The columns that share a product with `column`, in their order.
std::vector<int> PartnersOf(const Model& model, int column);

// The column that moves, and of a product its partner: `age`, `age by trade`.
std::string EffectColumnName(const Model& model, const Effect& effect);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_EFFECTS_EFFECTS_H_
