// How high a table of counts must set its threshold so that its total gives no hidden count away.
//
// A table shows its total and every count of at least T; smaller ones, zeros too, are hidden.
// Whoever subtracts what is shown from the total knows the sum S of the k hidden counts, and that
// each lies in 0 … T − 1. T is the first of these that protects them:
//   the floor; the counts above it, in order; total + 1, which hides all
// and T protects when it hides nothing, or when
//   at least two hidden counts are not 0,   S >= max(floor, 3),   S < k (T − 1).
// So T is the floor or a count that is shown: it says nothing that the table does not.
//
// What this guards against: someone who knows total, shown counts, T, floor and this rule finds for
// every hidden count at least two values that fit. For if the hidden counts are not all equal they
// can be exchanged; and if all are v, another choice of the same sum makes the same table: v − 1,
// v + 1 and the others as they were, or, where all are floor − 1, some below the floor with a sum
// below it and the others at it. The bound 3 is for two hidden counts: of a sum of 2, not being 0
// would make both 1. suppression_test.cc searches all small tables for an exception.
//
// What it does not guard against: a table of one count, or of zeros alone, in which the total is
// all there is; other tables of the same cases (crossed, of other areas, of earlier or later
// periods and releases), from which a difference may be formed; subtotals; and someone who knows
// some of the hidden counts, such as his own. There, local rules decide.
#ifndef LADDERLINE_CORE_RELEASE_SUPPRESSION_H_
#define LADDERLINE_CORE_RELEASE_SUPPRESSION_H_

#include <cstdint>
#include <map>
#include <optional>

namespace ladderline {

inline constexpr std::int64_t kMostCount = std::int64_t{1} << 53;  // exact as a double

// The counts of a table, some of which may leave again (moving frames).
//   domain  counts 0 … kMostCount
//   cost    O(log m) a count, O(m) a threshold, of m distinct counts
class CountTable {
 public:
  void Add(std::int64_t count) { ++cells_[count]; }
  // Takes out a count that is in.
  void Remove(std::int64_t count);
  // T; nullopt for a table without counts. `floor` is in 1 … kMostCount. A total beyond the range
  // of an integer is held at its end.
  std::optional<std::int64_t> Threshold(std::int64_t floor) const;

 private:
  std::map<std::int64_t, std::int64_t> cells_;  // how many there are, by count
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_RELEASE_SUPPRESSION_H_
