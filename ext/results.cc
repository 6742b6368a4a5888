#include "ext/results.h"

#include <algorithm>

namespace ladderline {
namespace {

constexpr std::string_view kProfile[] = {  // box_cox_profile, yeo_johnson_profile
    "lambda",  "low",    "high",        "level",      "log_likelihood", "rows",     "missing",
    "outside", "simple", "simple_spec", "p_identity", "p_log",          "at_limit", "note"};
constexpr std::string_view kScan[] = {  // re_expression_scan
    "candidates", "rows", "missing", "outside", "reading"};
constexpr std::string_view kNormality[] = {  // jarque_bera, shapiro_wilk and their kin
    "statistic", "p_value", "rows", "missing", "note"};
constexpr std::string_view kAudit[] = {  // value_audit
    "leading_zero", "rows",         "missing",   "blank",      "integer",
    "real",         "numeric_text", "date_like", "other_text", "blob",
    "zero",         "negative",     "least",     "largest",    "examples"};
constexpr std::string_view kShape[] = {  // shape_summary
    "zeros",          "rows",    "missing", "negatives", "least",    "lower_quartile",  "median",
    "upper_quartile", "largest", "mean",    "sd",        "skewness", "excess_kurtosis", "reading"};
constexpr std::string_view kHistogram[] = {"bins", "rows", "missing"};   // histogram_bins
constexpr std::string_view kQuantiles[] = {"pairs", "rows", "missing"};  // quantile_pairs
constexpr std::string_view kComparison[] = {                             // model_compare
    "test",           "statistic",      "df1",       "df2",    "p_value",
    "aic_difference", "bic_difference", "preferred", "reading"};

constexpr ResultKeys kKinds[] = {kProfile, kScan,      kNormality, kAudit,
                                 kShape,   kHistogram, kQuantiles, kComparison};

bool Has(ResultKeys keys, std::string_view name) {
  return std::find(keys.begin(), keys.end(), name) != keys.end();
}

bool IsOfKind(const Json& result, ResultKeys keys) {
  if (!result.contains(keys.front())) return false;
  return std::all_of(result.members().begin(), result.members().end(),
                     [&](const Json::Member& member) { return Has(keys, member.key); });
}

}  // namespace

Cell CellOf(const Json& value) {
  if (value.is_number_integer()) return value.get<std::int64_t>();
  if (value.is_number()) return value.get<double>();
  if (value.is_string()) return value.get<std::string>();
  return {};
}

std::optional<ResultFact> FactOfResult(std::string_view text, std::string_view name) {
  const Result<Json> result = Json::Parse(text);
  if (!result.ok() || !result.value().is_object()) return std::nullopt;
  for (const ResultKeys keys : kKinds) {
    if (!IsOfKind(result.value(), keys)) continue;
    ResultFact fact{.keys = keys, .known = Has(keys, name), .value = {}};
    const Json* value = result.value().Find(name);
    if (fact.known && value != nullptr) {
      const bool has_parts = value->is_array() || value->is_object();
      fact.value = has_parts ? Cell(value->dump()) : CellOf(*value);
    }
    return fact;
  }
  return std::nullopt;
}

}  // namespace ladderline
