// The power that a column asks for, or a response given its predictors: box_cox_lambda,
// yeo_johnson_lambda and their profiles.
#include "core/model/blocked.h"
#include "core/model/predictor_design.h"
#include "core/profile/lambda_profile.h"
#include "core/profile/response_profile.h"
#include "ext/aggregate.h"
#include "ext/column_or_pairs.h"
#include "ext/function_tables.h"
#include "ext/json.h"
#include "ext/labelled_rows.h"

namespace ladderline {
namespace {

constexpr double kLevel = 0.95;

// Keeps the rows of its frame, 8 bytes each, and starts afresh from a copy for every answer.
template <PowerFamily kFamily>
class ColumnValues {
 public:
  void Step(const Call& call) {
    const std::optional<double> x = call.Number(0);
    if (!x) {
      ++counts_.missing;
    } else if (IsInside(*x)) {
      values_.Push(*x);
    } else {
      ++counts_.outside;
    }
  }

  void Inverse(const Call& call) {
    const std::optional<double> x = call.Number(0);
    if (!x) {
      --counts_.missing;
    } else if (IsInside(*x)) {
      values_.PopFront();
    } else {
      --counts_.outside;
    }
  }

  UsedRows Used() const {
    UsedRows counts = counts_;
    counts.rows = static_cast<std::int64_t>(values_.size());
    return counts;
  }
  double level() const { return kLevel; }
  static constexpr bool kNotes = false;  // the counts tell all there is to say

  Result<double> Lambda() const { return OrReason(EstimateLambda(Response())); }
  Result<LambdaProfile> Profile() const { return OrReason(ProfileLambda(Response(), kLevel)); }

 private:
  template <class T>
  static Result<T> OrReason(std::optional<T> found) {
    if (found) return *std::move(found);
    return Error{"needs two different values"};
  }
  static bool IsInside(double x) { return kFamily == PowerFamily::kYeoJohnson || x > 0; }
  PowerResponse Response() const { return PowerResponse(kFamily, values_.Copy()); }

  Blocked<double> values_;
  UsedRows counts_;
};

// Labelled pairs as an ols_model has them; the response stays raw.
template <PowerFamily kFamily>
class LabelledValues final : public LabelledRows {
 public:
  UsedRows Used() const {
    if (!started()) return {};
    const RowCounts& rows = set().rows();
    return {rows.fitted, rows.with_gaps, rows.outside};
  }
  double level() const { return options().level; }
  static constexpr bool kNotes = true;

  Result<double> Lambda() const {
    return WithDesign([](const PowerResponse& response, const RowSource& design) {
      return EstimateLambda(response, design);
    });
  }
  Result<LambdaProfile> Profile() const {
    return WithDesign([this](const PowerResponse& response, const RowSource& design) {
      return ProfileLambda(response, design, level());
    });
  }

 private:
  void Prepare(const Call& call, std::vector<Label>& labels) override {
    Label& response = labels.front();
    RequireRaw(call, response, "the power is what is looked for");
    // What the logarithm refuses has no other power either.
    if (kFamily == PowerFamily::kBoxCox && response.word != Label::Word::kCategory) {
      response.word = Label::Word::kTransform;
      response.transform = *Transform::TryMake(TransformKind::kLogOffset, {});
    }
  }

