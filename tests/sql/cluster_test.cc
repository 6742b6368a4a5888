// Cluster errors through SQL alone, against R's sandwich 3.0 on open data, and what bad input gets.
#include <gmock/gmock.h>

#include <cmath>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using nlohmann::json;
using ::testing::HasSubstr;

constexpr double kDigits = 10;

void ExpectColumn(const Database& db, const std::string& sql, const json& expected) {
  const auto rows = db.Rows(sql);
  ASSERT_EQ(rows.size(), expected.size()) << sql;
  for (size_t i = 0; i < rows.size(); ++i) {
    const double got = rows[i][0] ? std::stod(*rows[i][0]) : std::nan("");
    EXPECT_TRUE(Agrees(expected[i].get<double>(), got, kDigits)) << sql << " row " << i;
  }
}

// cluster_errors.json, the model kept in table m. The errors are the model's own, as a cluster
// column was given.
void ExpectCase(const Database& db, const std::string& name) {
  const json file = ReadJson("cluster_errors.json");
  const json& truth = file["cases"][name];
  for (const std::string figure : {"coefficient", "standard_error", "t", "p_value", "low", "high"})
    ExpectColumn(db, "SELECT " + figure + " FROM m, model_terms(m.model, 0.9)", truth[figure]);
  ExpectColumn(db, "SELECT standard_error FROM m, model_terms(m.model, 0.9, 'cluster')",
               truth["standard_error"]);
  EXPECT_EQ(db.Text("SELECT group_concat(DISTINCT errors) FROM m, model_terms(m.model)"),
            "cluster");
}

void ExpectFirstRow(const Database& db, const std::string& name, const std::string& inputs) {
  const json limits = ReadJson("cluster_errors.json")["cases"][name]["first_row"];
  for (const auto& [function, limit] : {std::pair{"typical_low", 0}, std::pair{"typical_high", 1}})
    EXPECT_TRUE(
        Agrees(limits[static_cast<size_t>(limit)].get<double>(),
               db.Number(std::string("SELECT ") + function + "(model, 0.9, " + inputs + ") FROM m"),
               kDigits));
}

TEST(Clusters, ErrorsAndLimitsAgreeWithR) {
  const Database db;
  db.LoadCsv("trees", "boxcox/trees.csv");
  db.Run(
      "CREATE TABLE m AS SELECT ols_model('Volume', Volume, 'Girth', Girth, 'Height', Height, "
      "'stand | cluster', Height) AS model FROM trees");
  ExpectCase(db, "trees");
  ExpectFirstRow(db, "trees", "8.3, 70");
}

TEST(Clusters, WithoutInterceptAgreeWithR) {
  const Database db;
  db.LoadCsv("trees", "boxcox/trees.csv");
  db.Run(
      "CREATE TABLE m AS SELECT ols_model('Volume', Volume, 'Girth', Girth, 'Height', Height, "
      "'stand | cluster', 'of ' || Height, 'intercept | option', 'none') AS model FROM trees");
  ExpectCase(db, "trees_no_intercept");
  ExpectFirstRow(db, "trees_no_intercept", "8.3, 70");
}

TEST(Clusters, WeightsAgreeWithR) {
  const Database db;
  db.LoadCsv("trees", "boxcox/trees.csv");
  db.Run(
      "CREATE TABLE m AS SELECT ols_model('Volume | sqrt_offset', Volume, 'Girth', Girth, "
      "'Height', Height, 'w | weight', Height / 50.0, 'stand | cluster', CAST(Girth AS INTEGER)) "
      "AS model "
      "FROM trees");
  ExpectCase(db, "trees_weighted");
}

TEST(Clusters, CategoriesAndTextKeysAgreeWithR) {
  const Database db;
  db.LoadCsv("ornstein", "boxcox/ornstein.csv");
  db.Run(
      "CREATE TABLE m AS SELECT ols_model('interlocks | log_offset 1', interlocks, "
      "'assets | log_offset', assets, 'nation', nation, 'sector | cluster', sector) AS model FROM "
      "ornstein");
  ExpectCase(db, "ornstein");
}

class ClusterInput : public ::testing::Test {
 protected:
  ClusterInput() {
    db_.Run(
        "CREATE TABLE t(id, cost, age, trade, district);"
        "INSERT INTO t VALUES (1, 120, 10, 'Damp', 3), (2, 300, 40, 'Roof', '3'),"
        "(3, 90, 5, 'Damp', 4), (4, 200, 20, 'Roof', 4), (5, 150, 33, 'Damp', 'x'),"
        "(6, 210, 31, 'Damp', NULL), (7, 110, 12, 'Lock', 4), (8, 240, 30, 'Lock', 4),"
        "(9, 95, 7, 'Damp', 3)");
  }
  std::string Terms(const std::string& figure, const std::string& arguments,
                    const std::string& errors = "") const {
    return db_.Text("SELECT group_concat(coalesce(" + figure +
                    ", 'NULL'), '; ') FROM (SELECT ols_model('cost', cost, 'age', age" + arguments +
                    ") AS model FROM t) f, model_terms(f.model" + errors + ") t");
  }
  Database db_;
};

