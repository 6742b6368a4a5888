// Table-valued functions that compute all their rows at once from their arguments.
//
// Each is an eponymous virtual table whose hidden columns are the arguments, so that it works as
// `FROM f(x)` and joined to another table (`FROM models, model_terms(models.model)`).
#ifndef LADDERLINE_EXT_TABLE_H_
#define LADDERLINE_EXT_TABLE_H_

#include <cstdint>
#include <memory>
#include <span>
#include <string>
#include <type_traits>
#include <utility>
#include <variant>
#include <vector>

#include "ext/call.h"

namespace ladderline {

struct FunctionRow;

// NULL, INTEGER, REAL (NaN and infinities are shown as NULL), TEXT. Never copied: where the copy of
// a string fails, GCC 12's variant destroys an alternative that it does not have.
struct Cell : std::variant<std::monostate, std::int64_t, double, std::string> {
  using variant::variant;
  Cell() = default;
  Cell(Cell&&) = default;
  Cell& operator=(Cell&&) = default;
};
inline Cell TextOrNull(const std::string& text) { return text.empty() ? Cell() : Cell(text); }

// Its cells are built in place or moved in.
struct TableRow : std::vector<Cell> {
  TableRow() = default;
  template <class... Cells>
  requires(sizeof...(Cells) > 0 && (std::is_constructible_v<Cell, Cells> && ...))
      TableRow(Cells&&... cells) {
    reserve(sizeof...(cells));
    (emplace_back(std::forward<Cells>(cells)), ...);
  }
};

// One use of a table-valued function.
using TableCall = Arguments;

struct TableMethods {
  const char*
      columns;  // `position INTEGER, term TEXT, …`: the visible columns, as SQL declares them
  std::vector<TableRow> (*rows)(const TableCall& call);
};

// Registers `row` (kind kTable) on `db`; returns a result code of the host.
int RegisterTable(sqlite3* db, const FunctionRow& row,
                  const std::shared_ptr<Connection>& connection);

}  // namespace ladderline

#endif  // LADDERLINE_EXT_TABLE_H_
