// What is told of whole models: a comparison of two, a page about one, and what to show with it.
#include <cmath>

#include "core/report/brief.h"
#include "core/report/cautions.h"
#include "core/report/compare.h"
#include "core/report/difference.h"
#include "ext/function_tables.h"
#include "ext/json.h"
#include "ext/model_argument.h"

namespace ladderline {
namespace {

Json TextJson(const std::string& text) { return text.empty() ? Json() : Json(text); }

Json Whole(double number) {
  return std::isnan(number) ? Json() : Json(static_cast<std::int64_t>(number));
}

void ModelCompare(Call& call) {
  const std::shared_ptr<ModelInHand> first = HoldModelArgument(call, 0);
  const std::shared_ptr<ModelInHand> second = HoldModelArgument(call, 1);
  if (first == nullptr || second == nullptr) return call.ReturnNull();
  const Comparison comparison = Compare(first->model(), second->model());
  Json result;
  result["test"] = TextJson(comparison.test);
  result["statistic"] = comparison.statistic;
  result["df1"] = Whole(comparison.df1);
  result["df2"] = Whole(comparison.df2);
  result["p_value"] = comparison.p_value;
  result["aic_difference"] = comparison.aic_difference;
  result["bic_difference"] = comparison.bic_difference;
  result["preferred"] = TextJson(comparison.preferred);
  result["reading"] = comparison.reading;
  call.Return(result.dump());
}

void ModelBrief(Call& call) {
  const ModelInHand* model = ModelArgument(call);
  std::string_view form = "markdown";
  if (call.Has(1)) {
    const std::optional<std::string_view> given = call.Text(1);
    if (!given) return call.ReturnNull();
    if (*given != "markdown" && *given != "html") call.ThrowBad(1, "must be markdown or html");
    form = *given;
  }
  if (model == nullptr) return call.ReturnNull();
  const std::vector<BriefBlock> blocks =
      model->predictor ? BriefOf(*model->predictor) : BriefOfRefused(model->model());
  call.Return(form == "html" ? BriefHtml(blocks) : BriefMarkdown(blocks));
}

std::vector<TableRow> CautionRows(const TableCall& call) {
  const ModelInHand* model = TableModelArgument(call);
  if (model == nullptr || !model->predictor) return {};
  std::vector<TableRow> rows;
  for (std::string& caution : CautionsOf(model->model())) rows.push_back({std::move(caution)});
  return rows;
}

std::vector<TableRow> DifferenceRows(const TableCall& call) {
  const std::shared_ptr<ModelInHand> before = HoldModelArgument(call, 0);
  const std::shared_ptr<ModelInHand> after = HoldModelArgument(call, 1);
  if (before == nullptr || after == nullptr) return {};
  std::vector<TableRow> rows;
  for (Difference& row : DifferencesOf(before->model(), after->model())) {
    rows.push_back({TextOrNull(row.term), row.before, row.after, row.change, std::move(row.status),
                    std::move(row.sentence)});
  }
  return rows;
}

constexpr TableMethods kDifference = {
    "term TEXT, before REAL, after REAL, change REAL, status TEXT, sentence TEXT", DifferenceRows};
constexpr TableMethods kCautions = {"caution TEXT", CautionRows};

// A model of four rows.
#define LADDERLINE_FIT                                                                           \
  "(SELECT ols_model('cost | log_offset', cost, 'age', age) AS model FROM (SELECT 120 AS cost, " \
  "10 AS age UNION ALL SELECT 300, 40 UNION ALL SELECT 90, 5 UNION ALL SELECT 240, 31))"

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
    Scalar(
        "model_brief", 1, 2, "model [, form = markdown]", ModelBrief,
        "A page about a model: what was fitted to which cases, what was left out, what goes with "
        "the response, how close the fit comes, what the checks found, cautions. The form is "
        "markdown, or html for a part of a page whose title is above (h2 and h3).",
        "", "SELECT model_brief(model) FROM " LADDERLINE_FIT),
    {.name = "model_difference",
     .kind = FunctionRow::Kind::kTable,
     .least_arguments = 2,
     .most_arguments = 2,
     .arguments = "old, new",
     .purpose = "What changed between two fits of the same thing, such as before and after a month "
                "of cases: settings that changed, rows, closeness, each coefficient with whether "
                "it left the limits of the old fit, terms that are new or gone.",
     .source = "",
     .example = "SELECT f.* FROM (SELECT ols_model('cost', cost, 'age', age) FILTER (WHERE month = "
                "1) AS old, ols_model('cost', cost, 'age', age) AS new FROM (SELECT 1 AS month, "
                "120 AS cost, 10 AS age UNION ALL SELECT 1, 300, 40 UNION ALL SELECT 1, 90, 5 "
                "UNION ALL SELECT 2, 240, 31)) AS fit, model_difference(fit.old, fit.new) AS f",
     .table = &kDifference},
    {.name = "model_cautions",
     .kind = FunctionRow::Kind::kTable,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "model",
     .purpose = "What anyone who shows the model should show with it, one sentence or two a row.",
     .source = "",
     .example = "SELECT f.* FROM " LADDERLINE_FIT " AS fit, model_cautions(fit.model) AS f",
     .table = &kCautions},
};

}  // namespace

std::span<const FunctionRow> ReportFunctions() { return kRows; }

}  // namespace ladderline
