// The numbers of a column set's column, to be read block by block by rooms that know no models.
#ifndef LADDERLINE_CORE_MODEL_NUMBERS_COLUMN_H_
#define LADDERLINE_CORE_MODEL_NUMBERS_COLUMN_H_

#include <cstddef>
#include <span>

#include "core/describe/quantiles.h"
#include "core/model/blocked.h"

namespace ladderline {

class NumbersColumn final : public BlockedColumn {
 public:
  explicit NumbersColumn(const Blocked<double>& numbers) : numbers_(numbers) {}
  std::size_t blocks() const override { return numbers_.blocks(); }
  std::span<const double> block(std::size_t b) const override { return numbers_.block(b); }

 private:
  const Blocked<double>& numbers_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_NUMBERS_COLUMN_H_
