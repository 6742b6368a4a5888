// The Jarque–Bera test: are skewness and kurtosis those of a normal law?
//   source  Jarque & Bera, "Efficient tests for normality, homoscedasticity and serial
//           independence of regression residuals", Economics Letters 6 (1980)
#ifndef LADDERLINE_CORE_NORMALITY_JARQUE_BERA_H_
#define LADDERLINE_CORE_NORMALITY_JARQUE_BERA_H_

#include <cstdint>

#include "core/describe/power_sums.h"
#include "core/normality/normality_test.h"

namespace ladderline {

inline constexpr std::int64_t kJarqueBeraLeastRows = 2;

// n/6 (g1² + g2²/4) and its upper tail under χ² with 2 degrees of freedom, which holds for many
// rows.
//   sums    of order 4
//   equal   all values equal: no figures, and a note; so with fewer than kJarqueBeraLeastRows rows
//   cost    O(1)
NormalityTest JarqueBera(const CentralSums& sums);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_NORMALITY_JARQUE_BERA_H_
