// How large the trouble is that a check has found, apart from whether it is there at all.
//
// With many rows every p-value is tiny, and with few none is. What decides on a check's status is
// the size of what was found, here, once the p-value says that chance alone would seldom make it.
#ifndef LADDERLINE_CORE_CHECKS_TROUBLE_H_
#define LADDERLINE_CORE_CHECKS_TROUBLE_H_

#include <cstdint>
#include <span>
#include <string>
#include <vector>

#include "core/checks/residual_tests.h"
#include "core/model/model.h"

namespace ladderline {

// Neighbouring bins of the fitted range, put together until they hold rows enough to compare.
struct FittedStretch {
  double low = kNaN, high = kNaN;  // fitted values, on the transformed scale
  std::int64_t rows = 0;
  double mean = kNaN, sd = kNaN;  // of the residuals; the sd within the bins

  double middle() const { return low + (high - low) / 2; }
};

// Stretches of at least a tenth of the rows and of 10 rows, in order; what is left at the end goes
// to the last one. Fewer than two say nothing.
std::vector<FittedStretch> Stretches(std::span<const ResidualBin> bins);

// A ratio of spreads is told no further: where residuals are least spread they may all be equal.
inline constexpr double kMostSpread = 1000;

// How much more widely the residuals are spread where they are most than where they are least: a
// ratio of sds. By fitted value from the stretches; along the predictors as the test of Koenker
// sees it, whose n R² is, less what chance gives, the part of Var(e²) = (g2 + 2) σ⁴ that they
// explain: a variance that moves by c of its mean has sds in the ratio √((1 + c) / (1 − c)).
struct SpreadChange {
  double by_fitted = kNaN;  // NaN: too few stretches
  double by_predictors = kNaN;
  FittedStretch widest, narrowest;  // where by_fitted is known
};
SpreadChange SpreadChangeOf(const Model& model, const ResidualTests& tests);

// How far errors that allow for uneven spread differ from the classical ones: the largest ratio,
// above or below 1, among terms beside the intercept (hc2, which equals the classical error on
// average where the spread is even); of those that rest on levels of 20 rows and more, if there are
// any. Ratio NaN without such terms.
struct ErrorShift {
  double ratio = kNaN;
  int term = -1;
  double size() const { return ratio < 1 ? 1 / ratio : ratio; }
};
ErrorShift ErrorShiftOf(const Model& model);

// The predictor column that goes most closely with a column of one term, by the correlation of
// their terms over the fitted rows; term −1 where there is none to compare with.
struct Companion {
  int term = -1;
  double correlation = kNaN;
};
Companion CompanionOf(const Model& model, int term);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_TROUBLE_H_
