// box_cox_lambda, yeo_johnson_lambda and their profiles as SQL sees them. The figures themselves
// are tested in tests/core.
#include <gmock/gmock.h>

#include "core/support/distributions.h"
#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using Json = nlohmann::ordered_json;

Json ProfileOf(const Database& db, const std::string& sql) { return Json::parse(db.Text(sql)); }

class Lambda : public ::testing::Test {
 protected:
  void SetUp() override { db.LoadCsv("trees", "boxcox/trees.csv"); }
  Database db;
};

// tests/reference/boxcox/published.json, trees_intercept_only: recomputed there at 70 digits.
TEST_F(Lambda, BoxCoxOfTheTrees) {
  EXPECT_NEAR(db.Number("SELECT box_cox_lambda(Volume) FROM trees"), -0.07476604337992048634, 1e-9);
  const Json profile = ProfileOf(db, "SELECT box_cox_profile(Volume) FROM trees");
  EXPECT_NEAR(profile["lambda"].get<double>(), -0.07476604337992048634, 1e-9);
  EXPECT_NEAR(profile["low"].get<double>(), -0.703222933214803, 1e-7);
  EXPECT_NEAR(profile["high"].get<double>(), 0.565016587454896, 1e-7);
  EXPECT_EQ(profile["level"], 0.95);
  EXPECT_EQ(profile["rows"], 31);
  EXPECT_EQ(profile["missing"], 0);
  EXPECT_EQ(profile["outside"], 0);
  EXPECT_EQ(profile["simple"], 0);
  EXPECT_EQ(profile["simple_spec"], "log_offset");
  EXPECT_EQ(profile["at_limit"], 0);
}

// published.json, darwin_plants_yeo_johnson: SciPy 1.10.1, and λ printed by Yeo & Johnson (2000).
TEST_F(Lambda, YeoJohnsonOfDarwinsPlants) {
  db.Run(
      "CREATE TABLE plants(x); INSERT INTO plants VALUES (6.1), (-8.4), (1.0), (2.0), (0.7), "
      "(2.9), "
      "(3.5), (5.1), (1.8), (3.6), (7.0), (3.0), (9.3), (7.5), (-6.0)");
  EXPECT_NEAR(db.Number("SELECT yeo_johnson_lambda(x) FROM plants"), 1.305274713696517, 1e-5);
  const Json profile = ProfileOf(db, "SELECT yeo_johnson_profile(x) FROM plants");
  EXPECT_NEAR(profile["p_identity"].get<double>(), 0.04881840034413641, 1e-9);
  EXPECT_EQ(profile["rows"], 15);
  EXPECT_EQ(profile["simple_spec"].get<std::string>().substr(0, 12), "yeo_johnson ");
}

TEST_F(Lambda, ProfileHasItsKeysInOrder) {
  for (const char* function : {"box_cox_profile", "yeo_johnson_profile"}) {
    for (const char* rows : {"trees", "trees WHERE 0"}) {
      const Json profile =
          ProfileOf(db, std::string("SELECT ") + function + "(Volume) FROM " + rows);
      std::vector<std::string> keys;
      for (const auto& item : profile.items()) keys.push_back(item.key());
      EXPECT_THAT(keys, ::testing::ElementsAre("lambda", "low", "high", "level", "log_likelihood",
                                               "rows", "missing", "outside", "simple",
                                               "simple_spec", "p_identity", "p_log", "at_limit"));
    }
  }
}

TEST_F(Lambda, RowsMissingAndOutsideAreCounted) {
  db.Run(
      "CREATE TABLE dirty(x); INSERT INTO dirty VALUES (1), (2.5), (' 7 '), (NULL), (''), ('  '), "
      "(0), (-3), (30)");
  Json profile = ProfileOf(db, "SELECT box_cox_profile(x) FROM dirty");
  EXPECT_EQ(profile["rows"], 4);
  EXPECT_EQ(profile["missing"], 3);
  EXPECT_EQ(profile["outside"], 2);
  profile = ProfileOf(db, "SELECT yeo_johnson_profile(x) FROM dirty");
  EXPECT_EQ(profile["rows"], 6);
  EXPECT_EQ(profile["missing"], 3);
  EXPECT_EQ(profile["outside"], 0);
}

TEST_F(Lambda, WithoutSpreadThereIsNoFigure) {
  for (const char* values : {"(NULL)", "(5)", "(5), (5), (5)", "(''), (NULL)"}) {
    const std::string from = std::string("(column1) FROM (VALUES ") + values + ")";
    for (const char* family : {"box_cox", "yeo_johnson"}) {
      const std::string call = std::string("SELECT ") + family;
      EXPECT_TRUE(db.IsNull(call + "_lambda" + from)) << values;
      const Json profile = ProfileOf(db, call + "_profile" + from);
      for (const char* key : {"lambda", "low", "high", "log_likelihood", "simple", "simple_spec",
                              "p_identity", "p_log", "at_limit"})
        EXPECT_TRUE(profile[key].is_null()) << key;
    }
  }
  EXPECT_TRUE(db.IsNull("SELECT box_cox_lambda(Volume) FROM trees WHERE 0"));
  EXPECT_TRUE(db.IsNull("SELECT box_cox_lambda(column1) FROM (VALUES (0), (-1), (-2))"));
}

