// D'Agostino's K²: skewness and kurtosis, each carried to a standard normal scale, in one figure.
//   source  D'Agostino & Pearson, "Tests for departure from normality", Biometrika 60 (1973);
//           skewness: D'Agostino, "Transformation to normality of the null distribution of g1",
//           Biometrika 57 (1970); kurtosis: Anscombe & Glynn, "Distribution of the kurtosis
//           statistic b2 for normal samples", Biometrika 70 (1983)
#ifndef LADDERLINE_CORE_NORMALITY_DAGOSTINO_H_
#define LADDERLINE_CORE_NORMALITY_DAGOSTINO_H_

#include <cstdint>

#include "core/describe/power_sums.h"
#include "core/normality/normality_test.h"

namespace ladderline {

inline constexpr std::int64_t kDagostinoLeastRows = 8;  // below, the skewness scale is undefined

// Z(g1)² + Z(b2)² and its upper tail under χ² with 2 degrees of freedom.
//   sums    of order 4
//   equal   all values equal: no figures, and a note; so with fewer than kDagostinoLeastRows rows
//   range   Where most values sit in two heaps, b2 falls below the reach of Anscombe & Glynn's
//           formula, and the cube root in it is of a negative number: the real root is taken, and
//           the statistic stays large. On the edge itself it is infinite, its p-value 0.
//   cost    O(1)
NormalityTest DagostinoK2(const CentralSums& sums);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_NORMALITY_DAGOSTINO_H_