  template <class Question>
  auto WithDesign(Question question) const
      -> decltype(question(std::declval<const PowerResponse&>(),
                           std::declval<const RowSource&>())) {
    if (!started()) return Error{"no rows"};
    const Result<PredictorDesign> design = PredictorDesign::Make(set());
    if (!design.ok()) return Error{design.error()};
    return question(PowerResponseOf(kFamily, set()), design.value().rows());
  }
};

template <PowerFamily kFamily>
using LambdaState = ColumnOrPairs<ColumnValues<kFamily>, LabelledValues<kFamily>>;

template <PowerFamily kFamily>
struct LambdaOnly : LambdaState<kFamily> {
  void Answer(const Call& call) {
    const Result<double> lambda = this->Ask([](auto& values) { return values.Lambda(); });
    lambda.ok() ? call.Return(lambda.value()) : call.ReturnNull();
  }
};

// Where there is no λ, the figures are null, and for labelled pairs a note says why; a limit is
// null on an open side.
template <PowerFamily kFamily>
struct WholeProfile : LambdaState<kFamily> {
  void Answer(const Call& call) {
    const Result<LambdaProfile> profile = this->Ask([](auto& values) { return values.Profile(); });
    const UsedRows counts = this->Ask([](auto& values) { return values.Used(); });
    Json json;
    const auto add = [&](const char* key, auto figure) {
      json[key] = profile.ok() ? Json(profile.value().*figure) : Json();
    };
    add("lambda", &LambdaProfile::lambda);
    add("low", &LambdaProfile::low);
    add("high", &LambdaProfile::high);
    json["level"] = this->Ask([](auto& values) { return values.level(); });
    add("log_likelihood", &LambdaProfile::log_likelihood);
    json["rows"] = counts.rows;
    json["missing"] = counts.missing;
    json["outside"] = counts.outside;
    add("simple", &LambdaProfile::simple);
    add("simple_spec", &LambdaProfile::simple_spec);
    add("p_identity", &LambdaProfile::p_identity);
    add("p_log", &LambdaProfile::p_log);
    json["at_limit"] = profile.ok() ? Json(profile.value().at_limit ? 1 : 0) : Json();
    if (this->Ask([](auto& values) { return values.kNotes; })) {
      if (!profile.ok()) json["note"] = profile.error();
      if (profile.ok() && profile.value().exact)
        json["note"] = "the predictors fit the response exactly at this power";
    }
    call.Return(json.dump());
  }
};

constexpr AggregateMethods kBoxCoxLambda = AggregateOf<LambdaOnly<PowerFamily::kBoxCox>>();
constexpr AggregateMethods kBoxCoxProfile = AggregateOf<WholeProfile<PowerFamily::kBoxCox>>();
constexpr AggregateMethods kYeoJohnsonLambda = AggregateOf<LambdaOnly<PowerFamily::kYeoJohnson>>();
constexpr AggregateMethods kYeoJohnsonProfile =
    AggregateOf<WholeProfile<PowerFamily::kYeoJohnson>>();

constexpr const char* kBoxCoxSource = "Box & Cox 1964";
constexpr const char* kYeoJohnsonSource = "Yeo & Johnson 2000";

constexpr FunctionRow kRows[] = {
    {.name = "box_cox_lambda",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = kAnyCount,
     .arguments = "x or label, value, …",
     .purpose = "The power that makes a positive column most nearly normal: the maximum-likelihood "
                "lambda between -5 and 5. Given labelled pairs, the power for the first one, whose "
                "label has no re-expression, given the others. Values of 0 or less are left out.",
     .source = kBoxCoxSource,
     .example = "SELECT box_cox_lambda(column1) FROM (VALUES (120), (180), (210), (390), (2400))",
     .aggregate = &kBoxCoxLambda},
    {.name = "box_cox_profile",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = kAnyCount,
     .arguments = "x or label, value, …",
     .purpose = "The same as JSON: lambda with its likelihood-ratio interval, the nearest plain "
                "power inside it and its spec, tests of no change and of the logarithm, rows used, "
                "missing and outside, and a note where there is more to say.",
     .source = kBoxCoxSource,
     .example = "SELECT box_cox_profile(column1) FROM (VALUES (120), (180), (210), (390), (2400))",
     .aggregate = &kBoxCoxProfile},
    {.name = "yeo_johnson_lambda",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = kAnyCount,
     .arguments = "x or label, value, …",
     .purpose = "As box_cox_lambda, for a column with zeros or negative values.",
     .source = kYeoJohnsonSource,
     .example = "SELECT yeo_johnson_lambda(column1) FROM (VALUES (-3), (0), (2), (5), (40))",
     .aggregate = &kYeoJohnsonLambda},
    {.name = "yeo_johnson_profile",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = kAnyCount,
     .arguments = "x or label, value, …",
     .purpose = "As box_cox_profile, for a column with zeros or negative values.",
     .source = kYeoJohnsonSource,
     .example = "SELECT yeo_johnson_profile(column1) FROM (VALUES (-3), (0), (2), (5), (40))",
     .aggregate = &kYeoJohnsonProfile},
};

}  // namespace

std::span<const FunctionRow> LambdaFunctions() { return kRows; }

}  // namespace ladderline