TEST_F(ClusterInput, NumbersAndTextsThatLookAlikeAreOneClusterAndMissingOnesDropTheRow) {
  const std::string call =
      "(SELECT ols_model('cost', cost, 'age', age, 'd | cluster', district) FROM t)";
  EXPECT_EQ(db_.Number("SELECT fact(" + call + ", 'rows_fitted')"), 8);
  EXPECT_EQ(db_.Number("SELECT json_extract(" + call + ", '$.clusters')"), 3);
  EXPECT_EQ(db_.Text("SELECT role || ' ' || missing FROM model_columns(" + call +
                     ") WHERE column_name = 'd'"),
            "cluster 1");
}

TEST_F(ClusterInput, FewClustersAreCautioned) {
  EXPECT_EQ(Terms("note", ", 'd | cluster', district"),
            "only 3 clusters: limits may be too narrow; only 3 clusters: limits may be too narrow");
  EXPECT_EQ(Terms("note", ", 'd | cluster', district", ", 0.95, 'hc3'"), "NULL; NULL");
}

TEST_F(ClusterInput, OneClusterGivesNoErrorsAndSaysSo) {
  EXPECT_EQ(Terms("t.standard_error", ", 'd | cluster', 'all'"), "NULL; NULL");
  EXPECT_EQ(Terms("t.p_value", ", 'd | cluster', 'all'"), "NULL; NULL");
  EXPECT_THAT(Terms("t.note", ", 'd | cluster', 'all'"), HasSubstr("all rows are of one cluster"));
  EXPECT_THAT(Terms("t.standard_error", ", 'd | cluster', 'all'", ", 0.95, 'classical'"),
              ::testing::Not(HasSubstr("NULL")));
  EXPECT_TRUE(db_.IsNull(
      "SELECT typical_low(ols_model('cost', cost, 'age', age, 'd | cluster', 1), 0.9, 20) FROM t"));
}

// The scatter of a single case is judged from all residuals, however few the clusters: two of them
// make a critical value of 12.7 of the fit's error, which must not multiply the residual sd.
TEST(Clusters, CaseLimitsKeepTheResidualDegreesOfFreedom) {
  const Database db;
  db.LoadCsv("trees", "boxcox/trees.csv");
  db.Run(
      "CREATE TABLE m AS SELECT ols_model('Volume', Volume, 'half | cluster', Girth > 12.9) AS "
      "model FROM trees");
  const double error =
      db.Number("SELECT standard_error FROM m, model_terms(m.model) WHERE term = 'intercept'");
  const double sd = db.Number("SELECT fact(model, 'residual_sd') FROM m");
  const double t = 2.0422724563012373;  // SciPy 1.10.1: scipy.stats.t.ppf(0.975, 30)
  EXPECT_NEAR(db.Number("SELECT case_high(model, 0.95) - fitted_typical(model) FROM m"),
              t * std::hypot(error, sd), 1e-9 * sd);
}

TEST_F(ClusterInput, LevelOfOneClusterIsNoted) {
  EXPECT_THAT(db_.Text("SELECT note FROM (SELECT ols_model('cost', cost, 'trade', trade, "
                       "'d | cluster', district) AS model FROM t) f, model_terms(f.model) WHERE "
                       "term = 'trade is Lock'"),
              HasSubstr("found in one cluster alone"));
}

TEST_F(ClusterInput, ErrorsOptionGovernsAndNeedsTheColumn) {
  EXPECT_EQ(Terms("errors", ", 'd | cluster', district, 'errors | option', 'hc1'"), "hc1; hc1");
  EXPECT_EQ(
      Terms("errors", ", 'd | cluster', district, 'errors | option', 'hc1'", ", NULL, 'cluster'"),
      "cluster; cluster");
  EXPECT_THAT(db_.ErrorOf("SELECT ols_model('cost', cost, 'age', age, 'errors | option', "
                          "'cluster') FROM t"),
              HasSubstr("write 'district | cluster'"));
  EXPECT_THAT(db_.ErrorOf("SELECT * FROM (SELECT ols_model('cost', cost, 'age', age) AS model FROM "
                          "t) f, model_terms(f.model, 0.9, 'cluster')"),
              HasSubstr("must be one of classical, hc0, hc1, hc2, hc3, got text 'cluster'"));
}

TEST_F(ClusterInput, MistakesAreNamed) {
  EXPECT_EQ(
      db_.ErrorOf("SELECT ols_model('cost', cost, 'd | cluster', x'0102') FROM t"),
      "ols_model: d must be a number or text, got a BLOB of 2 bytes (row 1); hex() makes text "
      "of it");
  EXPECT_THAT(db_.ErrorOf("SELECT ols_model('cost', cost, 'd | cluster', 1, 'e | cluster', 2) "
                          "FROM t"),
              HasSubstr("second cluster"));
}

TEST_F(ClusterInput, MovingFramesAgreeWithTheSameRowsFitAfresh) {
  const std::string call =
      "ols_model('cost', cost, 'age', age, 'd | cluster', district, 'o | order', -id, 'k | key', "
      "id)";
  const auto moving =
      db_.Rows("SELECT id, " + call + " OVER (ORDER BY id ROWS 4 PRECEDING) FROM t ORDER BY id");
  for (const auto& row : moving) {
    EXPECT_EQ(*row[1], db_.Text("SELECT " + call + " FROM t WHERE id BETWEEN " + *row[0] +
                                " - 4 AND " + *row[0]))
        << "row " << *row[0];
  }
}

}  // namespace
}  // namespace ladderline::testing
