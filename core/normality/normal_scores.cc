#include "core/normality/normal_scores.h"

#include <algorithm>
#include <cassert>

#include "core/support/distributions.h"

namespace ladderline {

double NormalScore(std::size_t rank, std::size_t n) {
  assert(1 <= rank && rank <= n);
  const std::size_t mirrored = n + 1 - rank;
  if (rank == mirrored) return 0;
  if (rank > mirrored) return -NormalScore(mirrored, n);
  return NormalQuantile((static_cast<double>(rank) - 0.375) / (static_cast<double>(n) + 0.25));
}

double QuantileScore(double probability, std::size_t n) {
  assert(0 <= probability && probability <= 1 && n >= 1);
  const double rows = static_cast<double>(n), place = 1 + (rows - 1) * probability;
  const double mirrored = rows + 1 - place;
  if (place == mirrored) return 0;
  const double tail = (std::min(place, mirrored) - 0.375) / (rows + 0.25);
  return place < mirrored ? NormalQuantile(tail) : -NormalQuantile(tail);
}

std::vector<QuantilePair> QuantilePairs(std::span<const double> ascending, std::size_t points) {
  assert(points >= 1);
  const std::size_t n = ascending.size(), k = std::min(points, n);
  std::vector<QuantilePair> pairs;
  pairs.reserve(k);
  for (std::size_t j = 0; j < k; ++j) {
    const double share = k == 1 ? 0.5 : static_cast<double>(j) / static_cast<double>(k - 1);
    const auto rank = static_cast<std::size_t>(share * static_cast<double>(n - 1) + 0.5);
    pairs.push_back({NormalScore(rank + 1, n), ascending[rank]});
  }
  return pairs;
}

}  // namespace ladderline