TEST_F(Lambda, AnOpenLimitIsNullAndAHeldMaximumSaysSo) {
  const Json two = ProfileOf(db, "SELECT box_cox_profile(column1) FROM (VALUES (3), (5))");
  EXPECT_TRUE(two["low"].is_null() && two["high"].is_null());
  EXPECT_EQ(two["at_limit"], 0);
  const Json held =
      ProfileOf(db, "SELECT box_cox_profile(column1) FROM (VALUES (1), (1), (1), (1), (2))");
  EXPECT_EQ(held["lambda"], -5);
  EXPECT_EQ(held["at_limit"], 1);
  EXPECT_TRUE(held["low"].is_null());
}

TEST_F(Lambda, GroupsAndFiltersAreFitAlone) {
  db.Run("CREATE TABLE halves AS SELECT rowid <= 15 AS half, Volume FROM trees");
  for (const char* function : {"box_cox_lambda", "yeo_johnson_lambda"}) {
    const std::string call = std::string(function) + "(Volume)";
    const auto groups = db.Rows("SELECT half, " + call + " FROM halves GROUP BY half");
    ASSERT_EQ(groups.size(), 2u);
    for (const auto& group : groups) {
      EXPECT_EQ(group[1],
                db.Rows("SELECT " + call + " FROM halves WHERE half = " + *group[0])[0][0]);
      EXPECT_EQ(group[1], db.Rows("SELECT " + call + " FILTER (WHERE half = " + *group[0] +
                                  ") FROM halves")[0][0]);
    }
    EXPECT_NE(groups[0][1], groups[1][1]);
  }
}

TEST_F(Lambda, AMovingFrameIsAsComputedAfresh) {
  db.Run(
      "CREATE TABLE series AS SELECT rowid AS i, CASE WHEN rowid % 7 = 0 THEN NULL WHEN rowid % 5 "
      "= 0 "
      "THEN -Volume ELSE Volume END AS x FROM trees");
  for (const char* function :
       {"box_cox_lambda", "box_cox_profile", "yeo_johnson_lambda", "yeo_johnson_profile"}) {
    const std::string name = function;
    const auto moving =
        db.Rows("SELECT " + name + "(x) OVER (ORDER BY i ROWS 9 PRECEDING) FROM series ORDER BY i");
    const auto afresh =
        db.Rows("SELECT (SELECT " + name +
                "(x) FROM series AS f WHERE f.i BETWEEN s.i - 9 AND s.i) FROM series "
                "AS s ORDER BY s.i");
    EXPECT_EQ(moving, afresh) << name;
  }
}

TEST_F(Lambda, AnEmptyFrameHasNoLambda) {
  EXPECT_EQ(
      db.Rows("SELECT box_cox_lambda(Volume) OVER (ORDER BY rowid ROWS BETWEEN 5 FOLLOWING AND "
              "1 FOLLOWING) FROM trees LIMIT 1")[0][0],
      std::nullopt);
}

TEST_F(Lambda, WhatIsNoNumberIsAnError) {
  const std::string from = "(column1) FROM (VALUES (1), (2), ";
  EXPECT_EQ(db.ErrorOf("SELECT box_cox_lambda" + from + "('n/a'))"),
            "box_cox_lambda: x must be a number, got text 'n/a'");
  EXPECT_EQ(db.ErrorOf("SELECT yeo_johnson_profile" + from + "(x'00'))"),
            "yeo_johnson_profile: x must be a number, got a BLOB of 1 bytes");
  EXPECT_EQ(db.ErrorOf("SELECT box_cox_profile" + from + "(9e999))"),
            "box_cox_profile: x must be a number, got an infinity");
  EXPECT_NE(db.ErrorOf("SELECT box_cox_lambda()"), "(no error)");
}

