// The demo's views for dashboards and its kept models: figures recomputed by SQLite alone.
#include <gmock/gmock.h>
#include <unistd.h>

#include <filesystem>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using ::testing::HasSubstr;

class DemoViews : public ::testing::Test {
 protected:
  static void SetUpTestSuite() {
    db_ = new Database;
    db_->Run(ReadFile("examples/make_database.sql"));
    for (const auto& row : db_->Rows(Statements("examples/10_views_for_dashboards.sql")))
      for (const auto& cell : row)
        if (cell) *shown_ += *cell + "\n";
    db_->Run(Statements("examples/11_keep_models.sql"));
  }
  static void TearDownTestSuite() { delete db_; }

  static Database* db_;
  static std::string* shown_;
};
Database* DemoViews::db_ = nullptr;
std::string* DemoViews::shown_ = new std::string;

TEST_F(DemoViews, IndexesOnReExpressionsAreUsed) {
  EXPECT_THAT(*shown_, HasSubstr("USING INDEX repair_cost_log (log_cost>?)"));
  EXPECT_THAT(*shown_, HasSubstr("USING INDEX repair_cost_district (district=? AND <expr>>?)"));
}

TEST_F(DemoViews, ReExpressedColumnsAreThoseOfSqlitesOwnLogarithm) {
  EXPECT_LT(db_->Number("SELECT max(abs(log_cost - ln(cost + 20))) FROM repair_scaled"), 1e-14);
  EXPECT_EQ(db_->Text("SELECT count(*) FROM repair_scaled WHERE (log_days IS NULL) <> "
                      "(days_open IS NULL)"),
            "0");
}

TEST_F(DemoViews, WeeksWithoutCasesCountAsZero) {
  EXPECT_EQ(db_->Text("SELECT count(*) = 8 * (SELECT count(*) FROM week) FROM week_count"), "1");
  EXPECT_EQ(db_->Text("SELECT sum(cases) = (SELECT count(*) FROM repair WHERE reported BETWEEN "
                      "(SELECT min(monday) FROM week) AND (SELECT date(max(monday), '6 days') FROM "
                      "week)) FROM week_count"),
            "1");
}

TEST_F(DemoViews, AWeekIsComparedWithTheYearBeforeItAndWithItsSeason) {
  // The same figures from SQLite's own sums, the dates written out: the 52 weeks before
  // 2023-06-12, and the five nearest to it a year earlier.
  const auto sums = [](const std::string& from, const std::string& to) {
    return "(SELECT count(*) AS n, sum(cases) AS s, sum(cases * cases) AS q FROM week_count WHERE "
           "trade = 'Damp' AND monday BETWEEN '" +
           from + "' AND '" + to + "')";
  };
  const std::string mean = "1.0 * s / n", sd = "sqrt((q - 1.0 * s * s / n) / (n - 1))";
  const std::string alert = " FROM week_alert WHERE trade = 'Damp' AND monday = '2023-06-12'";
  const std::string year = sums("2022-06-13", "2023-06-05"),
                    season = sums("2022-05-30", "2022-06-27");
  ASSERT_EQ(db_->Text("SELECT n FROM " + year), "52");
  ASSERT_EQ(db_->Text("SELECT n FROM " + season), "5");
  const double cases = db_->Number("SELECT cases" + alert);
  const auto z = [&](const std::string& of) {
    return (cases - db_->Number("SELECT " + mean + " FROM " + of)) /
           db_->Number("SELECT " + sd + " FROM " + of);
  };
  EXPECT_NEAR(db_->Number("SELECT usual" + alert), db_->Number("SELECT " + mean + " FROM " + year),
              1e-12);
  EXPECT_NEAR(db_->Number("SELECT z" + alert), z(year), 1e-12);
  EXPECT_EQ(db_->Text("SELECT season_weeks" + alert), "5");
  EXPECT_NEAR(db_->Number("SELECT season_usual" + alert),
              db_->Number("SELECT " + mean + " FROM " + season), 1e-12);
  EXPECT_NEAR(db_->Number("SELECT season_z" + alert), z(season), 1e-12);
  EXPECT_NEAR(db_->Number("SELECT season_ratio" + alert),
              cases / db_->Number("SELECT " + mean + " FROM " + season), 1e-12);
  // Unusual in June, as it would not be in winter; the flooded street is unusual by both.
  EXPECT_EQ(db_->Text("SELECT z < 3 AND season_ratio_low > 1.2" + alert), "1");
  EXPECT_EQ(
      db_->Text("SELECT z > 10 AND season_ratio_low > 3 FROM week_alert WHERE trade = 'Drainage' "
                "AND monday = '2024-10-14'"),
      "1");
}

