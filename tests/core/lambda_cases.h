// The columns of tests/reference/lambda_profiles.json and what is asserted of each.
#ifndef LADDERLINE_TESTS_CORE_LAMBDA_CASES_H_
#define LADDERLINE_TESTS_CORE_LAMBDA_CASES_H_

#include <gtest/gtest.h>

#include <cmath>
#include <string>
#include <vector>

#include "core/profile/column_profile.h"
#include "core/profile/lambda_profile.h"
#include "tests/reference/reference.h"

namespace ladderline::testing {

struct LambdaCase {
  std::vector<double> values;
  nlohmann::json expected;
};

// As tests/reference/lambda_profiles.py makes them.
inline std::vector<double> LambdaCaseValues(const nlohmann::json& record) {
  if (record.contains("values")) return record["values"].get<std::vector<double>>();
  std::vector<double> values;
  if (record.contains("odds")) {
    const std::int64_t n = record["odds"];
    for (std::int64_t i = 0; i < n; ++i) {
      const auto k = static_cast<double>(i * 7919 % n);
      values.push_back(1.0 + (2 * k + 1) / (2 * static_cast<double>(n) - 2 * k - 1) -
                       record["minus"].get<double>());
    }
    return values;
  }
  for (double x : ReadCsvColumn(record["file"], record["column"]))
    if (record["family"] != "box_cox" || x > 0)
      values.push_back(record["factor"].get<double>() * x);
  return values;
}

inline std::vector<LambdaCase> LambdaCases(PowerFamily family) {
  const char* name = family == PowerFamily::kBoxCox ? "box_cox" : "yeo_johnson";
  std::vector<LambdaCase> cases;
  const nlohmann::json file = ReadJson("lambda_profiles.json");
  for (const nlohmann::json& record : file["cases"]) {
    if (record["family"] != name) continue;
    cases.push_back({LambdaCaseValues(record), record});
    EXPECT_EQ(cases.back().values.size(), record["rows"].get<size_t>()) << record["name"];
  }
  return cases;
}

inline void ExpectLimit(double limit, const nlohmann::json& expected) {
  if (expected.is_null()) {
    EXPECT_TRUE(std::isnan(limit)) << limit;
  } else {
    EXPECT_NEAR(limit, expected.get<double>(), 1e-7);
  }
}

// Where values differ by little, a few roundings of their logarithms move λ by this much.
inline double RoundingOfLambda(const PowerResponse& response) { return 1e-15 / response.spread(); }

// λ to 1e-9, limits to 1e-7, log-likelihood to 10 digits, tests' p-values to 6.
inline void ExpectProfilesAgree(PowerFamily family) {
  for (const LambdaCase& c : LambdaCases(family)) {
    SCOPED_TRACE(c.expected["name"]);
    const PowerResponse response(family, c.values);
    const auto profile = ProfileLambda(response, c.expected["level"].get<double>());
    ASSERT_TRUE(profile.has_value());
    EXPECT_NEAR(profile->lambda, c.expected["lambda"].get<double>(),
                1e-9 + RoundingOfLambda(response));
    ExpectLimit(profile->low, c.expected["low"]);
    ExpectLimit(profile->high, c.expected["high"]);
    EXPECT_TRUE(Agrees(c.expected["log_likelihood"], profile->log_likelihood, 10));
    EXPECT_TRUE(Agrees(c.expected["p_identity"], profile->p_identity, 6));
    EXPECT_TRUE(Agrees(c.expected["p_log"], profile->p_log, 6));
    EXPECT_EQ(profile->at_limit, c.expected["at_limit"].get<bool>());
    EXPECT_EQ(profile->rows, c.expected["rows"].get<std::int64_t>());
    EXPECT_EQ(profile->level, c.expected["level"].get<double>());
  }
}

// Also far off and right where the formulas change: log-likelihood to 12 digits, and a score that
// would move the root by less than 1e-10 (or by 1e-12 of the way to it).
inline void ExpectPointsAgree(PowerFamily family) {
  for (const LambdaCase& c : LambdaCases(family)) {
    const PowerResponse response(family, c.values);
    for (const nlohmann::json& point : c.expected["points"]) {
      SCOPED_TRACE(c.expected["name"].get<std::string>() + " at " + point["lambda"].dump());
      const ProfilePoint found = ColumnProfileAt(response, point["lambda"]);
      const double score = point["score"], curvature = point["curvature"];
      EXPECT_TRUE(Agrees(point["log_likelihood"], found.log_likelihood, 12));
      EXPECT_NEAR(
          found.score, score,
          (1e-10 + RoundingOfLambda(response)) * std::fabs(curvature) + 1e-12 * std::fabs(score));
      EXPECT_TRUE(Agrees(curvature, found.score_slope, 6));
    }
  }
}

// SciPy 1.10.1 leaves the constant n/2 (1 + ln 2π) out, and keeps 8 digits on NumAcc4.
inline void ExpectScipyAgrees(PowerFamily family) {
  int compared = 0;
  for (const LambdaCase& c : LambdaCases(family)) {
    SCOPED_TRACE(c.expected["name"]);
    if (!c.expected["scipy_llf_at_one_half"].is_number()) continue;  // it overflows
    const double constant =
        0.5 * static_cast<double>(c.values.size()) * (1 + std::log(2 * std::acos(-1.0)));
    const ProfilePoint point = ColumnProfileAt(PowerResponse(family, c.values), 0.5);
    EXPECT_TRUE(Agrees(c.expected["scipy_llf_at_one_half"], point.log_likelihood + constant, 8));
    ++compared;
  }
  EXPECT_GE(compared, 10);
}

// A worked example of tests/reference/boxcox/published.json.
inline nlohmann::json PublishedLambda(const std::string& id) {
  const nlohmann::json file = ReadJson("boxcox/published.json");
  for (const nlohmann::json& example : file["examples"])
    if (example["id"] == id) return example;
  ADD_FAILURE() << "no example " << id;
  return {};
}

inline double Printed(const nlohmann::json& text) { return std::stod(text.get<std::string>()); }

inline std::vector<double> PrintedList(const nlohmann::json& texts) {
  std::vector<double> numbers;
  for (const nlohmann::json& text : texts) numbers.push_back(Printed(text));
  return numbers;
}

}  // namespace ladderline::testing

#endif  // LADDERLINE_TESTS_CORE_LAMBDA_CASES_H_
