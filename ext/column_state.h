// The values of one column in a group or frame, for aggregates that need them in order.
#ifndef LADDERLINE_EXT_COLUMN_STATE_H_
#define LADDERLINE_EXT_COLUMN_STATE_H_

#include <cstdint>
#include <optional>
#include <vector>

#include "core/describe/ordered_frame.h"
#include "ext/call.h"

namespace ladderline {

// The base of a State (ext/aggregate.h) whose first argument is the column.
class ColumnState {
 public:
  void Step(const Call& call) { Add(call.Number(0)); }
  void Inverse(const Call& call) { Remove(call.Number(0)); }

 protected:
  void Add(std::optional<double> x) {
    if (x) {
      frame_.Add(*x);
    } else {
      ++missing_;
    }
  }
  void Remove(std::optional<double> x) {
    if (x) {
      frame_.Remove(*x);
    } else {
      --missing_;
    }
  }

  std::size_t rows() const { return frame_.size(); }
  std::int64_t missing() const { return missing_; }
  std::vector<double> InOrder() { return frame_.InOrder(); }

 private:
  OrderedFrame frame_;
  std::int64_t missing_ = 0;
};

}  // namespace ladderline

#endif  // LADDERLINE_EXT_COLUMN_STATE_H_
