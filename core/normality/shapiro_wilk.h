// The Shapiro–Wilk test of normality, Royston's version for 3 to 5000 values.
//   source  Royston, "Remark AS R94: a remark on algorithm AS 181", Applied Statistics 44 (1995);
//           coefficients: Royston, "Approximating the Shapiro–Wilk W-test for non-normality",
//           Statistics and Computing 2 (1992)
#ifndef LADDERLINE_CORE_NORMALITY_SHAPIRO_WILK_H_
#define LADDERLINE_CORE_NORMALITY_SHAPIRO_WILK_H_

#include <cstddef>
#include <span>

#include "core/normality/normality_test.h"

namespace ladderline {

inline constexpr std::size_t kShapiroWilkLeastRows = 3;
inline constexpr std::size_t kShapiroWilkMostRows = 5000;

// W and its p-value.
//   ascending  finite values in order, of any size and spread
//   equal      all values equal, or more than kShapiroWilkMostRows or fewer than
//              kShapiroWilkLeastRows of them: no figures, and a note
//   accuracy   1 - W, on which the p-value hangs, is computed as itself: relative error some
//              1e-16/√(1 - W). The p-value is that of the published approximation (of 3 rows:
//              exact); two equal values among three give W = 3/4 and p = 0.
//   cost       O(n)
NormalityTest ShapiroWilk(std::span<const double> ascending);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_NORMALITY_SHAPIRO_WILK_H_
