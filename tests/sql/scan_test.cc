// Choosing a re-expression: re_expression_scan and re_expression_rows through SQL.
#include <gmock/gmock.h>

#include <cmath>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using ::testing::ElementsAre;
using ::testing::HasSubstr;
using Json = nlohmann::ordered_json;

class ScanSql : public ::testing::Test {
 protected:
  ScanSql() {
    db.LoadCsv("trees", "boxcox/trees.csv");
    db.LoadCsv("wool", "boxcox/wool.csv");
    db.LoadCsv("ornstein", "boxcox/ornstein.csv");
  }
  // One figure of one candidate.
  double Figure(const std::string& scan, const std::string& spec, const std::string& name) {
    return db.Number("SELECT " + name + " FROM re_expression_rows((" + scan + ")) WHERE spec = '" +
                     spec + "'");
  }
  std::string First(const std::string& scan) {
    return db.Text("SELECT spec FROM re_expression_rows((" + scan + ")) WHERE rank = 1");
  }
  std::string Reading(const std::string& scan) {
    return db.Text("SELECT fact((" + scan + "), 'reading')");
  }
  Database db;
};

const std::string kWool =
    "SELECT re_expression_scan('cycles', cycles, 'len', len, 'amp', amp, 'load', load) FROM wool";
const std::string kOrnstein =
    "SELECT re_expression_scan('interlocks', interlocks, 'assets', assets, 'sector', sector, "
    "'nation', nation) FROM ornstein";

TEST_F(ScanSql, HasItsKeysAndColumns) {
  const Json scan = Json::parse(db.Text("SELECT re_expression_scan(Volume) FROM trees"));
  std::vector<std::string> keys;
  for (const auto& [key, value] : scan.items()) keys.push_back(key);
  EXPECT_THAT(keys, ElementsAre("rows", "missing", "outside", "reading", "candidates"));
  const auto columns =
      db.Rows("SELECT group_concat(name) FROM pragma_table_info('re_expression_rows')");
  EXPECT_EQ(*columns[0][0],
            "rank,spec,power,rows_used,rows_outside,skewness,excess_kurtosis,normal_correlation,"
            "normal_p,log_likelihood,aic,funnel_p,reading");
  EXPECT_EQ(db.Text("SELECT group_concat(spec) FROM (SELECT spec FROM re_expression_rows((SELECT "
                    "re_expression_scan(Volume) FROM trees)) WHERE spec NOT LIKE '%.%' ORDER BY "
                    "spec)"),
            "identity,log_offset,logit 0 100,negative_reciprocal,power_of -2,power_of "
            "3,sqrt_offset,square");
}

// A plain column's figures are those of the functions for one figure.
TEST_F(ScanSql, AgreesWithTheFunctionsForOneFigure) {
  const std::string scan = "SELECT re_expression_scan(Volume) FROM trees";
  const auto same = [&](const std::string& spec, const std::string& name, const std::string& of) {
    const double expected = db.Number("SELECT " + of + " FROM trees");
    EXPECT_NEAR(Figure(scan, spec, name), expected, 1e-11 * std::abs(expected)) << spec << name;
  };
  same("identity", "skewness", "skewness(Volume)");
  same("log_offset", "skewness", "skewness(log_offset(Volume))");
  same("power_of -2", "skewness", "skewness(power_of(Volume, -2))");
  same("square", "excess_kurtosis", "excess_kurtosis(square(Volume))");
  same("sqrt_offset", "normal_p", "fact(anderson_darling(sqrt_offset(Volume)), 'p_value')");
  const std::string lambda = db.Text("SELECT box_cox_lambda(Volume) FROM trees");
  EXPECT_NEAR(
      db.Number("SELECT power FROM re_expression_rows((" + scan + ")) WHERE spec LIKE 'box_cox %'"),
      std::stod(lambda), 1e-12);
  EXPECT_NEAR(db.Number("SELECT log_likelihood FROM re_expression_rows((" + scan +
                        ")) WHERE spec LIKE 'box_cox %'"),
              db.Number("SELECT fact(box_cox_profile(Volume), 'log_likelihood') FROM trees"), 1e-9);
}

