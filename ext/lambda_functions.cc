// The power that a plain column asks for: box_cox_lambda, yeo_johnson_lambda and their profiles.
#include "core/model/blocked.h"
#include "core/profile/lambda_profile.h"
#include "ext/aggregate.h"
#include "ext/function_tables.h"
#include "ext/json.h"

namespace ladderline {
namespace {

constexpr double kLevel = 0.95;

// Keeps the rows of its frame, 8 bytes each, and starts afresh from a copy for every answer.
template <PowerFamily kFamily>
class LambdaState {
 public:
  void Step(const Call& call) {
    const std::optional<double> x = call.Number(0);
    if (!x) {
      ++missing_;
    } else if (IsInside(*x)) {
      values_.Push(*x);
    } else {
      ++outside_;
    }
  }

  void Inverse(const Call& call) {
    const std::optional<double> x = call.Number(0);
    if (!x) {
      --missing_;
    } else if (IsInside(*x)) {
      values_.PopFront();
    } else {
      --outside_;
    }
  }

 protected:
  PowerResponse Response() const {
    std::vector<double> values;
    values.reserve(values_.size());
    for (size_t b = 0; b < values_.blocks(); ++b) {
      const std::span<const double> block = values_.block(b);
      values.insert(values.end(), block.begin(), block.end());
    }
    return PowerResponse(kFamily, std::move(values));
  }
  std::int64_t missing() const { return missing_; }
  std::int64_t outside() const { return outside_; }

 private:
  static bool IsInside(double x) { return kFamily == PowerFamily::kYeoJohnson || x > 0; }

  Blocked<double> values_;
  std::int64_t missing_ = 0, outside_ = 0;
};

template <PowerFamily kFamily>
struct LambdaOnly : LambdaState<kFamily> {
  void Answer(const Call& call) const { call.Return(EstimateLambda(this->Response())); }
};

// Without spread the figures are null, and the counts tell why; so is a limit on an open side.
template <PowerFamily kFamily>
struct WholeProfile : LambdaState<kFamily> {
  void Answer(const Call& call) const {
    const PowerResponse response = this->Response();
    const std::optional<LambdaProfile> profile = ProfileLambda(response, kLevel);
    Json json;
    const auto add = [&](const char* key, auto figure) {
      json[key] = profile ? Json((*profile).*figure) : Json();
    };
    add("lambda", &LambdaProfile::lambda);
    add("low", &LambdaProfile::low);
    add("high", &LambdaProfile::high);
    json["level"] = kLevel;
    add("log_likelihood", &LambdaProfile::log_likelihood);
    json["rows"] = response.rows();
    json["missing"] = this->missing();
    json["outside"] = this->outside();
    add("simple", &LambdaProfile::simple);
    add("simple_spec", &LambdaProfile::simple_spec);
    add("p_identity", &LambdaProfile::p_identity);
    add("p_log", &LambdaProfile::p_log);
    json["at_limit"] = profile ? Json(profile->at_limit ? 1 : 0) : Json();
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
     .most_arguments = 1,
     .arguments = "x",
     .purpose = "The power that makes a positive column most nearly normal: the maximum-likelihood "
                "lambda between -5 and 5. Values of 0 or less are left out.",
     .source = kBoxCoxSource,
     .example = "SELECT box_cox_lambda(column1) FROM (VALUES (120), (180), (210), (390), (2400))",
     .aggregate = &kBoxCoxLambda},
    {.name = "box_cox_profile",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "x",
     .purpose = "The same as JSON: lambda with its likelihood-ratio interval, the nearest plain "
                "power inside it and its spec, tests of no change and of the logarithm, and rows "
                "used, missing and outside.",
     .source = kBoxCoxSource,
     .example = "SELECT box_cox_profile(column1) FROM (VALUES (120), (180), (210), (390), (2400))",
     .aggregate = &kBoxCoxProfile},
    {.name = "yeo_johnson_lambda",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "x",
     .purpose = "As box_cox_lambda, for a column with zeros or negative values.",
     .source = kYeoJohnsonSource,
     .example = "SELECT yeo_johnson_lambda(column1) FROM (VALUES (-3), (0), (2), (5), (40))",
     .aggregate = &kYeoJohnsonLambda},
    {.name = "yeo_johnson_profile",
     .kind = FunctionRow::Kind::kAggregate,
     .least_arguments = 1,
     .most_arguments = 1,
     .arguments = "x",
     .purpose = "As box_cox_profile, for a column with zeros or negative values.",
     .source = kYeoJohnsonSource,
     .example = "SELECT yeo_johnson_profile(column1) FROM (VALUES (-3), (0), (2), (5), (40))",
     .aggregate = &kYeoJohnsonProfile},
};

}  // namespace

std::span<const FunctionRow> LambdaFunctions() { return kRows; }

}  // namespace ladderline
