// The least and the largest value of a frame from which rows leave in the order in which they came.
//
// Kept are only the values that can still become an end: those with nothing smaller (larger) behind
// them. For a column in no particular order that is a handful; for one that rises or falls
// throughout it is every row, 16 bytes each.
#ifndef LADDERLINE_CORE_DESCRIBE_MOVING_ENDS_H_
#define LADDERLINE_CORE_DESCRIBE_MOVING_ENDS_H_

#include <cstdint>
#include <deque>
#include <optional>

namespace ladderline {

// No NaN. Empty: nullopt.
class MovingEnds {
 public:
  void Add(double x);
  // Takes out the oldest row, which the host hands over again.
  void Remove(double x);
  std::optional<double> least() const { return FrontOf(least_); }
  std::optional<double> largest() const { return FrontOf(largest_); }

 private:
  struct Run {
    double value;
    std::int64_t rows;  // equal values, one after the other but for others that cannot be an end
  };
  static std::optional<double> FrontOf(const std::deque<Run>& runs);

  std::deque<Run> least_;    // rising
  std::deque<Run> largest_;  // falling
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_MOVING_ENDS_H_
