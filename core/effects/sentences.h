// Effects as sentences for people who do not fit models: what goes with what, how sure, in which
// rows, with everything else held. They claim no cause.
#ifndef LADDERLINE_CORE_EFFECTS_SENTENCES_H_
#define LADDERLINE_CORE_EFFECTS_SENTENCES_H_

#include <cstdint>
#include <span>
#include <string>

#include "core/effects/effects.h"

namespace ladderline {

// A level with fewer fitted rows gets no figure in words: it would be quoted, and it may point at a
// person. Offices that publish counts commonly hide cells under 5 (common practice).
inline constexpr std::int64_t kFewRows = 5;

// One sentence with its full stop. Figures are rounded to the second significant digit of the
// width of their limits.
//   level, errors   those that `effect` was computed with
std::string EffectSentence(const Model& model, const Effect& effect, double level,
                           ErrorKind errors);

// All levels of a category in one sentence, the highest first; of many the ends. Those without a
// figure, and those whose direction is not settled, are named. Where a percent is of a sum, a
// distance or a percent, the amount at the response's median comes first.
//   effects   of kind kLevel, of one column and one place of its partner, at least one
std::string LevelsSentence(const Model& model, std::span<const Effect> effects, double level,
                           ErrorKind errors);

// A column as the fit takes it, in words: `the logarithm of cost + 20 EUR`, `the square root of
// visits`, `age by box_cox 0.25`, `age`.
std::string ScalePhrase(const ModelColumn& column);

// `typical cost` under a transformed response, `average cost` else.
std::string ResponsePhrase(const Model& model);

// Where a model's inputs stand unless said otherwise, but those in `without`: `means and reference
// levels`. Empty: there are none.
std::string HeldPlaces(const Model& model, std::span<const int> without);

// The unit in which the response's differences are: of its label, days of a date; may be empty.
std::string ResponseUnit(const Model& model);

// `95%`
std::string LevelPhrase(double level);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_EFFECTS_SENTENCES_H_
