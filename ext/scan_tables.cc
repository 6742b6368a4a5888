// A re_expression_scan as a table.
#include "ext/function_tables.h"
#include "ext/json.h"
#include "ext/results.h"
#include "ext/table.h"

namespace ladderline {
namespace {

constexpr const char* kColumns[] = {"rank",
                                    "spec",
                                    "power",
                                    "rows_used",
                                    "rows_outside",
                                    "skewness",
                                    "excess_kurtosis",
                                    "normal_correlation",
                                    "normal_p",
                                    "log_likelihood",
                                    "aic",
                                    "funnel_p",
                                    "reading"};

bool IsCandidate(const Json& candidate) {
  if (!candidate.is_object() || candidate.size() != std::size(kColumns)) return false;
  for (const char* name : kColumns)
    if (!candidate.contains(name)) return false;
  for (const char* name : {"rank", "rows_used", "rows_outside"})
    if (!candidate[name].is_number_integer()) return false;
  for (const char* name : {"spec", "reading"})
    if (!candidate[name].is_string()) return false;
  for (const char* name : {"power", "skewness", "excess_kurtosis", "normal_correlation", "normal_p",
                           "log_likelihood", "aic", "funnel_p"})
    if (!candidate[name].is_number() && !candidate[name].is_null()) return false;
  return true;
}

std::vector<TableRow> ScanRows(const TableCall& call) {
  if (call.IsNull(0)) return {};
  const Result<Json> scan = Json::Parse(TextOf(call.value(0)));
  const Json* candidates = scan.ok() && scan.value().is_object() && scan.value().size() == 5
                               ? scan.value().Find("candidates")
                               : nullptr;
  if (candidates == nullptr || !candidates->is_array())
    call.ThrowBad(0, "must be a result of re_expression_scan");
  std::vector<TableRow> rows;
  for (const Json& candidate : *candidates) {
    if (!IsCandidate(candidate)) call.ThrowBad(0, "must be a result of re_expression_scan");
    TableRow row;
    for (const char* name : kColumns) row.push_back(CellOf(candidate[name]));
    rows.push_back(std::move(row));
  }
  return rows;
}

constexpr TableMethods kScanRows = {
    "rank INTEGER, spec TEXT, power REAL, rows_used INTEGER, rows_outside INTEGER, skewness REAL, "
    "excess_kurtosis REAL, normal_correlation REAL, normal_p REAL, log_likelihood REAL, aic REAL, "
    "funnel_p REAL, reading TEXT",
    ScanRows};

constexpr FunctionRow kRows[] = {
    {.name = "re_expression_rows",
     .kind = FunctionRow::Kind::kTable,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "scan",
     .purpose = "A re_expression_scan as a table, one row for each re-expression, best first: the "
                "rows it loses, the shape it leaves, its likelihood and whether residuals still "
                "fan out.",
     .source = "",
     .example = "SELECT * FROM re_expression_rows((SELECT re_expression_scan(column1) FROM "
                "(VALUES (120), (180), (210), (390), (2400), (95), (640), (310), (155))))",
     .table = &kScanRows},
};

}  // namespace

std::span<const FunctionRow> ScanTables() { return kRows; }

}  // namespace ladderline
