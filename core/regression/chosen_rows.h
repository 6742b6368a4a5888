// Some of the rows of another source, in their order: a sample, or those inside a domain.
#ifndef LADDERLINE_CORE_REGRESSION_CHOSEN_ROWS_H_
#define LADDERLINE_CORE_REGRESSION_CHOSEN_ROWS_H_

#include <vector>

#include "core/regression/row_source.h"

namespace ladderline {

class ChosenRows final : public RowSource {
 public:
  // `source` must outlive this; `rows` are ascending numbers of its rows, none twice.
  ChosenRows(const RowSource& source, std::vector<Index> rows);

  std::int64_t rows() const override { return static_cast<std::int64_t>(rows_.size()); }
  std::span<const DesignColumn> columns() const override { return source_.columns(); }
  bool has_weights() const override { return source_.has_weights(); }
  int groups() const override { return source_.groups(); }
  // Reads each block of the source that a row lies in; x_low is left out.
  void Fill(Index block, RowBlock& out) const override;

  std::span<const Index> chosen() const { return rows_; }

 private:
  const RowSource& source_;
  std::vector<Index> rows_;
  mutable RowBlock whole_;  // the source's block at hand
  mutable std::vector<std::uint16_t> group_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_CHOSEN_ROWS_H_
