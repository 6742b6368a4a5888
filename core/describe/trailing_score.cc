#include "core/describe/trailing_score.h"

#include <limits>

#include "core/describe/moments.h"

namespace ladderline {

void TrailingScore::Add(std::optional<double> row) {
  if (has_last_) {
    ++earlier_rows_;
    if (last_) earlier_.Add(*last_);
  }
  last_ = row;
  has_last_ = true;
}

void TrailingScore::Remove(std::optional<double> row) {
  if (earlier_rows_ > 0) {
    --earlier_rows_;
    if (row) earlier_.Remove(*row);
  } else {
    has_last_ = false;
    last_.reset();
  }
}

double TrailingScore::Value() {
  if (!last_) return std::numeric_limits<double>::quiet_NaN();
  return ZScore(*last_, earlier_.Summarise());
}

}  // namespace ladderline
