// Which levels of a category are put together, so that each stands for enough rows.
//
// All levels of fewer rows than the floor; and while these are too few together, or their sum gives
// each of them away, the next smallest (of equal ones the first in byte order). Of k levels below
// the floor and m others, which have at most the M rows of the smallest that stands for itself,
//   the sum must be at least the floor, above k + m floor, and below k (floor - 1) + m M
// so that they are not all as small, or all as large, as they can be (merged_levels_test.cc
// searches small categories for a count that follows all the same). They become one level, `other
// levels`, or where another one is called so `other levels (merged)` and so on; one that earlier
// merging left is among them. A reference that was merged gives way to the commonest level that
// stands for itself (ties: the first in byte order).
#ifndef LADDERLINE_CORE_RELEASE_MERGED_LEVELS_H_
#define LADDERLINE_CORE_RELEASE_MERGED_LEVELS_H_

#include <cstdint>
#include <optional>
#include <vector>

#include "core/model/model.h"

namespace ladderline {

struct MergedLevels {
  ModelColumn column;
  std::vector<int> place;  // by old level: its new one
};

// `column` is a category. nullopt: fewer than two levels would be left.
std::optional<MergedLevels> MergeLevels(const ModelColumn& column, std::int64_t floor);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_RELEASE_MERGED_LEVELS_H_
