// The audit of a dirty column, and its rows.
#include <cmath>

#include "core/describe/value_audit.h"
#include "core/support/text.h"
#include "ext/aggregate.h"
#include "ext/function_tables.h"
#include "ext/json.h"
#include "ext/results.h"
#include "ext/table.h"

namespace ladderline {
namespace {

constexpr size_t kExampleLength = 60;

std::string HexText(std::string_view bytes) {
  std::string text = "x'";
  for (const char c : bytes.substr(0, kExampleLength / 2)) {
    constexpr const char* kDigits = "0123456789abcdef";
    const auto byte = static_cast<unsigned char>(c);
    text += kDigits[byte / 16];
    text += kDigits[byte % 16];
  }
  return text + (bytes.size() > kExampleLength / 2 ? "…" : "'");
}

Json ExampleJson(ValueKind kind, const ValueAudit::Example& example) {
  if (const auto* integer = std::get_if<std::int64_t>(&example)) return *integer;
  if (const auto* number = std::get_if<double>(&example))
    return std::isfinite(*number) ? Json(*number) : Json(*number > 0 ? "Inf" : "-Inf");
  if (const auto* text = std::get_if<std::string>(&example))
    return kind == ValueKind::kBlob ? HexText(*text) : Excerpt(*text, kExampleLength);
  return nullptr;
}

struct AuditState {
  ValueAudit audit;
  std::string text;  // the value being read: reading its number may free the host's text

  void Step(const Call& call) { audit.Add(Read(call.value(0))); }
  void Inverse(const Call& call) { audit.Remove(Read(call.value(0))); }

  void Answer(const Call& call) const {
    Json counts, examples;
    counts["rows"] = audit.rows();
    for (size_t i = 0; i < kValueKindNames.size(); ++i) {
      const auto kind = static_cast<ValueKind>(i);
      counts[kValueKindNames[i]] = audit[kind].rows;
      examples[kValueKindNames[i]] = ExampleJson(kind, audit[kind].example);
    }
    counts["least"] = audit.least() ? Json(*audit.least()) : Json();
    counts["largest"] = audit.largest() ? Json(*audit.largest()) : Json();
    counts["examples"] = std::move(examples);
    call.Return(counts.dump());
  }

 private:
  ValueAudit::Value Read(sqlite3_value* value) {
    switch (sqlite3_value_type(value)) {
      case SQLITE_NULL:
        return {ValueKind::kMissing, {}, {}};
      case SQLITE_INTEGER:
        return {ValueKind::kInteger, sqlite3_value_double(value),
                std::int64_t{sqlite3_value_int64(value)}};
      case SQLITE_FLOAT:
        return {ValueKind::kReal, Finite(sqlite3_value_double(value)), sqlite3_value_double(value)};
      case SQLITE_BLOB:
        return {ValueKind::kBlob, {}, BytesOf(value)};
      default:
        break;
    }
    text = TextOf(value);
    const NumberReading reading = ReadNumber(value);
    const bool is_number = reading.kind == NumberReading::Kind::kNumber;
    std::optional<double> number;
    if (is_number) number = reading.number;
    return {KindOfText(text, is_number), number, std::string_view(text)};
  }

  // An infinity counts as a real number, but is none that could be zero, least or largest.
  static std::optional<double> Finite(double x) {
    if (!std::isfinite(x)) return std::nullopt;
    return x;
  }
};

std::vector<TableRow> AuditRows(const TableCall& call) {
  if (sqlite3_value_type(call.value(0)) == SQLITE_NULL) return {};
  const Result<Json> parsed = Json::Parse(TextOf(call.value(0)));
  if (!parsed.ok()) call.ThrowBad(0, "must be a result of value_audit");
  const Json& result = parsed.value();
  std::vector<TableRow> rows;
  for (const char* kind : kValueKindNames) {
    const bool whole = result.contains(kind) && result[kind].is_number_integer() &&
                       result.contains("examples") && result["examples"].contains(kind);
    if (!whole) call.ThrowBad(0, "must be a result of value_audit");
    rows.push_back({std::string(kind), CellOf(result[kind]), CellOf(result["examples"][kind])});
  }
  return rows;
}

constexpr AggregateMethods kAudit = AggregateOf<AuditState>();
constexpr TableMethods kAuditRows = {"kind TEXT, rows INTEGER, example", AuditRows};

constexpr FunctionRow kRows[] = {
    {.name = "value_audit",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "x",
     .purpose = "What is in a column: how many values of which kind, each with its latest example, "
                "the least and the largest number. Never an error.",
     .source = "",
     .example = "SELECT value_audit(column1) FROM (VALUES ('12'), ('n/a'), (''), (NULL), ('03'))",
     .aggregate = &kAudit},
    {.name = "value_audit_rows",
     .kind = FunctionRow::Kind::kTable,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "result",
     .purpose = "A value_audit as a table, one row for each kind of value.",
     .source = "",
     .example = "SELECT * FROM value_audit_rows((SELECT value_audit(column1) "
                "FROM (VALUES ('12'), ('n/a'), (''))))",
     .table = &kAuditRows},
};

}  // namespace

std::span<const FunctionRow> AuditFunctions() { return kRows; }

}  // namespace ladderline