TEST_F(DemoViews, RatesHideSmallDistrictsSoThatTotalsDoNotGiveThemAway) {
  EXPECT_LT(
      db_->Number("SELECT max(abs(per_1000 - 1000.0 * cases / dwellings)) FROM district_rate"),
      1e-12);
  EXPECT_EQ(
      db_->Text("SELECT count(*) FROM district_rate WHERE hidden AND coalesce(cases, per_1000, "
                "low, high, ratio, ratio_low, ratio_high) IS NOT NULL"),
      "0");
  EXPECT_EQ(db_->Text("SELECT count(*) FROM district_rate WHERE district = 'Saltspur Isle' AND NOT "
                      "hidden"),
            "0");
  EXPECT_EQ(
      db_->Text("SELECT min(n) >= 2 FROM (SELECT sum(hidden) AS n FROM district_rate GROUP BY "
                "year)"),
      "1");
  EXPECT_EQ(db_->Text("SELECT count(*) > 10 FROM district_rate WHERE ratio BETWEEN ratio_low AND "
                      "ratio_high"),
            "1");
}

TEST_F(DemoViews, RatesByMonthHoldEveryCaseAndCompareWithTheMonthAYearBefore) {
  // Every month of every district is there, the one that came in too.
  EXPECT_EQ(db_->Text("SELECT count(*) FROM published_rates"), "296");
  EXPECT_EQ(db_->Text("SELECT sum(events) FROM published_totals"),
            db_->Text("SELECT count(*) FROM every_repair"));
  EXPECT_EQ(db_->Text("SELECT sum(events) FROM published_totals WHERE period = '2025-01'"),
            db_->Text("SELECT count(*) FROM repair_2025"));
  EXPECT_EQ(
      db_->Rows("SELECT area, period, events, rate, ratio FROM published_rates "
                "WHERE period = '2025-01' AND NOT hidden ORDER BY 1"),
      db_->Rows("SELECT area, '2025-01', now, 1000.0 * now / y.dwellings, "
                "1.0 * now / before FROM (SELECT district AS area, sum(reported GLOB '2025-01-*') "
                "AS now, sum(reported GLOB '2024-01-*') AS before FROM every_repair GROUP BY 1) "
                "JOIN district_year AS y ON y.district = area AND year = 2024 "
                "WHERE area IN (SELECT area FROM published_rates WHERE period = '2025-01' "
                "AND NOT hidden) ORDER BY 1"));
  // Where a cell is hidden, so is at least one more of its month.
  EXPECT_EQ(db_->Text("SELECT min(hidden_areas) FROM published_totals"), "2");
}

TEST_F(DemoViews, AnotherColumnInTheRecordsDisturbsNothing) {
  db_->Run("SAVEPOINT more; ALTER TABLE repair ADD COLUMN caller TEXT");
  EXPECT_EQ(db_->ErrorOf("INSERT INTO model_refresh(at) VALUES ('2025-02-04')"), "(no error)");
  db_->Run("ROLLBACK TO more; RELEASE more");
}

TEST_F(DemoViews, TheMonthThatCameInShowsInWhatChanged) {
  EXPECT_EQ(
      db_->Text("SELECT group_concat(term, '; ') FROM published_changes WHERE name = 'cost of a "
                "repair' AND status IN ('moved', 'new', 'gone') ORDER BY position"),
      "trade is Heating; trade is Scaffolding");
  EXPECT_EQ(
      db_->Text("SELECT after - before FROM published_changes WHERE name = 'days to close' AND "
                "term = 'rows_fitted'"),
      db_->Text("SELECT 1.0 * count(*) FROM repair_2025 WHERE days_open IS NOT NULL"));
  EXPECT_EQ(db_->Text("SELECT count(*) FROM repair"), "30000");
}

TEST(DerivedTables, AnIndexOnAReExpressionStopsProgramsWithoutTheExtension) {
  std::string name = (std::filesystem::temp_directory_path() / "ladderline-XXXXXX").string();
  const std::filesystem::path folder = mkdtemp(name.data());
  const std::string path = folder / "records.db";
  {
    const Database kept(path);
    kept.Run(
        "CREATE TABLE record(id INTEGER PRIMARY KEY, cost REAL);"
        "INSERT INTO record VALUES (1, 120), (2, 0);"
        "CREATE TABLE by_column(cost REAL, log_cost REAL AS (log_offset(cost, 1)) STORED);"
        "CREATE TABLE by_index(cost REAL); CREATE INDEX i ON by_index(log_offset(cost, 1));"
        "INSERT INTO by_column(cost) SELECT cost FROM record;"
        "INSERT INTO by_index SELECT cost FROM record");
    const Database plain(path, false);
    plain.Run("INSERT INTO record VALUES (3, 90); UPDATE record SET cost = 1 WHERE id = 2");
    EXPECT_EQ(plain.Text("SELECT sum(cost) FROM record"), "211");
    EXPECT_THAT(plain.ErrorOf("INSERT INTO by_column(cost) VALUES (5)"), HasSubstr("log_offset"));
    EXPECT_THAT(plain.ErrorOf("INSERT INTO by_index(cost) VALUES (5)"), HasSubstr("log_offset"));
  }
  std::filesystem::remove_all(folder);
}

}  // namespace
}  // namespace ladderline::testing
