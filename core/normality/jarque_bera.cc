#include "core/normality/jarque_bera.h"

#include <cmath>

#include "core/describe/moments.h"
#include "core/support/distributions.h"

namespace ladderline {

NormalityTest JarqueBera(const CentralSums& sums) {
  const double g1 = SkewnessPop(sums), g2 = ExcessKurtosisPop(sums);
  if (std::isnan(g1)) return {.note = kNoSpread};
  const double statistic = static_cast<double>(sums.n) / 6 * (g1 * g1 + g2 * g2 / 4);
  return {statistic, ChiSquareUpperTail(statistic, 2)};
}

}  // namespace ladderline