TEST_F(ScanSql, LikelihoodsAreThoseOfModelsOnTheOriginalScale) {
  for (const std::string spec : {"identity", "log_offset", "square", "power_of -0.5"}) {
    const std::string model = "(SELECT ols_model('cycles | " + spec +
                              "', cycles, 'len', len, 'amp', amp, 'load', load) FROM wool)";
    EXPECT_NEAR(Figure(kWool, spec, "log_likelihood"),
                db.Number("SELECT fact(" + model + ", 'log_likelihood_original')"), 1e-9);
    EXPECT_NEAR(Figure(kWool, spec, "aic"), db.Number("SELECT fact(" + model + ", 'aic_original')"),
                1e-9);
  }
  EXPECT_NEAR(db.Number("SELECT aic + 2 * log_likelihood FROM re_expression_rows((" + kWool +
                        ")) WHERE spec LIKE 'box_cox %'"),
              2 * 6, 1e-9);
}

// tests/reference/boxcox/published.json, ornstein_ncv: R lmtest 0.9-40 bptest, studentized.
TEST_F(ScanSql, FunnelIsTheStudentizedTest) {
  EXPECT_NEAR(Figure(kOrnstein, "identity", "funnel_p"), 0.000115428986225, 1e-14);
}

TEST_F(ScanSql, WhatLosesRowsSaysSoAndComesLast) {
  EXPECT_GT(Figure(kOrnstein, "log_offset", "rows_outside"), 0);
  EXPECT_TRUE(std::isnan(Figure(kOrnstein, "log_offset", "aic")));
  const auto rows = db.Rows(
      "SELECT rows_outside > 0, reading, rows_used + rows_outside FROM "
      "re_expression_rows((" +
      kOrnstein + "))");
  bool lost = false;
  for (const auto& row : rows) {
    if (*row[0] == "1") {
      lost = true;
      EXPECT_THAT(*row[1], HasSubstr("Loses "));
    } else {
      EXPECT_FALSE(lost);
    }
    EXPECT_EQ(*row[2], db.Text("SELECT count(*) FROM ornstein"));
  }
  EXPECT_TRUE(lost);
}

TEST_F(ScanSql, ChoosesAsBoxAndCoxDid) {
  EXPECT_EQ(First(kWool), "log_offset");  // Box & Cox 1964, section 5: log cycles
  EXPECT_THAT(Reading(kWool), HasSubstr("Re-express cycles by log_offset: it keeps all 27 rows"));
}

TEST_F(ScanSql, LeavesAloneWhatNothingImproves) {
  // Normal scores themselves, moved to the right.
  const std::string scan =
      "SELECT re_expression_scan(z) FROM (SELECT 50 + (value + 0.0) AS z FROM "
      "(SELECT normal_score AS value FROM quantile_rows((SELECT "
      "quantile_pairs(Volume) FROM trees))))";
  EXPECT_EQ(First(scan), "identity");
  EXPECT_THAT(Reading(scan), HasSubstr("Leave the measure as it is: over 31 rows"));
}

TEST_F(ScanSql, CountsHaveTheirOwnCandidates) {
  const auto has = [&](const std::string& values, const std::string& spec) {
    return db.Number("SELECT count(*) FROM re_expression_rows((WITH v(x) AS (VALUES " + values +
                     ") SELECT re_expression_scan(x) FROM v)) WHERE spec LIKE '" + spec + "'") > 0;
  };
  const std::string counts = "(0), (0), (1), (3), (4), (9), (30), (2), (7)";
  EXPECT_TRUE(has(counts, "log_offset 1"));
  EXPECT_TRUE(has(counts, "sqrt_offset 0.375"));
  EXPECT_TRUE(has(counts, "asinh_scaled %"));
  EXPECT_TRUE(has(counts, "yeo_johnson %"));
  EXPECT_FALSE(has(counts, "box_cox %"));
  EXPECT_FALSE(has(counts, "logit%"));
  EXPECT_TRUE(has("(0), (0), (0.1), (0.3), (1.4), (9.5)", "log_offset %"));
  EXPECT_FALSE(has("(0.1), (0.3), (1.4), (9.5)", "log_offset %"));
  const std::string scores = "(99), (97), (98), (100), (95), (60), (88), (93), (75)";
  EXPECT_TRUE(has(scores, "logit 0 100 0.005"));
  EXPECT_TRUE(has(scores, "log_reflected 101"));
  EXPECT_TRUE(has("(0.5), (0.25), (0.75)", "logit"));
  EXPECT_FALSE(has("(0.5), (0.25), (1.75)", "logit%"));
}

