// Giving results away: thresholds for counts, and models without single rows.
#include <cmath>

#include "core/release/release.h"
#include "core/release/suppression.h"
#include "ext/aggregate.h"
#include "ext/function_tables.h"
#include "ext/model_argument.h"
#include "ext/model_text.h"

namespace ladderline {
namespace {

// A whole number of at least `least` in argument i, if it is there.
std::optional<std::int64_t> CountArgument(const Call& call, int i, std::int64_t least) {
  const std::optional<double> number = call.Number(i);
  if (!number) return std::nullopt;
  if (*number != std::floor(*number) || *number < static_cast<double>(least) ||
      *number > static_cast<double>(kMostCount)) {
    call.ThrowBad(i, "must be a whole number from " + std::to_string(least) + " to " +
                         std::to_string(kMostCount));
  }
  return static_cast<std::int64_t>(*number);
}

class SuppressionState {
 public:
  void Step(const Call& call) {
    if (const std::optional<std::int64_t> count = Read(call)) table_.Add(*count);
  }
  void Inverse(const Call& call) {
    if (const std::optional<std::int64_t> count = Read(call)) table_.Remove(*count);
  }
  void Answer(const Call& call) const {
    const auto threshold = floor_ ? table_.Threshold(*floor_) : std::nullopt;
    if (threshold) {
      call.Return(*threshold);
    } else {
      call.ReturnNull();
    }
  }

 private:
  std::optional<std::int64_t> Read(const Call& call) {
    const std::optional<std::int64_t> count = CountArgument(call, 0, 0);
    const std::optional<std::int64_t> floor = CountArgument(call, 1, 1);
    if (!floor) return std::nullopt;
    if (floor_ && *floor_ != *floor) {
      call.ThrowBad(1,
                    "must stay the same within a group, where it was " + std::to_string(*floor_));
    }
    floor_ = floor;
    return count;
  }

  CountTable table_;
  std::optional<std::int64_t> floor_;
};

void ModelForRelease(Call& call) {
  const std::shared_ptr<ModelInHand> model = HoldModelArgument(call, 0);
  const std::optional<std::int64_t> floor = CountArgument(call, 1, 1);
  if (model == nullptr || !floor) return call.ReturnNull();
  call.Return(ModelText(ReleaseOf(model->model(), *floor)));
}

constexpr AggregateMethods kSuppression = AggregateOf<SuppressionState>();

constexpr FunctionRow kRows[] = {
    Aggregate(
        "suppression_floor", 2, 2, "n, floor", kSuppression,
        "For OVER, of the counts of one table that is shown with its total: the threshold, floor "
        "or more, such that hiding every count below it lets none of them be found from the "
        "total and the others; floor is what local rules ask for.",
        "",
        "SELECT column1 AS trade, CASE WHEN column2 >= suppression_floor(column2, 5) OVER "
        "() THEN column2 END AS cases FROM (VALUES ('Plumbing', 40), ('Damp', 3), "
        "('Roofing', 12))"),
    Scalar(
        "model_for_release", 2, 2, "model, floor", ModelForRelease,
        "The model without keys and single rows, with levels of fewer rows than the floor put "
        "together (the fit is that of a refit with the merged levels), ranges and counts of rows "
        "left out rounded; what cannot be given away is a refused model with the reason.",
        "",
        "SELECT model_problem(model_for_release(ols_model('cost', cost, 'age', age), 5)) FROM "
        "(SELECT 120 AS cost, 10 AS age UNION ALL SELECT 300, 40 UNION ALL SELECT 90, 5 UNION "
        "ALL SELECT 240, 31)"),
};

}  // namespace

std::span<const FunctionRow> ReleaseFunctions() { return kRows; }

}  // namespace ladderline
