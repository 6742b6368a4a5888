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
#include <variant>
#include <vector>

#include "ext/call.h"

namespace ladderline {

struct FunctionRow;

// NULL, INTEGER, REAL (NaN and infinities are shown as NULL), TEXT.
using Cell = std::variant<std::monostate, std::int64_t, double, std::string>;
using TableRow = std::vector<Cell>;

// The arguments of one use of a table-valued function, named in messages as the table names them.
class TableCall {
 public:
  TableCall(const FunctionRow& row, Connection& connection, std::span<sqlite3_value*> values)
      : row_(row), connection_(connection), values_(values) {}
  const FunctionRow& row() const { return row_; }
  Connection& connection() const { return connection_; }
  int count() const { return static_cast<int>(values_.size()); }
  bool Has(int i) const { return i < count(); }
  sqlite3_value* value(int i) const { return values_[static_cast<size_t>(i)]; }
  [[noreturn]] void ThrowBad(int i, std::string_view requirement) const;
  [[noreturn]] void Throw(std::string_view message) const;

 private:
  const FunctionRow& row_;
  Connection& connection_;
  std::span<sqlite3_value*> values_;
};

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