TEST_F(ScanSql, RowsWithoutAShapeAreAnsweredInWords) {
  const auto reading = [&](const std::string& values) {
    return Reading("WITH v(x) AS (VALUES " + values + ") SELECT re_expression_scan(x) FROM v");
  };
  EXPECT_EQ(reading("(NULL)"), "There is nothing to choose: no rows.");
  EXPECT_EQ(reading("(3)"), "There is nothing to choose: needs 3 rows, has 1.");
  EXPECT_EQ(reading("(3), (3), (3), (NULL)"), "There is nothing to choose: all 3 values are 3.");
  EXPECT_EQ(reading("(3), (4), (3), (4)"),
            "There is nothing to choose: only two values occur, which no re-expression brings into "
            "another shape.");
  EXPECT_EQ(
      db.Rows("SELECT * FROM re_expression_rows((SELECT re_expression_scan(7) FROM trees))").size(),
      0u);
  EXPECT_EQ(
      Reading("SELECT re_expression_scan('y', Volume, 'x', Girth) FROM trees WHERE rowid < 3"),
      "There is nothing to choose: needs 3 rows, has 2.");
  EXPECT_EQ(Reading("SELECT re_expression_scan('y', i * i, 'x', i) FROM (SELECT rowid AS i FROM "
                    "trees)"),
            "Re-express y by sqrt_offset: it keeps all 31 rows, and the predictors then fit "
            "exactly.");
}

// The ends of the range: figures or NULL, and always an order.
TEST_F(ScanSql, AnyNumbersGiveAScan) {
  for (const std::string values :
       {"(1e300), (1e-300), (1.0), (5e-324), (1.7e308)", "(-1e308), (1e308), (0), (1), (2)",
        "(-5), (-1), (-7), (-9), (-30)", "(1e9 + 1), (1e9 + 2), (1e9 + 4), (1e9 + 9)",
        "(0), (0), (0), (0), (0), (1), (2)", "(1), (2), (3)", "(1e-310), (2e-310), (9e-310)"}) {
    const std::string scan =
        "WITH v(x) AS (VALUES " + values + ") SELECT re_expression_scan(x) FROM v";
    EXPECT_THAT(Reading(scan), HasSubstr(" row")) << values;
    EXPECT_EQ(db.Number("SELECT max(rank) FROM re_expression_rows((" + scan + "))"),
              db.Number("SELECT count(DISTINCT spec) FROM re_expression_rows((" + scan + "))"));
    EXPECT_FALSE(std::isnan(Figure(scan, "identity", "rows_used"))) << values;
  }
}

TEST_F(ScanSql, PredictorsOutOfRangeAreSaidToBe) {
  EXPECT_EQ(Reading("SELECT re_expression_scan('v', Volume, 'g', (Girth - 12) * 1e306) FROM trees"),
            "There is nothing to choose: numbers too large or too small to fit; rescale them.");
}

TEST_F(ScanSql, BadCallsAreRefusedInWords) {
  EXPECT_EQ(
      db.ErrorOf("SELECT re_expression_scan('y | log_offset', Volume, 'x', Girth) FROM trees"),
      "re_expression_scan: the response must be raw, got label 'y | log_offset'; the "
      "re-expression is what is looked for");
  EXPECT_EQ(db.ErrorOf("SELECT re_expression_scan('n/a')"),
            "re_expression_scan: x must be a number, got text 'n/a'");
  EXPECT_EQ(db.ErrorOf("SELECT * FROM re_expression_rows('{\"candidates\": [3]}')"),
            "re_expression_rows: scan must be a result of re_expression_scan, got text "
            "'{\"candidates\": [3]}'");
}

TEST_F(ScanSql, AMovingFrameIsAsComputedAfresh) {
  EXPECT_EQ(
      db.Rows("SELECT re_expression_scan('v', Volume, 'g', Girth) OVER (ORDER BY rowid ROWS 9 "
              "PRECEDING) FROM trees ORDER BY rowid"),
      db.Rows("SELECT (SELECT re_expression_scan('v', Volume, 'g', Girth) FROM trees AS f "
              "WHERE f.rowid BETWEEN s.rowid - 9 AND s.rowid) FROM trees AS s ORDER BY rowid"));
}

}  // namespace
}  // namespace ladderline::testing
