#include "core/model/estimated_transforms.h"

#include <string>
#include <utility>

#include "core/model/design.h"
#include "core/profile/lambda_profile.h"
#include "core/profile/lambda_search.h"
#include "core/profile/offset_choice.h"
#include "core/profile/response_profile.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

struct Estimated {
  Transform transform;
  std::string note;
};

Result<Estimated> Made(TransformKind kind, std::vector<double> arguments, std::string note) {
  const std::optional<Transform> transform = Transform::TryMake(kind, arguments);
  if (!transform) return Error{"the spread of the values is beyond the range of numbers"};
  return Estimated{*transform, std::move(note)};
}

// `lambda(powers)` is a Result.
template <class Lambda>
Result<Estimated> MadeFromPowers(TransformKind kind, const Blocked<double>& numbers,
                                 const char* given, Lambda lambda) {
  const PowerFamily family =
      kind == TransformKind::kBoxCox ? PowerFamily::kBoxCox : PowerFamily::kYeoJohnson;
  const Result<double> found = lambda(PowerResponse(family, numbers.Copy()));
  if (!found.ok()) return Error{found.error()};
  const bool at_limit = found.value() == kLeastLambda || found.value() == kLargestLambda;
  return Made(
      kind, {found.value()},
      std::string("lambda estimated from the rows used") + given +
          (at_limit ? ", at the end of the search, then taken as known" : ", then taken as known"));
}

Result<Estimated> EstimateOf(TransformKind kind, const ColumnSet& set,
                             std::span<const ModelColumn> columns, std::span<const ModelTerm> terms,
                             std::size_t i) {
  const ModelColumn& column = columns[i];
  const Blocked<double>& numbers = set.column(i).numbers;
  if (kind == TransformKind::kCenter)
    return Made(kind, {column.mean}, "mean estimated from the rows used");
  if (column.observed_low == column.observed_high)
    return Error{"all values are " + NumberText(column.observed_low)};
  switch (kind) {
    case TransformKind::kZScore:
      return Made(kind, {column.mean, column.sd}, "mean and sd estimated from the rows used");
    case TransformKind::kRescale:
      return Made(kind, {column.observed_low, column.observed_high},
                  "range observed in the rows used");
    case TransformKind::kLogOffset: {
      const Result<double> offset = ChooseLogOffset(numbers.Copy());
      if (!offset.ok()) return Error{offset.error()};
      return Made(kind, {offset.value()},
                  "offset estimated from the rows used, then taken as known");
    }
    default:
      break;
  }
  if (i > 0) {
    return MadeFromPowers(kind, numbers, "", [](const PowerResponse& powers) -> Result<double> {
      if (const std::optional<double> lambda = EstimateLambda(powers)) return *lambda;
      return Error{"its values differ by too little"};
    });
  }
  return MadeFromPowers(kind, numbers, ", given the predictors", [&](const PowerResponse& powers) {
    return EstimateLambda(powers, DesignSource(set, columns, terms));
  });
}

std::optional<Error> Estimate(const ColumnSet& set, std::span<const ModelTerm> terms,
                              std::vector<ModelColumn>& columns, std::size_t i) {
  const std::optional<TransformKind> kind = set.column(i).label.estimated;
  if (!kind) return std::nullopt;
  ModelColumn& column = columns[i];
  const Result<Estimated> result = EstimateOf(*kind, set, columns, terms, i);
  if (!result.ok()) {
    return Error{std::string(TransformWord(*kind)) +
                 (*kind == TransformKind::kLogOffset ? " auto of " : " of ") + column.name +
                 " cannot be estimated: " + result.error()};
  }
  const auto& [transform, note] = result.value();
  if (!transform.InDomain(column.observed_low) || !transform.InDomain(column.observed_high)) {
    return Error{transform.spec() + ", estimated for " + column.name +
                 ", takes its values beyond the range of numbers"};
  }
  column.transform = transform;
  column.note += (column.note.empty() ? "" : "; ") + note;
  return std::nullopt;
}

}  // namespace

std::optional<Error> EstimatePredictors(const ColumnSet& set, std::vector<ModelColumn>& columns) {
  for (std::size_t i = 1; i < columns.size(); ++i) {
    if (std::optional<Error> error = Estimate(set, {}, columns, i)) return error;
  }
  return std::nullopt;
}

std::optional<Error> EstimateResponse(const ColumnSet& set, std::span<const ModelTerm> terms,
                                      std::vector<ModelColumn>& columns) {
  return Estimate(set, terms, columns, 0);
}

}  // namespace ladderline
