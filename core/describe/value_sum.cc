#include "core/describe/value_sum.h"

#include "core/describe/moments.h"

namespace ladderline {

void ValueSum::Add(std::int64_t x) {
  ++whole_rows_;
  const auto bits = static_cast<std::uint64_t>(x);
  low_ += bits;
  high_ += (low_ < bits ? 1 : 0) - (x < 0 ? 1 : 0);
  numbers_.Add(static_cast<double>(x));
}

void ValueSum::Remove(std::int64_t x) {
  --whole_rows_;
  const auto bits = static_cast<std::uint64_t>(x);
  high_ -= (low_ < bits ? 1 : 0) - (x < 0 ? 1 : 0);
  low_ -= bits;
  numbers_.Remove(static_cast<double>(x));
}

void ValueSum::Add(double x) {
  ++other_rows_;
  numbers_.Add(x);
}

void ValueSum::Remove(double x) {
  --other_rows_;
  numbers_.Remove(x);
}

std::optional<std::int64_t> ValueSum::Whole() const {
  const auto sum = static_cast<std::int64_t>(low_);
  const bool fits = high_ == (sum < 0 ? -1 : 0);
  if (whole_rows_ == 0 || other_rows_ > 0 || !fits) return std::nullopt;
  return sum;
}

double ValueSum::Real() { return Sum(numbers_.Summarise()); }

}  // namespace ladderline
