#include "ext/results.h"

#include <algorithm>
#include <nlohmann/json.hpp>

namespace ladderline {
namespace {

using Json = nlohmann::json;

constexpr std::string_view kProfile[] = {  // box_cox_profile, yeo_johnson_profile
    "lambda",  "low",    "high",        "level",      "log_likelihood", "rows",    "missing",
    "outside", "simple", "simple_spec", "p_identity", "p_log",          "at_limit"};
constexpr std::string_view kNormality[] = {  // jarque_bera, shapiro_wilk and their kin
    "statistic", "p_value", "rows", "missing", "note"};
constexpr std::string_view kAudit[] = {  // value_audit
    "leading_zero", "missing", "blank", "integer",  "real",  "numeric_text", "date_like",
    "other_text",   "blob",    "zero",  "negative", "least", "largest"};
constexpr std::string_view kShape[] = {  // shape_summary
    "zeros",          "rows",    "missing", "negatives", "least",    "lower_quartile",  "median",
    "upper_quartile", "largest", "mean",    "sd",        "skewness", "excess_kurtosis", "reading"};
constexpr std::string_view kHistogram[] = {"bins", "rows", "missing"};   // histogram_bins
constexpr std::string_view kQuantiles[] = {"pairs", "rows", "missing"};  // quantile_pairs
constexpr std::string_view kComparison[] = {                             // model_compare
    "test",           "statistic",      "df1",       "df2",    "p_value",
    "aic_difference", "bic_difference", "preferred", "reading"};

constexpr ResultKeys kKinds[] = {kProfile,   kNormality, kAudit,     kShape,
                                 kHistogram, kQuantiles, kComparison};

bool Has(ResultKeys keys, std::string_view name) {
  return std::find(keys.begin(), keys.end(), name) != keys.end();
}

bool IsOfKind(const Json& result, ResultKeys keys) {
  if (!result.contains(keys.front())) return false;
  for (const auto& item : result.items()) {
    if (!Has(keys, item.key())) return false;
  }
  return true;
}

Cell CellOf(const Json& value) {
  if (value.is_object() && value.contains("rows")) return CellOf(value["rows"]);
  if (value.is_null()) return {};
  if (value.is_string()) return value.get<std::string>();
  if (value.is_boolean()) return static_cast<std::int64_t>(value.get<bool>());
  if (value.is_number_integer()) return value.get<std::int64_t>();
  if (value.is_number()) return value.get<double>();
  return value.dump();
}

}  // namespace

std::optional<ResultFact> FactOfResult(std::string_view text, std::string_view name) {
  const Json result = Json::parse(text.begin(), text.end(), nullptr, /*allow_exceptions=*/false);
  if (!result.is_object()) return std::nullopt;
  for (const ResultKeys keys : kKinds) {
    if (!IsOfKind(result, keys)) continue;
    ResultFact fact{.keys = keys, .known = Has(keys, name), .value = {}};
    const auto found = result.find(name);
    if (fact.known && found != result.end()) fact.value = CellOf(*found);
    return fact;
  }
  return std::nullopt;
}

}  // namespace ladderline