// tests/reference/boxcox/published.json, `exact` of wool and poisons: recomputed at 70 digits.
TEST_F(Lambda, LabelledPairsGiveThePowerGivenThePredictors) {
  db.LoadCsv("wool", "boxcox/wool.csv");
  db.LoadCsv("poisons", "boxcox/poisons.csv");
  const std::string wool = "('cycles', cycles, 'len', len, 'amp', amp, 'load', load) FROM wool";
  EXPECT_NEAR(db.Number("SELECT box_cox_lambda" + wool), -0.05914869813051985496, 1e-9);
  const Json profile = ProfileOf(db, "SELECT box_cox_profile" + wool);
  EXPECT_NEAR(profile["low"].get<double>(), -0.182502855177651, 1e-7);
  EXPECT_NEAR(profile["high"].get<double>(), 0.064635810232836, 1e-7);
  EXPECT_EQ(profile["simple_spec"], "log_offset");
  EXPECT_EQ(profile["rows"], 27);
  EXPECT_FALSE(profile.contains("note"));
  EXPECT_NEAR(db.Number("SELECT box_cox_lambda('time', time, 'poison | category', poison, "
                        "'treat', treat) FROM poisons"),
              -0.75016253430689385806, 1e-9);
  // Alone among its labels, a response is a plain column.
  EXPECT_NEAR(db.Number("SELECT box_cox_lambda('time', time) FROM poisons"),
              db.Number("SELECT box_cox_lambda(time) FROM poisons"), 1e-9);
}

// tests/reference/power_car.json: car's optimiser stops within about 1e-5 of the maximum, and its
// likelihood ratio is flat there.
TEST_F(Lambda, LabelledPairsAgreeWithCar) {
  const nlohmann::json car = ReadJson("power_car.json");
  for (const char* name : {"journals", "bondyield", "ornstein"})
    db.LoadCsv(name, std::string("boxcox/") + name + ".csv");
  const std::pair<const char*, const char*> calls[] = {
      {"journals", "box_cox_profile('subs', subs, 'price', price, 'citations', citations)"},
      {"bondyield",
       "yeo_johnson_profile('Y', Y, 'MOOD', MOOD, 'EPI', EPI, 'EXP', EXP, 'RUS', RUS)"},
      {"ornstein",
       "yeo_johnson_profile('interlocks', interlocks, 'assets', assets, 'sector | category', "
       "sector, 'nation | category', nation)"}};
  for (const auto& [data, call] : calls) {
    SCOPED_TRACE(data);
    const Json profile = ProfileOf(db, std::string("SELECT ") + call + " FROM " + data);
    EXPECT_NEAR(profile["lambda"].get<double>(), car[data]["lambda"].get<double>(), 1e-4);
    const double p = profile["p_identity"], ratio = car[data]["lrt_lambda_1"];
    EXPECT_NEAR(p, ChiSquareUpperTail(ratio, 1), 1e-5 * p + 1e-6 * (ratio < 1));
  }
}

// trees_loglog: a label's transform of a predictor is applied.
TEST_F(Lambda, PredictorsMayBeReExpressed) {
  EXPECT_NEAR(db.Number("SELECT box_cox_lambda('Volume', Volume, 'Height | log_offset', Height, "
                        "'Girth | log_offset', Girth) FROM trees"),
              -0.06731681243117202533, 1e-9);
}

TEST_F(Lambda, LabelledRowsAreCounted) {
  const Json profile = ProfileOf(
      db,
      "SELECT box_cox_profile('y', column1, 'x', column2, 'known | present', column3) FROM (VALUES "
      "(1, 2, 1), (3, 5, 1), (7, 1, 1), (2, 2, 1), (0, 4, 1), (NULL, 4, 1), (5, 5, NULL))");
  EXPECT_EQ(profile["rows"], 4);
  EXPECT_EQ(profile["missing"], 2);
  EXPECT_EQ(profile["outside"], 1);
  const Json any_sign = ProfileOf(
      db,
      "SELECT yeo_johnson_profile('y', column1, 'x', column2) FROM (VALUES (1, 2), (3, 5), "
      "(7, 1), (-2, 2), (0, 4))");
  EXPECT_EQ(any_sign["rows"], 5);
  EXPECT_EQ(any_sign["outside"], 0);
}

TEST_F(Lambda, WhatPairsCannotTellIsSaid) {
  const auto note = [&](const std::string& response, const std::string& predictor,
                        const std::string& rows) {
    const Json profile =
        ProfileOf(db, "WITH n(i) AS (VALUES " + rows + ") SELECT box_cox_profile('y', " + response +
                          ", 'x', " + predictor + ") FROM n");
    return profile.contains("note") ? profile["note"].get<std::string>() : "";
  };
  const std::string six = "(1), (2), (3), (4), (5), (6)";
  EXPECT_EQ(note("7", "i", six), "all values of the response are equal");
  EXPECT_EQ(note("i * i", "i", "(1), (2)"), "needs 3 rows, has 2");
  EXPECT_EQ(note("i * i", "i", "(1)"), "needs 2 rows, has 1");
  EXPECT_EQ(note("-i", "i", six),
            "no complete rows among 6 rows offered; y is outside its domain in 6");
  EXPECT_EQ(note("1 + i % 2", "CAST('g' || (i % 2) AS TEXT)", six),
            "the predictors fit the response exactly at every power");
  EXPECT_EQ(note("(2 + 3 * i) * (2 + 3 * i)", "i", six),
            "the predictors fit the response exactly at this power");
  EXPECT_EQ(note("i * 1e-300", "i % 3", six), "");
  EXPECT_EQ(note("i * i", "(i % 4) * 1e300", six),
            "numbers too large or too small to fit; rescale them");
  // Two values, and columns that repeat each other, have a λ like any other rows.
  EXPECT_EQ(note("1 + (i > 3)", "i % 3", six), "");
  const std::string from = " FROM (SELECT rowid AS i, * FROM trees)";
  EXPECT_NEAR(db.Number("SELECT box_cox_lambda('v', Volume, 'g', Girth, 'h', 2 * Girth)" + from),
              db.Number("SELECT box_cox_lambda('v', Volume, 'g', Girth)" + from), 1e-9);
}

