#include "core/release/suppression.h"

#include <algorithm>
#include <cassert>
#include <limits>

namespace ladderline {
namespace {

constexpr std::int64_t kEnd = std::numeric_limits<std::int64_t>::max();

// Of numbers from 0 on, held at the end of the range.
std::int64_t Plus(std::int64_t a, std::int64_t b) { return a > kEnd - b ? kEnd : a + b; }
std::int64_t Times(std::int64_t a, std::int64_t b) { return a != 0 && b > kEnd / a ? kEnd : a * b; }

struct Hidden {
  std::int64_t cells = 0, not_zero = 0, sum = 0;

  void Add(std::int64_t count, std::int64_t times) {
    cells += times;
    if (count > 0) not_zero += times;
    sum = Plus(sum, Times(count, times));
  }
  bool IsProtected(std::int64_t threshold, std::int64_t floor) const {
    if (cells == 0) return true;
    return not_zero >= 2 && sum >= std::max<std::int64_t>(floor, 3) &&
           sum < Times(cells, threshold - 1);
  }
};

}  // namespace

void CountTable::Remove(std::int64_t count) {
  const auto cell = cells_.find(count);
  assert(cell != cells_.end());
  if (--cell->second == 0) cells_.erase(cell);
}

std::optional<std::int64_t> CountTable::Threshold(std::int64_t floor) const {
  assert(floor >= 1);
  if (cells_.empty()) return std::nullopt;
  Hidden hidden;
  auto next = cells_.begin();
  const auto protects = [&](std::int64_t threshold) {
    for (; next != cells_.end() && next->first < threshold; ++next)
      hidden.Add(next->first, next->second);
    return hidden.IsProtected(threshold, floor);
  };
  if (protects(floor)) return floor;
  for (auto above = cells_.upper_bound(floor); above != cells_.end(); ++above) {
    if (protects(above->first)) return above->first;
  }
  protects(kEnd);
  return Plus(hidden.sum, 1);
}

}  // namespace ladderline
