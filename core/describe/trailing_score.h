// The newest row of a frame against the rows before it.
#ifndef LADDERLINE_CORE_DESCRIBE_TRAILING_SCORE_H_
#define LADDERLINE_CORE_DESCRIBE_TRAILING_SCORE_H_

#include <cstdint>
#include <optional>

#include "core/describe/frame.h"
#include "core/describe/power_sums.h"

namespace ladderline {

// (last - mean) / sd, mean and sample standard deviation being those of the earlier rows that have
// a value. Rows without one take their place in the frame all the same.
//   empty  NaN, as under two earlier values, without spread among them, or when the last row has
//          no value
class TrailingScore {
 public:
  void Add(std::optional<double> row);
  // Takes out the oldest row, which the host hands over again.
  void Remove(std::optional<double> row);
  double Value();

 private:
  Frame<PowerSums<2>> earlier_;
  std::int64_t earlier_rows_ = 0;
  bool has_last_ = false;
  std::optional<double> last_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_TRAILING_SCORE_H_
