#include "ext/table.h"

#include <cmath>
#include <cstring>
#include <new>

#include "ext/connection.h"
#include "ext/registry.h"

namespace ladderline {
namespace {

// Hidden argument columns of a function without a fixed number of arguments: what is left of the
// host's limit of 127 arguments to a table-valued function.
constexpr int kMostTableArguments = 126;

struct Module {
  Binding binding;
  std::shared_ptr<Connection> connection;
};

struct Table {
  sqlite3_vtab base;  // first: the host knows the table by this address
  const Module* module;
  int visible;  // columns before the hidden ones
};

struct Cursor {
  sqlite3_vtab_cursor base;
  std::vector<TableRow> rows;
  size_t at = 0;
};

int ArgumentColumns(const FunctionRow& row) {
  return row.most_arguments == kAnyCount ? kMostTableArguments : row.most_arguments;
}

void SetMessage(sqlite3_vtab* table, const char* message) {
  sqlite3_free(table->zErrMsg);
  table->zErrMsg = sqlite3_mprintf("%s", message);
}

// The sibling of Guard for virtual-table methods: returns the code, the message in the host's slot.
template <class Body>
int GuardTable(sqlite3_vtab* table, Body&& body) noexcept {
  try {
    return body();
  } catch (const std::bad_alloc&) {
    return SQLITE_NOMEM;
  } catch (const std::exception& error) {
    SetMessage(table, error.what());
  } catch (...) {
    SetMessage(table, "ladderline: internal error");
  }
  return SQLITE_ERROR;
}

int Connect(sqlite3* db, void* aux, int, const char* const*, sqlite3_vtab** out, char**) {
  const auto* module = static_cast<const Module*>(aux);
  try {
    // Hidden columns are named by position, so that no argument clashes with a visible column.
    std::string sql = "CREATE TABLE x(" + std::string(module->binding.row.table->columns);
    for (int i = 0; i < ArgumentColumns(module->binding.row); ++i)
      sql += ", argument_" + std::to_string(i + 1) + " HIDDEN";
    int rc = sqlite3_declare_vtab(db, (sql + ")").c_str());
    if (rc == SQLITE_OK) rc = sqlite3_vtab_config(db, SQLITE_VTAB_INNOCUOUS);
    if (rc != SQLITE_OK) return rc;
    auto* table = new Table{};
    table->module = module;
    table->visible = 1;
    for (const char* c = module->binding.row.table->columns; *c != '\0'; ++c)
      table->visible += *c == ',';
    *out = &table->base;
    return SQLITE_OK;
  } catch (const std::bad_alloc&) {
    return SQLITE_NOMEM;
  }
}

int Disconnect(sqlite3_vtab* table) {
  delete reinterpret_cast<Table*>(table);
  return SQLITE_OK;
}

// The plan of a call that gives later arguments and not this one, and its own inverse.
constexpr int MissingArgument(int argument_or_plan) { return -1 - argument_or_plan; }

// Every argument given is an equality on its hidden column; they reach Filter in argument order.
// idxNum is how many there are. An argument that depends on a table later in the join order is not
// usable yet: such a plan is refused, and the host tries another.
//
// An argument that is missing is not refused here. The host also asks about plans that it means to
// use for one side of an OR, and shows no argument then; such plans are made so dear that none is
// used, unless the call truly lacks the argument, and then Filter says so.
int BestIndex(sqlite3_vtab* base, sqlite3_index_info* info) {
  const auto* table = reinterpret_cast<Table*>(base);
  return GuardTable(base, [&] {
    const FunctionRow& row = table->module->binding.row;
    std::vector<int> constraint(static_cast<size_t>(ArgumentColumns(row)), -1);
    int count = 0;
    for (int i = 0; i < info->nConstraint; ++i) {
      const auto& c = info->aConstraint[i];
      const int argument = c.iColumn - table->visible;
      if (argument < 0 || c.op != SQLITE_INDEX_CONSTRAINT_EQ) continue;
      if (!c.usable) return SQLITE_CONSTRAINT;
      if (constraint[static_cast<size_t>(argument)] >= 0) continue;
      constraint[static_cast<size_t>(argument)] = i;
      ++count;
    }
    info->estimatedCost = 100;
    info->estimatedRows = 20;
    constexpr double kNeverWorthIt = 1e90;
    for (int argument = 0; argument < count; ++argument) {
      const int i = constraint[static_cast<size_t>(argument)];
      if (i < 0) {
        info->idxNum = MissingArgument(argument);
        info->estimatedCost = kNeverWorthIt;
        return SQLITE_OK;
      }
      info->aConstraintUsage[i].argvIndex = argument + 1;
      info->aConstraintUsage[i].omit = 1;
    }
    info->idxNum = count;
    if (count < row.least_arguments) info->estimatedCost = kNeverWorthIt;
    return SQLITE_OK;
  });
}

int Open(sqlite3_vtab*, sqlite3_vtab_cursor** out) {
  auto* cursor = new (std::nothrow) Cursor{};
  if (cursor == nullptr) return SQLITE_NOMEM;
  *out = &cursor->base;
  return SQLITE_OK;
}

int Close(sqlite3_vtab_cursor* cursor) {
  delete reinterpret_cast<Cursor*>(cursor);
  return SQLITE_OK;
}

int Filter(sqlite3_vtab_cursor* base, int plan, const char*, int count, sqlite3_value** values) {
  auto* cursor = reinterpret_cast<Cursor*>(base);
  const auto* table = reinterpret_cast<Table*>(base->pVtab);
  return GuardTable(base->pVtab, [&] {
    const FunctionRow& row = table->module->binding.row;
    if (plan < 0) {
      throw CallError(std::string(row.name) + ": " + ArgumentName(row, MissingArgument(plan)) +
                      " is missing; takes (" + row.arguments + ")");
    }
    if (count < row.least_arguments) {
      throw CallError(std::string(row.name) + ": takes (" + row.arguments + "), got " +
                      std::to_string(count) + " arguments");
    }
    cursor->at = 0;
    cursor->rows.clear();
    cursor->rows = row.table->rows(
        TableCall(table->module->binding, std::span(values, static_cast<size_t>(count))));
    return SQLITE_OK;
  });
}

int Next(sqlite3_vtab_cursor* base) {
  ++reinterpret_cast<Cursor*>(base)->at;
  return SQLITE_OK;
}

int Eof(sqlite3_vtab_cursor* base) {
  const auto* cursor = reinterpret_cast<Cursor*>(base);
  return cursor->at >= cursor->rows.size() ? 1 : 0;
}

int Column(sqlite3_vtab_cursor* base, sqlite3_context* context, int i) {
  const auto* cursor = reinterpret_cast<Cursor*>(base);
  const TableRow& row = cursor->rows[cursor->at];
  if (static_cast<size_t>(i) >= row.size()) return SQLITE_OK;  // a hidden argument: NULL
  const Cell& cell = row[static_cast<size_t>(i)];
  if (const auto* integer = std::get_if<std::int64_t>(&cell)) {
    sqlite3_result_int64(context, *integer);
  } else if (const auto* number = std::get_if<double>(&cell)) {
    if (std::isfinite(*number)) sqlite3_result_double(context, *number);
  } else if (const auto* text = std::get_if<std::string>(&cell)) {
    sqlite3_result_text64(context, text->data(), text->size(), SQLITE_TRANSIENT, SQLITE_UTF8);
  }
  return SQLITE_OK;
}

int RowId(sqlite3_vtab_cursor* base, sqlite3_int64* out) {
  *out = static_cast<sqlite3_int64>(reinterpret_cast<Cursor*>(base)->at) + 1;
  return SQLITE_OK;
}

constexpr sqlite3_module kModule = {
    .iVersion = 0,
    .xCreate = nullptr,  // eponymous only: no CREATE VIRTUAL TABLE
    .xConnect = Connect,
    .xBestIndex = BestIndex,
    .xDisconnect = Disconnect,
    .xDestroy = nullptr,
    .xOpen = Open,
    .xClose = Close,
    .xFilter = Filter,
    .xNext = Next,
    .xEof = Eof,
    .xColumn = Column,
    .xRowid = RowId,
    .xUpdate = nullptr,
    .xBegin = nullptr,
    .xSync = nullptr,
    .xCommit = nullptr,
    .xRollback = nullptr,
    .xFindFunction = nullptr,
    .xRename = nullptr,
    .xSavepoint = nullptr,
    .xRelease = nullptr,
    .xRollbackTo = nullptr,
    .xShadowName = nullptr,
};

}  // namespace

int RegisterTable(sqlite3* db, const FunctionRow& row,
                  const std::shared_ptr<Connection>& connection) {
  auto* module = new Module{{row, *connection}, connection};
  return sqlite3_create_module_v2(db, row.name, &kModule, module,
                                  [](void* owned) { delete static_cast<Module*>(owned); });
}

}  // namespace ladderline
