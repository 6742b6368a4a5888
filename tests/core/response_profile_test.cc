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

}  // namespace
}  // namespace ladderline
