// From a re-expressed fit back to totals: means by smearing, against published figures and against
// simulated cases whose truth is known.
#include <cmath>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

// The worked example of smwrStats 0.7.6 (USGS-R, vignette Regression, section Bias Correction) on
// dissolved solids in the Cuyahoga: ln TDS on ln Q and the season, printed figures; beside them R
// 4.2.2's lm on the same file in 12 digits.
TEST(Retransformation, PublishedSmearingOfDissolvedSolids) {
  const Database db;
  db.LoadCsv("tds", "boxcox/cuyahoga_tds.csv");
  db.Run(
      "CREATE TABLE fit AS SELECT ols_model('TDS | log_offset', TDS, 'Q | log_offset', Q, "
      "'sine', sin(2 * pi() * TIME), 'cosine', cos(2 * pi() * TIME)) AS model FROM tds");
  const nlohmann::json file = ReadJson("boxcox/published.json");
  const nlohmann::json* example = nullptr;
  for (const auto& e : file["examples"])
    if (e["id"] == "cuyahoga_tds") example = &e;
  ASSERT_NE(example, nullptr);
  const auto& printed = (*example)["published"];
  const auto& r = (*example)["reproduced"]["R 4.2.2 lm"];

  const std::vector<std::string> terms = {"intercept", "Q", "sine", "cosine"};
  for (size_t i = 0; i < terms.size(); ++i) {
    const double b = db.Number("SELECT coefficient(model, '" + terms[i] + "') FROM fit");
    EXPECT_NEAR(b, std::stod(printed["coef"][i].get<std::string>()), 0.5e-5) << terms[i];
    EXPECT_TRUE(Agrees(r["coef"][i], b, 12)) << terms[i];
  }
  const auto sum = [&](const std::string& function) {
    return db.Number("SELECT sum(" + function +
                     "(model, Q, sin(2 * pi() * TIME), cos(2 * pi() * TIME))) FROM fit, tds");
  };
  const double typical = sum("fitted_typical"), mean = sum("fitted_mean");
  EXPECT_NEAR(typical, std::stod(printed["sum_exp_fitted"].get<std::string>()), 0.5e-2);
  EXPECT_NEAR(mean, std::stod(printed["sum_smearing"].get<std::string>()), 0.5e-2);
  EXPECT_TRUE(Agrees(r["sum_exp_fitted"], typical, 11));
  EXPECT_TRUE(Agrees(r["sum_smearing"], mean, 11));
  EXPECT_TRUE(
      Agrees(r["smearing_factor"], db.Number("SELECT fact(model, 'smearing') FROM fit"), 11));
  EXPECT_EQ(db.Number("SELECT sum(TDS) FROM tds"),
            std::stod(printed["sum_observed"].get<std::string>()));
}

// 100,000 cases with x from 1 to 9 and normal z: Park & Miller's generator with the multiplier
// 48271, normal deviates by Box & Muller.
class Simulated : public ::testing::Test {
 protected:
  Simulated() {
    db.Run(
        "CREATE TABLE sample AS WITH RECURSIVE stream(i, a, b, c) AS ("
        "  SELECT 1, 20260101, 407355683, 854716505 UNION ALL"
        "  SELECT i + 1, a * 48271 % 2147483647, b * 48271 % 2147483647, c * 48271 % 2147483647"
        "  FROM stream WHERE i < 100000)"
        "SELECT 1 + 8 * a / 2147483647.0 AS x, sqrt(-2 * ln(b / 2147483647.0)) * "
        "cos(2 * pi() * c / 2147483647.0) AS z FROM stream");
  }
  Database db;
};

// y = exp(3 + ¼ x + 0.7 z) has the mean exp(3 + ¼ x) exp(0.7²/2); the way back alone forgets the
// last factor.
TEST_F(Simulated, TotalsOfALogNormalComeFromTheMean) {
  db.Run(
      "CREATE TABLE fit AS SELECT ols_model('cost | log_offset', exp(3 + x / 4 + 0.7 * z), 'x', x) "
      "AS model FROM sample");
  const double truth =
      db.Number("SELECT sum(exp(3 + x / 4)) FROM sample") * std::exp(0.7 * 0.7 / 2);
  const double mean = db.Number("SELECT sum(fitted_mean(model, x)) FROM fit, sample");
  const double typical = db.Number("SELECT sum(fitted_typical(model, x)) FROM fit, sample");
  EXPECT_NEAR(mean / truth, 1, 0.01);
  EXPECT_NEAR(mean / db.Number("SELECT sum(exp(3 + x / 4 + 0.7 * z)) FROM sample"), 1, 0.01);
  // Low by e^-0.245 = 0.783, more than a fifth.
  EXPECT_NEAR(typical / truth, std::exp(-0.7 * 0.7 / 2), 0.01);
  EXPECT_NEAR(db.Number("SELECT fact(model, 'smearing') FROM fit"), std::exp(0.7 * 0.7 / 2), 0.01);
  std::printf("log-normal totals: mean %.4f, typical %.4f of the truth (theory 1, %.4f)\n",
              mean / truth, typical / truth, std::exp(-0.7 * 0.7 / 2));
}

// y = (10 + 2 x + 3 z)² has the mean (10 + 2 x)² + 9, which the way back forgets.
TEST_F(Simulated, TotalsOfASquareRootComeFromTheMean) {
  db.Run(
      "CREATE TABLE fit AS SELECT ols_model('cost | sqrt_offset', (10 + 2 * x + 3 * z) * (10 + 2 * "
      "x + 3 * z), 'x', x) AS model FROM sample WHERE 10 + 2 * x + 3 * z > 0");
  const double rows = db.Number("SELECT count(*) FROM sample");
  const double truth = db.Number("SELECT sum((10 + 2 * x) * (10 + 2 * x) + 9) FROM sample");
  const double mean = db.Number("SELECT sum(fitted_mean(model, x)) FROM fit, sample");
  const double typical = db.Number("SELECT sum(fitted_typical(model, x)) FROM fit, sample");
  EXPECT_NEAR(mean / truth, 1, 0.001);
  EXPECT_NEAR((truth - typical) / (9 * rows), 1, 0.1);
}

}  // namespace
}  // namespace ladderline::testing
