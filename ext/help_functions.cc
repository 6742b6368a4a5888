// Help inside SQL: the function reference as a table, and what this build is.
#include <string>

#include "ext/aggregate.h"
#include "ext/function_tables.h"
#include "ext/table.h"

namespace ladderline {
namespace {

std::string KindName(const FunctionRow& row) {
  switch (row.kind) {
    case FunctionRow::Kind::kScalar:
      return "scalar";
    case FunctionRow::Kind::kAggregate:
      return row.aggregate->inverse == nullptr ? "aggregate" : "aggregate, window";
    default:
      return "table";
  }
}

std::vector<TableRow> FunctionRows(const TableCall&) {
  std::vector<TableRow> rows;
  for (const std::span<const FunctionRow> table : AllFunctions()) {
    for (const FunctionRow& row : table) {
      rows.push_back({std::string(row.name), KindName(row), std::string(row.arguments),
                      std::string(row.purpose), std::string(row.source), std::string(row.example)});
    }
  }
  return rows;
}

void Version(Call& call) { call.Return(VersionText()); }

constexpr TableMethods kFunctions = {
    "name TEXT, kind TEXT, arguments TEXT, purpose TEXT, source TEXT, example TEXT", FunctionRows};

constexpr FunctionRow kRows[] = {
    {.name = "ladderline_functions",
     .kind = FunctionRow::Kind::kTable,
     .least_arguments = 0,
     .most_arguments = 0,
     .arguments = "",
     .purpose = "Every function with its arguments, purpose, source and an example that runs.",
     .source = "",
     .example = "SELECT name, purpose FROM ladderline_functions WHERE kind = 'scalar'",
     .table = &kFunctions},
    {.name = "ladderline_version",
     .kind = FunctionRow::Kind::kScalar,
     .least_arguments = 0,
     .most_arguments = 0,
     .arguments = "",
     .purpose = "Version, compiler and library versions, for reports of trouble.",
     .source = "",
     .example = "SELECT ladderline_version()",
     .scalar = Version},
};

}  // namespace

#if defined(__clang__)
#define LADDERLINE_COMPILER "Clang " __clang_version__
#else
#define LADDERLINE_COMPILER "GCC " __VERSION__
#endif

std::string VersionText() {
  return std::string("ladderline " LADDERLINE_VERSION " (" LADDERLINE_COMPILER
                     "; " LADDERLINE_LIBRARIES "; built for SQLite " SQLITE_VERSION
                     ", running in ") +
         sqlite3_libversion() + ")";
}

std::span<const FunctionRow> HelpFunctions() { return kRows; }

}  // namespace ladderline