TEST_F(Lambda, AnExactFitHasItsPowerAndNoLikelihood) {
  const Json exact =
      ProfileOf(db,
                "WITH RECURSIVE n(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM n WHERE i < 30) "
                "SELECT box_cox_profile('y', 1.0 / (2 + 3 * i), 'x', i) FROM n");
  EXPECT_EQ(exact["lambda"], -1);
  EXPECT_EQ(exact["low"], -1);
  EXPECT_EQ(exact["high"], -1);
  EXPECT_EQ(exact["simple_spec"], "negative_reciprocal");
  EXPECT_TRUE(exact["log_likelihood"].is_null());
  EXPECT_EQ(exact["p_identity"], 0);
}

TEST_F(Lambda, OptionsOfPairs) {
  const std::string pairs = "('v', Volume, 'g', Girth, ", from = ") FROM trees";
  const Json wide =
      ProfileOf(db, "SELECT box_cox_profile" + pairs + "'level | option', 0.99" + from);
  const Json usual =
      ProfileOf(db, "SELECT box_cox_profile" + pairs + "'name | option', 'v'" + from);
  EXPECT_EQ(wide["level"], 0.99);
  EXPECT_LT(wide["low"].get<double>(), usual["low"].get<double>());
  EXPECT_EQ(db.ErrorOf("SELECT box_cox_profile" + pairs + "'intercept | option', 'none'" + from),
            "box_cox_profile: option intercept must be 'fitted', got 'none'; without an intercept "
            "the answer would depend on the unit of the response");
  EXPECT_EQ(
      db.ErrorOf("SELECT yeo_johnson_lambda('v | log_offset 1', Volume, 'g', Girth) FROM trees"),
      "yeo_johnson_lambda: the response must be raw, got label 'v | log_offset 1'; the power "
      "is what is looked for");
  EXPECT_EQ(db.ErrorOf("SELECT box_cox_lambda(Volume, Girth) FROM trees"),
            "box_cox_lambda: label 1 must be text, got 10.3; write labels in single quotes");
  EXPECT_EQ(db.ErrorOf("SELECT box_cox_lambda('v', Volume, 'g') FROM trees"),
            "box_cox_lambda: takes labels and values in pairs, got 3 arguments");
  EXPECT_EQ(db.ErrorOf("SELECT box_cox_lambda() FROM trees"),
            "box_cox_lambda: takes (x or label, value, …), got 0 arguments");
}

TEST_F(Lambda, WorksInAView) {
  db.Run("CREATE VIEW power AS SELECT box_cox_lambda(Volume) AS lambda FROM trees");
  EXPECT_EQ(db.Rows("SELECT lambda FROM power"),
            db.Rows("SELECT box_cox_lambda(Volume) FROM trees"));
}

// 300 orders of magnitude, and more rows than a search starts from a sample with.
TEST_F(Lambda, LongAndWideColumns) {
  EXPECT_FALSE(db.IsNull(
      "SELECT box_cox_lambda(column1) FROM (VALUES (1e-150), (1e-3), (1.0), (1e9), (1e150))"));
  // 2 k + 1 for every k below 100,000: the same shares in any order.
  const std::string odd =
      "WITH RECURSIVE n(k) AS (SELECT 0 UNION ALL SELECT k + 1 FROM n WHERE k < 99999) "
      "SELECT box_cox_lambda(1 + 2 * (k * 7919 % 100000)) FROM n";
  const std::string ordered =
      "WITH RECURSIVE n(k) AS (SELECT 0 UNION ALL SELECT k + 1 FROM n WHERE k < 99999) "
      "SELECT box_cox_lambda(1 + 2 * k) FROM n";
  EXPECT_NEAR(db.Number(odd), db.Number(ordered), 1e-10);
}

}  // namespace
}  // namespace ladderline::testing
