// Numbers that people count in: 1, 2, 2.5 or 5 times a power of ten, or times a column's own step.
// Edges of bins and ticks of axes stand at multiples of them.
#ifndef LADDERLINE_CORE_DESCRIBE_READABLE_STEPS_H_
#define LADDERLINE_CORE_DESCRIBE_READABLE_STEPS_H_

#include <cstddef>
#include <cstdint>
#include <optional>
#include <vector>

#include "core/describe/quantiles.h"

namespace ladderline {

// digits · 10^exponent, so that multiples are the doubles nearest to what a reader sees.
struct Decimal {
  std::int64_t digits;
  int exponent;

  // Beyond the range of a double, the largest one.
  double Times(std::int64_t factor) const;
};

// The largest step of which all differences between values are multiples, if the values are
// decimals with few places; 0 if they are all equal. One or more finite values.
//   cost  O(n); a value or a few where the first ones are no such decimals
std::optional<Decimal> StepOf(const BlockedColumn& values);

// The readable multiples of a unit in rising order: 1, 2, 5, 10, 20, 25, 50, 100, 200, 250, 500 …
Decimal ReadableMultiple(Decimal unit, int i);

// The place among them of 20: from that many steps on, a value more or less in a bin is not seen.
inline constexpr int kPlaceOfTwenty = 4;
inline constexpr int kTwentySteps = 20;

// Adjacent multiples of `width` that enclose least..largest, the last above `largest` or, where
// `may_touch`, at it; none where they make more than `most` bins.
std::vector<double> EdgesAround(double least, double largest, Decimal width, bool may_touch,
                                std::size_t most);

// Those of the readable width nearest to `wanted` by ratio, or of the first wider one that makes no
// more than `most` (2 or more) bins. With a step (not 0) the width is a multiple of it, so that
// each bin has room for as many of the values.
//   least < largest, finite; wanted > 0
std::vector<double> ReadableEdges(double least, double largest, double wanted,
                                  std::optional<Decimal> step, std::size_t most);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_READABLE_STEPS_H_
