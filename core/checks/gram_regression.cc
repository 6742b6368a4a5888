#include "core/checks/gram_regression.h"

namespace ladderline {

Explained ExplainFromGram(std::vector<double> gram, std::vector<double> cross,
                          std::span<const double> size) {
  constexpr double kRepeat = 1e-11;
  const auto columns = static_cast<Index>(size.size());
  Explained explained;
  for (Index j = 0; j < columns; ++j) {
    const double rest = gram[PackedIndex(j, j)];
    if (!(rest > kRepeat * size[j])) continue;
    ++explained.rank;
    const double slope = cross[j] / rest;
    explained.sum_of_squares += slope * cross[j];
    // What column j explains of those behind it is taken out of their cross-products.
    for (Index c = j + 1; c < columns; ++c) {
      const double share = gram[PackedIndex(j, c)] / rest;
      cross[c] -= share * cross[j];
      for (Index r = j + 1; r <= c; ++r) gram[PackedIndex(r, c)] -= share * gram[PackedIndex(j, r)];
    }
  }
  return explained;
}

}  // namespace ladderline
