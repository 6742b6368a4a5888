// The rows of a window frame, or of a group, behind a moment accumulator.
//
// A group that only grows keeps sums alone, in constant memory. A frame keeps its rows as well, 8
// bytes a number, and where the sums are no longer sound (a far value has left, or the centre has
// been left behind) they are computed afresh from the rows, about their mean. So figures do not
// drift, and a spike leaves no trace.
//   limit  A frame that takes in more than kGroupRows rows before it is first asked or loses a row
//          (one that ends with UNBOUNDED FOLLOWING) does not hold those rows: until they have left,
//          removal relies on double-double sums alone, about 32 digits of the largest sum.
//   cost   O(1) a step; a renewal is O(rows), after a loss of some 15 digits.
#ifndef LADDERLINE_CORE_DESCRIBE_FRAME_H_
#define LADDERLINE_CORE_DESCRIBE_FRAME_H_

#include <cassert>
#include <cstdint>

#include "core/model/blocked.h"

namespace ladderline {

// Sums: PowerSums<k> or CoSums.
template <class Sums>
class Frame {
 public:
  using Row = typename Sums::Row;

  // Rows held until it is clear that this is a frame: at most some 256 KiB a number.
  static constexpr std::size_t kGroupRows = std::size_t{1} << 15;
  // Rows held of a frame that answers for every row but has not lost one yet: a running total.
  static constexpr std::size_t kRunningRows = std::size_t{1} << 20;

  void Add(Row row) {
    sums_.Add(row);
    if (holding_) {
      Hold(row);
    } else {
      ++not_held_;
    }
  }

  // Takes out the oldest row, which the host hands over again.
  void Remove(Row row) {
    shrinks_ = holding_ = true;
    sums_.Remove(row);
    if (not_held_ > 0) {
      --not_held_;
    } else {
      rows_.PopFront();
    }
  }

  typename Sums::Summary Summarise() {
    asked_ = true;
    typename Sums::Summary summary = sums_.Summarise();
    if (!summary.sound && not_held_ == 0) {
      sums_ = Refilled(Sums::CentredAtMeanOf(Refilled(Sums())));
      summary = sums_.Summarise();
    }
    return summary;
  }

 private:
  void Hold(Row row) {
    rows_.Push(row);
    if (rows_.size() <= kGroupRows || shrinks_) [[likely]]
      return;
    if (asked_ && rows_.size() <= kRunningRows) return;
    not_held_ = rows_.size();
    rows_ = {};
    holding_ = false;
  }

  Sums Refilled(Sums sums) const {
    for (std::size_t b = 0; b < rows_.blocks(); ++b)
      for (const Row& row : rows_.block(b)) sums.Add(row);
    return sums;
  }

  Sums sums_;
  Blocked<Row> rows_;         // the newest rows
  std::size_t not_held_ = 0;  // older rows that are in the sums alone
  bool holding_ = true;
  bool asked_ = false;
  bool shrinks_ = false;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_FRAME_H_
