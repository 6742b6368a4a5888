// The power profile of a response given its predictors.
#include "core/profile/response_profile.h"

#include <algorithm>
#include <numeric>

#include "core/elementary/elementary.h"
#include "core/regression/chosen_rows.h"
#include "tests/core/lambda_cases.h"

namespace ladderline {
namespace {

using testing::Agrees;
using testing::Printed;
using testing::PublishedLambda;

constexpr PowerFamily kBoxCox = PowerFamily::kBoxCox;

// A response with its predictors, column by column.
struct Data {
  std::vector<double> y;
  std::vector<std::vector<double>> x;
  std::vector<double> w;

  ColumnSource Design() const { return ColumnSource(true, {x.begin(), x.end()}, y, w); }
  Result<LambdaProfile> Profile(PowerFamily family = kBoxCox, double level = 0.95) const {
    return ProfileLambda(PowerResponse(family, y), Design(), level);
  }
  void Indicators(const std::vector<double>& codes) {
    for (double level = 1; level < *std::max_element(codes.begin(), codes.end()) + 1; ++level) {
      std::vector<double> column;
      for (const double code : codes) column.push_back(code == level ? 1 : 0);
      if (level > 1) x.push_back(column);
    }
  }
};

std::vector<double> Column(const char* file, const char* name) {
  return testing::ReadCsvColumn(file, name);
}

Data Poisons(bool interaction) {
  Data data{Column("boxcox/poisons.csv", "time"), {}, {}};
  auto texts = testing::ReadCsvText("boxcox/poisons.csv");
  const std::vector<std::string>&poison = texts["poison"], &treat = texts["treat"];
  std::vector<double> first, second, both;
  for (size_t i = 0; i < poison.size(); ++i) {
    first.push_back(std::stod(poison[i]));
    second.push_back(treat[i][0] - 'A' + 1);
    both.push_back(3 * (second.back() - 1) + first.back());
  }
  if (interaction) {
    data.Indicators(both);
  } else {
    data.Indicators(first);
    data.Indicators(second);
  }
  return data;
}

Data Wool() {
  return {Column("boxcox/wool.csv", "cycles"),
          {Column("boxcox/wool.csv", "len"), Column("boxcox/wool.csv", "amp"),
           Column("boxcox/wool.csv", "load")},
          {}};
}

Data Trees(bool logs) {
  Data data{Column("boxcox/trees.csv", "Volume"),
            {Column("boxcox/trees.csv", "Height"), Column("boxcox/trees.csv", "Girth")},
            {}};
  if (logs)
    for (std::vector<double>& x : data.x) LogBlock(x.data(), x.data(), x.size());
  return data;
}

// published.json, `exact`: recomputed there at 70 digits. Its likelihoods lack n/2 (1 + ln 2π).
void ExpectExact(const Data& data, const nlohmann::json& exact) {
  const Result<LambdaProfile> result = data.Profile();
  ASSERT_TRUE(result.ok());
  const LambdaProfile& profile = result.value();
  const double n = static_cast<double>(data.y.size());
  EXPECT_NEAR(profile.lambda, Printed(exact["lambda_hat"]), 1e-9);
  EXPECT_NEAR(profile.low, Printed(exact["ci95_lr"][0]), 1e-7);
  EXPECT_NEAR(profile.high, Printed(exact["ci95_lr"][1]), 1e-7);
  EXPECT_TRUE(Agrees(Printed(exact["max_profile_loglik"]),
                     profile.log_likelihood + n / 2 * (1 + std::log(2 * std::acos(-1.0))), 10));
  const PowerResponse response(kBoxCox, data.y);
  const ColumnSource design = data.Design();
  const LeastSquares fit = FitLeastSquares(design);
  const ResponseProfile likelihood(response, design, fit);
  for (const auto& [lambda, key] :
       {std::pair(0.0, "lr_stat_lambda_0"), {1.0, "lr_stat_lambda_1"}}) {
    EXPECT_NEAR(2 * (profile.log_likelihood - likelihood.At(lambda, 0).profile.log_likelihood),
                Printed(exact[key]), 1e-9);
  }
}

TEST(ResponseProfile, PoisonsAdditive) {
  ExpectExact(Poisons(false), PublishedLambda("poisons")["exact"]);
}
TEST(ResponseProfile, PoisonsWithInteraction) {
  ExpectExact(Poisons(true), PublishedLambda("poisons")["exact_with_interaction"]);
}
TEST(ResponseProfile, Wool) { ExpectExact(Wool(), PublishedLambda("wool")["exact"]); }
TEST(ResponseProfile, TreesOnLogs) {
  ExpectExact(Trees(true), PublishedLambda("trees_loglog")["exact"]);
}
TEST(ResponseProfile, TreesLinear) {
  ExpectExact(Trees(false), PublishedLambda("trees_linear")["exact"]);
}

// tests/reference/response_profiles.json: recomputed at 60 digits, among them weights, Yeo–Johnson,
// and responses of which the predictors explain nearly all.
TEST(ResponseProfile, AgreesWithHighPrecision) {
  const nlohmann::json file = testing::ReadJson("response_profiles.json");
  for (const nlohmann::json& c : file["cases"]) {
    SCOPED_TRACE(c["name"]);
    const std::string path = c["file"];
    Data data{testing::ReadCsvColumn(path, c["response"]), {}, {}};
    for (const std::string name : c["predictors"])
      data.x.push_back(testing::ReadCsvColumn(path, name));
    if (!c["square"].is_null()) {
      data.x.push_back(testing::ReadCsvColumn(path, c["square"]));
      for (double& x : data.x.back()) x *= x;
    }
    if (!c["weight"].is_null()) data.w = testing::ReadCsvColumn(path, c["weight"]);
    const PowerFamily family = c["family"] == "box_cox" ? kBoxCox : PowerFamily::kYeoJohnson;
    const Result<LambdaProfile> profile = data.Profile(family);
    ASSERT_TRUE(profile.ok());
    EXPECT_NEAR(profile.value().lambda, c["lambda"].get<double>(), 1e-9);
    testing::ExpectLimit(profile.value().low, c["low"]);
    testing::ExpectLimit(profile.value().high, c["high"]);
    EXPECT_TRUE(Agrees(c["log_likelihood"], profile.value().log_likelihood, 10));
    const ColumnSource design = data.Design();
    const LeastSquares fit = FitLeastSquares(design);
    const PowerResponse response(family, data.y);
    const ResponseProfile likelihood(response, design, fit);
    EXPECT_TRUE(
        Agrees(c["likelihood_at_minus_3"], likelihood.At(-3, 0).profile.log_likelihood, 10));
    EXPECT_TRUE(Agrees(c["likelihood_at_2"], likelihood.At(2, 0).profile.log_likelihood, 10));
    EXPECT_EQ(EstimateLambda(response, design).value(), profile.value().lambda);
  }
}

// published.json: figures printed by R car 3.1-1, whose optimiser stops some 1e-5 short.
TEST(ResponseProfile, AgreesWithCar) {
  const nlohmann::json wool = PublishedLambda("wool")["published"];
  const LambdaProfile profile = Wool().Profile().value();
  EXPECT_NEAR(profile.lambda, Printed(wool["lambda"]), 1e-4);
  EXPECT_NEAR(profile.p_log, Printed(wool["lrt_lambda_0_p"]), 5e-6);
  EXPECT_EQ(profile.simple, Printed(wool["rounded_lambda"]));
  const nlohmann::json poisons = PublishedLambda("poisons");
  EXPECT_EQ(Poisons(false).Profile().value().simple,
            Printed(poisons["published"]["rounded_lambda"]));
}

// Without predictors it is the profile of the column.
TEST(ResponseProfile, AnInterceptAloneIsAColumn) {
  for (const PowerFamily family : {kBoxCox, PowerFamily::kYeoJohnson}) {
    for (const testing::LambdaCase& c : testing::LambdaCases(family)) {
      SCOPED_TRACE(c.expected["name"]);
      if (c.values.size() < 3 || c.values.size() > 5000) continue;
      const PowerResponse response(family, c.values);
      const Data data{c.values, {}, {}};
      const Result<LambdaProfile> found = data.Profile(family);
      ASSERT_TRUE(found.ok());
      const double tolerance = 1e-9 + 10 * testing::RoundingOfLambda(response);
      EXPECT_NEAR(found.value().lambda, c.expected["lambda"].get<double>(), tolerance);
      EXPECT_TRUE(Agrees(c.expected["log_likelihood"], found.value().log_likelihood, 10));
    }
  }
}

// Long data are searched from a sample; the answer is that of all rows.
TEST(ResponseProfile, LongDataHaveTheLambdaOfAllRows) {
  Data data;
  std::vector<double> noise, trend;
  const std::int64_t n = 60'000;
  for (std::int64_t i = 0; i < n; ++i) {
    const double u = (static_cast<double>(i * 7919 % n) + 0.5) / static_cast<double>(n);
    const double v = (static_cast<double>(i * 104729 % n) + 0.5) / static_cast<double>(n);
    trend.push_back(u);
    const double z = 5 + 2 * u + 0.3 * (v - 0.5);
    data.y.push_back(z * z * z);
  }
  data.x.push_back(trend);
  const ColumnSource design = data.Design();
  const PowerResponse response(kBoxCox, data.y);
  const double lambda = EstimateLambda(response, design).value();
  EXPECT_NEAR(lambda, 1.0 / 3, 0.02);
  const LeastSquares fit = FitLeastSquares(design);
  const ResponseProfile profile(response, design, fit);
  const ProfilePoint top = profile.At(lambda, 2).profile;
  EXPECT_LT(std::fabs(top.score / top.score_slope), 1e-9);
}

TEST(ResponseProfile, DerivativesAreThoseOfTheLikelihood) {
  const Data data = Wool();
  const ColumnSource design = data.Design();
  const LeastSquares fit = FitLeastSquares(design);
  const PowerResponse response(kBoxCox, data.y);
  const ResponseProfile profile(response, design, fit);
  constexpr double kStep = 1e-4;
  for (const double lambda : {-2.0, -0.3, 0.0, 0.7, 3.0}) {
    const auto at = [&](double x) { return profile.At(x, 2).profile; };
    const double rise = at(lambda + kStep).log_likelihood - at(lambda - kStep).log_likelihood;
    EXPECT_TRUE(Agrees(rise / (2 * kStep), at(lambda).score, 5));
    const double bend = at(lambda + kStep).score - at(lambda - kStep).score;
    EXPECT_TRUE(Agrees(bend / (2 * kStep), at(lambda).score_slope, 5));
  }
}

TEST(ResponseProfile, ChosenRowsAreTheRowsChosen) {
  const Data data = Wool();
  const ColumnSource design = data.Design();
  const ChosenRows odd(design, {1, 3, 5, 7, 9, 11, 13, 15, 17, 19, 21, 23, 25});
  Data kept{{}, std::vector<std::vector<double>>(3), {}};
  for (size_t i = 1; i < 27; i += 2) {
    kept.y.push_back(data.y[i]);
    for (size_t j = 0; j < 3; ++j) kept.x[j].push_back(data.x[j][i]);
  }
  EXPECT_EQ(ProfileLambda(PowerResponse(kBoxCox, kept.y), odd, 0.95).value().lambda,
            kept.Profile().value().lambda);
}

}  // namespace
}  // namespace ladderline
