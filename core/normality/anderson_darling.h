// The Anderson–Darling test of normality with mean and standard deviation estimated.
//   source  Anderson & Darling, "A test of goodness of fit", JASA 49 (1954); p-value: D'Agostino &
//           Stephens, Goodness-of-Fit Techniques (1986), table 4.9
#ifndef LADDERLINE_CORE_NORMALITY_ANDERSON_DARLING_H_
#define LADDERLINE_CORE_NORMALITY_ANDERSON_DARLING_H_

#include <cstddef>
#include <span>

#include "core/normality/normality_test.h"

namespace ladderline {

inline constexpr std::size_t kAndersonDarlingLeastRows = 8;  // where the p-value formula begins

// The raw A² and the p-value of A² (1 + 0.75/n + 2.25/n²).
//   ascending  finite values in order, of any size and spread
//   bound      the formula ends at an adjusted A² of 10: beyond, the p-value is its bound 3.7e-24,
//              and a note says so
//   equal      all values equal, or fewer than kAndersonDarlingLeastRows: no figures, and a note
//   accuracy   A² to 1e-16 n, since it is what is left of sums of size n
//   cost       O(n)
NormalityTest AndersonDarling(std::span<const double> ascending);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_NORMALITY_ANDERSON_DARLING_H_
