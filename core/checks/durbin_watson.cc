#include "core/checks/durbin_watson.h"

#include <algorithm>
#include <cmath>

#include "core/checks/blocked_sum.h"

namespace ladderline {
double DurbinWatson(std::span<const double> residuals, std::span<const Index> order) {
  const auto n = static_cast<Index>(residuals.size());
  double size = 0;
  for (const double e : residuals) size = std::max(size, std::abs(e));
  const double scale = 1 / size;
  const double* e = residuals.data();
  const double squares = BlockedSum(n, [=](Index i) { return (e[i] * scale) * (e[i] * scale); });
  const auto step = [=](double here, double before) {
    const double difference = (here - before) * scale;
    return difference * difference;
  };
  const double steps =
      order.empty()
          ? BlockedSum(n - 1, [=](Index t) { return step(e[t + 1], e[t]); })
          : BlockedSum(n - 1, [=](Index t) { return step(e[order[t + 1]], e[order[t]]); });
  return steps / squares;
}

}  // namespace ladderline
