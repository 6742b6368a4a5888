// What is told of whole models: a comparison of two.
#include <cmath>

#include "core/report/compare.h"
#include "ext/function_tables.h"
#include "ext/json.h"
#include "ext/model_argument.h"

namespace ladderline {
namespace {

Json TextOrNull(const std::string& text) { return text.empty() ? Json() : Json(text); }

Json Whole(double number) {
  return std::isnan(number) ? Json() : Json(static_cast<std::int64_t>(number));
}

void ModelCompare(Call& call) {
  const std::shared_ptr<ModelInHand> first = HoldModelArgument(call, 0);
  const std::shared_ptr<ModelInHand> second = HoldModelArgument(call, 1);
  if (first == nullptr || second == nullptr) return call.ReturnNull();
  const Comparison comparison = Compare(first->model(), second->model());
  Json result;
  result["test"] = TextOrNull(comparison.test);
  result["statistic"] = comparison.statistic;
  result["df1"] = Whole(comparison.df1);
  result["df2"] = Whole(comparison.df2);
  result["p_value"] = comparison.p_value;
  result["aic_difference"] = comparison.aic_difference;
  result["bic_difference"] = comparison.bic_difference;
  result["preferred"] = TextOrNull(comparison.preferred);
  result["reading"] = comparison.reading;
  call.Return(result.dump());
}

constexpr FunctionRow kRows[] = {
    Scalar("model_compare", 2, 2, "first, second", ModelCompare,
           "Two fits of one response in the same rows, compared as JSON: a test where one has all "
           "that the other has, AIC and BIC (second less first) on the response's original scale, "
           "which is preferred, and a reading in words.",
           "Burnham & Anderson, Model Selection and Multimodel Inference (2002)",
           "SELECT fact(model_compare(ols_model('cost', cost, 'age', age), "
           "ols_model('cost | log_offset', cost, 'age', age)), 'reading') FROM (SELECT 120 AS "
           "cost, 10 AS age UNION ALL SELECT 300, 40 UNION ALL SELECT 90, 5 UNION ALL SELECT 240, "
           "31)"),
};

}  // namespace

std::span<const FunctionRow> ReportFunctions() { return kRows; }

}  // namespace ladderline
