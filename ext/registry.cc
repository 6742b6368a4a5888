#include "ext/registry.h"

#include <cstring>

#include "ext/aggregate.h"
#include "ext/connection.h"
#include "ext/function_tables.h"
#include "ext/table.h"

namespace ladderline {
namespace {

constexpr int kFlags = SQLITE_UTF8 | SQLITE_DETERMINISTIC | SQLITE_INNOCUOUS;

// A function's user data: its binding, and a share of the connection's state, which goes with the
// last function of the connection.
struct OwnedBinding {
  Binding binding;
  std::shared_ptr<Connection> connection;
};

void CheckedScalar(sqlite3_context* context, int count, sqlite3_value** values) {
  Guard(context, [&] {
    Call call(context, count, values);
    call.CheckCount();
    call.row().scalar(call);
  });
}

void Delete(void* owned) { delete static_cast<OwnedBinding*>(owned); }

int Register(sqlite3* db, const FunctionRow& row, int count,
             const std::shared_ptr<Connection>& connection) {
  // The host calls Delete itself when registration fails.
  auto* owned = new OwnedBinding{{row, *connection}, connection};
  if (row.kind == FunctionRow::Kind::kScalar) {
    return sqlite3_create_function_v2(db, row.name, count, kFlags, &owned->binding, CheckedScalar,
                                      nullptr, nullptr, Delete);
  }
  const AggregateMethods& methods = *row.aggregate;
  if (methods.inverse == nullptr) {
    return sqlite3_create_function_v2(db, row.name, count, kFlags, &owned->binding, nullptr,
                                      methods.step, methods.final, Delete);
  }
  return sqlite3_create_window_function(db, row.name, count, kFlags, &owned->binding, methods.step,
                                        methods.final, methods.value, methods.inverse, Delete);
}

}  // namespace

std::string ArgumentName(const FunctionRow& row, int i) {
  const char* text = row.arguments;
  for (int skipped = 0; skipped < i && text != nullptr; ++skipped) {
    text = std::strchr(text, ',');
    if (text != nullptr) ++text;
  }
  if (text != nullptr) {
    text += std::strspn(text, " [");
    const size_t length =
        std::strspn(text, "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789_");
    if (length > 0) return std::string(text, length);
  }
  return "argument " + std::to_string(i + 1);
}

namespace {

// Whether this same build has registered everything before: the function asked is the last to come.
bool IsLoaded(sqlite3* db) {
  sqlite3_stmt* statement = nullptr;
  int rc = sqlite3_prepare_v2(db, "SELECT ladderline_version()", -1, &statement, nullptr);
  bool same = false;
  if (rc == SQLITE_OK && (rc = sqlite3_step(statement)) == SQLITE_ROW) {
    const auto* text = reinterpret_cast<const char*>(sqlite3_column_text(statement, 0));
    same = text != nullptr && VersionText() == text;
  }
  sqlite3_finalize(statement);
  if (rc == SQLITE_NOMEM) throw std::bad_alloc();
  return same;
}

}  // namespace

void RegisterAll(sqlite3* db) {
  const auto connection = std::make_shared<Connection>();
  for (const std::span<const FunctionRow> table : AllFunctions()) {
    for (const FunctionRow& row : table) {
      int rc = SQLITE_OK;
      if (row.kind == FunctionRow::Kind::kTable) {
        rc = RegisterTable(db, row, connection);
      } else if (row.most_arguments == kAnyCount) {
        rc = Register(db, row, kAnyCount, connection);
      } else {
        for (int n = row.least_arguments; n <= row.most_arguments && rc == SQLITE_OK; ++n)
          rc = Register(db, row, n, connection);
      }
      if (rc == SQLITE_NOMEM) throw std::bad_alloc();
      if (rc == SQLITE_BUSY) {
        if (IsLoaded(db)) return;
        throw CallError("ladderline: there is a function " + std::string(row.name) +
                        " already, which cannot be replaced while a statement runs; load "
                        "ladderline before other extensions");
      }
      if (rc != SQLITE_OK) {
        throw CallError("ladderline: could not register " + std::string(row.name) + ": " +
                        sqlite3_errmsg(db));
      }
    }
  }
}

}  // namespace ladderline
