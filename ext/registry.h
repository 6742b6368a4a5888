// The one registration table: every SQL function is a row, and everything that speaks of functions
// (registration, ladderline_functions, the README's reference, the tests' sweeps) is made from it.
//
// To add a function: write its callback in the file of its concept, add its row to that file's
// table, and, for a new file, name that table in registry.cc.
#ifndef LADDERLINE_EXT_REGISTRY_H_
#define LADDERLINE_EXT_REGISTRY_H_

#include <memory>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "ext/call.h"

namespace ladderline {

struct AggregateMethods;  // ext/aggregate.h
struct TableMethods;      // ext/table.h

using ScalarCall = void (*)(Call&);

constexpr int kAnyCount = -1;

struct FunctionRow {
  enum class Kind { kScalar, kAggregate, kTable };
  const char* name;
  Kind kind;
  int least_arguments;
  int most_arguments;  // kAnyCount: up to the host's limit
  // As a reader writes them: `x [, offset = 0 [, base = e]]`. The words before each comma name the
  // arguments in messages.
  const char* arguments;
  const char* purpose;  // one sentence
  const char* source;   // publication, or ""
  const char* example;  // a statement that runs on an empty database
  // Exactly one is set, by kind.
  ScalarCall scalar = nullptr;
  const AggregateMethods* aggregate = nullptr;
  const TableMethods* table = nullptr;
};

// The row of a scalar function.
constexpr FunctionRow Scalar(const char* name, int least_arguments, int most_arguments,
                             const char* arguments, ScalarCall call, const char* purpose,
                             const char* source, const char* example) {
  return {.name = name,
          .kind = FunctionRow::Kind::kScalar,
          .least_arguments = least_arguments,
          .most_arguments = most_arguments,
          .arguments = arguments,
          .purpose = purpose,
          .source = source,
          .example = example,
          .scalar = call};
}

// Of an aggregate, and of a table-valued function.
constexpr FunctionRow Aggregate(const char* name, int least_arguments, int most_arguments,
                                const char* arguments, const AggregateMethods& methods,
                                const char* purpose, const char* source, const char* example) {
  return {.name = name,
          .kind = FunctionRow::Kind::kAggregate,
          .least_arguments = least_arguments,
          .most_arguments = most_arguments,
          .arguments = arguments,
          .purpose = purpose,
          .source = source,
          .example = example,
          .aggregate = &methods};
}
constexpr FunctionRow Table(const char* name, int least_arguments, int most_arguments,
                            const char* arguments, const TableMethods& methods, const char* purpose,
                            const char* source, const char* example) {
  return {.name = name,
          .kind = FunctionRow::Kind::kTable,
          .least_arguments = least_arguments,
          .most_arguments = most_arguments,
          .arguments = arguments,
          .purpose = purpose,
          .source = source,
          .example = example,
          .table = &methods};
}

std::vector<std::span<const FunctionRow>> AllFunctions();

// The name of argument i in `row.arguments`; `argument 3` where the row names none.
std::string ArgumentName(const FunctionRow& row, int i);

// What ladderline_version() says of this build: version, compiler, libraries, host.
std::string VersionText();

// Registers every row on `db`. Throws CallError naming the row that could not be registered. While
// a statement runs (SELECT load_extension(…)) the host replaces no function: then the same build,
// loaded before, stays as it is, and another extension's function of a name of ours is an error.
void RegisterAll(sqlite3* db);

}  // namespace ladderline

#endif  // LADDERLINE_EXT_REGISTRY_H_
