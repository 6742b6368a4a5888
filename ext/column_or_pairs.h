// A state (ext/aggregate.h) that takes a plain column where it is given one argument, and labelled
// pairs where it is given more.
#ifndef LADDERLINE_EXT_COLUMN_OR_PAIRS_H_
#define LADDERLINE_EXT_COLUMN_OR_PAIRS_H_

#include <cstdint>
#include <memory>
#include <variant>

#include "ext/call.h"

namespace ladderline {

// Of either: rows used, rows in which something is missing, and rows outside a domain.
struct UsedRows {
  std::int64_t rows = 0, missing = 0, outside = 0;
};

// Column and Pairs each have Step and Inverse; without rows the state is a Column.
template <class Column, class Pairs>
class ColumnOrPairs {
 public:
  void Step(const Call& call) {
    if (call.count() > 1 && std::holds_alternative<Column>(rows_))
      rows_.template emplace<std::unique_ptr<Pairs>>(std::make_unique<Pairs>());
    Ask([&](auto& rows) { rows.Step(call); });
  }
  void Inverse(const Call& call) {
    Ask([&](auto& rows) { rows.Inverse(call); });
  }

 protected:
  // The answer of whichever it is.
  template <class Question>
  auto Ask(Question question) {
    if (auto* column = std::get_if<Column>(&rows_)) return question(*column);
    return question(*std::get<std::unique_ptr<Pairs>>(rows_));
  }

 private:
  std::variant<Column, std::unique_ptr<Pairs>> rows_;
};

}  // namespace ladderline

#endif  // LADDERLINE_EXT_COLUMN_OR_PAIRS_H_
