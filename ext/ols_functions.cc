// ols_model and ols_model_plain: labelled or bare values, row by row, into a model's text.
#include "ext/aggregate.h"
#include "ext/function_tables.h"
#include "ext/labelled_rows.h"
#include "ext/model_text.h"

namespace ladderline {
namespace {

template <class Rows>
struct ModelState final : Rows {
  void Answer(const Call& call) const {
    if (!this->started()) {
      Model model;
      model.reason = "no rows";
      call.Return(ModelText(model));
      return;
    }
    const Result<Model> model = FitOls(this->set(), this->options());
    if (!model.ok()) call.Throw(model.error());
    call.Return(ModelText(model.value()));
  }
};

constexpr AggregateMethods kLabelled = AggregateOf<ModelState<LabelledRows>>();
constexpr AggregateMethods kPlain = AggregateOf<ModelState<BareRows>>();

constexpr FunctionRow kRows[] = {
    {.name = "ols_model",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 2,
     .most_arguments = kAnyCount,
     .arguments = "label, value, …",
     .purpose = "Fits a least-squares regression of the first labelled value on the others; "
                "returns a model, which model_terms, fitted_mean and the rest read.",
     .source = "Golub & Van Loan, Matrix Computations; White 1980 and MacKinnon & White 1985 for "
               "hc0 to hc3; Liang & Zeger 1986 for cluster",
     .example = "SELECT ols_model('cost (EUR) | log_offset 1', cost, 'age (years)', age) FROM "
                "(SELECT 120 AS cost, 10 AS age UNION ALL SELECT 300, 40 UNION ALL SELECT 90, 5)",
     .aggregate = &kLabelled},
    {.name = "ols_model_plain",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = kAnyCount,
     .arguments = "y, x1, x2, …",
     .purpose = "The same for bare values, which are called y, x1, x2 and so on.",
     .source = "",
     .example = "SELECT ols_model_plain(y, x) FROM (SELECT 1 AS y, 2 AS x UNION ALL SELECT 3, 5 "
                "UNION ALL SELECT 4, 6)",
     .aggregate = &kPlain},
};

}  // namespace

std::span<const FunctionRow> OlsFunctions() { return kRows; }

}  // namespace ladderline
