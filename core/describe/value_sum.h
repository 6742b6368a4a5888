// The sum of a column of whole and other numbers: whole, and exact, as long as all rows are.
#ifndef LADDERLINE_CORE_DESCRIBE_VALUE_SUM_H_
#define LADDERLINE_CORE_DESCRIBE_VALUE_SUM_H_

#include <cstdint>
#include <optional>

#include "core/describe/frame.h"
#include "core/describe/power_sums.h"

namespace ladderline {

// Rows leave in the order in which they came; the sum does not drift.
//   empty  Whole() is nullopt and Real() NaN
class ValueSum {
 public:
  void Add(std::int64_t x);
  void Add(double x);
  void Remove(std::int64_t x);
  void Remove(double x);

  // The exact sum, where every row is an integer and the sum fits one.
  std::optional<std::int64_t> Whole() const;
  // The sum as a double: rounded once, an infinity beyond the range. NaN while a NaN or an infinity
  // is in.
  double Real();

 private:
  Frame<PowerSums<2>> numbers_;
  std::int64_t whole_rows_ = 0;
  std::int64_t other_rows_ = 0;
  // Their sum in 128 bits, two's complement: high 2^64 + low.
  std::uint64_t low_ = 0;
  std::int64_t high_ = 0;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_VALUE_SUM_H_
