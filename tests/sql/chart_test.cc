// Charts as users call them.
#include <gmock/gmock.h>

#include <regex>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using ::testing::HasSubstr;
using ::testing::Not;

class Charts : public ::testing::Test {
 protected:
  Database db;
};

// The values of an attribute as they stand in the text.
std::vector<std::string> Values(const std::string& svg, const std::string& attribute) {
  std::vector<std::string> values;
  const std::regex pattern(" " + attribute + "=\"([^\"]*)\"");
  for (std::sregex_iterator match(svg.begin(), svg.end(), pattern), end; match != end; ++match)
    values.push_back((*match)[1]);
  return values;
}

TEST_F(Charts, AHistogramHoldsWhatTheTableSays) {
  db.LoadCsv("d", "nist/Lew.csv");
  db.Run("CREATE TABLE h AS SELECT * FROM histogram_rows((SELECT histogram_bins(y / 7) FROM d))");
  const std::string svg =
      db.Text("SELECT chart_histogram('Deflection', 'y', low, high, rows) FROM h");
  const std::vector<std::string> low = Values(svg, "data-low"), rows = Values(svg, "data-rows");
  const std::vector<Database::Row> table = db.Rows("SELECT low, rows FROM h");
  ASSERT_EQ(low.size(), table.size());
  for (size_t i = 0; i < table.size(); ++i) {
    EXPECT_EQ(std::stod(low[i]), std::stod(*table[i][0]));
    EXPECT_EQ(rows[i], *table[i][1]);
  }
}

TEST_F(Charts, ThereIsNoChartOfNoRows) {
  for (const char* call :
       {"chart_histogram('t', 'a', 0, NULL, 1)", "chart_points('t', 'a', 'b', 1, '')",
        "chart_intervals('t', 'a', NULL, 1, 0, 2)", "chart_intervals(NULL, 'a', 'n', 1, 0, 2)"}) {
    EXPECT_TRUE(db.IsNull(std::string("SELECT ") + call)) << call;
    EXPECT_TRUE(db.IsNull(std::string("SELECT ") + call + " FROM (SELECT 1 WHERE 0)")) << call;
  }
}

TEST_F(Charts, RowsWithoutAFigureAreCounted) {
  EXPECT_THAT(db.Text("SELECT chart_points('t', 'a', 'b', column1, column2) FROM (VALUES (1, 2), "
                      "(NULL, 3), (4, ''))"),
              HasSubstr("2 rows with a missing value are left out."));
  EXPECT_THAT(db.Text("SELECT chart_intervals('t', 'a', column1, column2, NULL, NULL) FROM (VALUES "
                      "('x', 3), ('y', NULL))"),
              HasSubstr("1 row with a missing value is left out."));
}

TEST_F(Charts, FramesMove) {
  EXPECT_EQ(db.Text("SELECT chart_points('t', 'a', 'b', column1, column2) OVER (ORDER BY column1 "
                    "ROWS 1 PRECEDING) FROM (VALUES (1, 2), (2, NULL), (3, 5), (4, 6)) ORDER BY "
                    "column1 DESC LIMIT 1"),
            db.Text("SELECT chart_points('t', 'a', 'b', column1, column2) FROM (VALUES (3, 5), "
                    "(4, 6))"));
}

TEST_F(Charts, BadCallsAreErrorsInWords) {
  const auto error = [&](const std::string& call) { return db.ErrorOf("SELECT " + call); };
  EXPECT_EQ(error("chart_histogram('t', 'a', 2, 1, 5)"),
            "chart_histogram: high must not be below low, got 2 to 1");
  EXPECT_EQ(error("chart_histogram('t', 'a', 1, 2, -5)"),
            "chart_histogram: rows must not be negative, got -5");
  EXPECT_EQ(db.ErrorOf("SELECT chart_histogram('t', 'a', column1, column1 + 1, 1e308) FROM (VALUES "
                       "(5), (6))"),
            "chart_histogram: rows of all bins together must be a number, got an overflow");
  EXPECT_EQ(error("chart_points('t', 'a', 'b', 1, 9e999)"),
            "chart_points: y must be a number, got an infinity");
  EXPECT_EQ(error("chart_points('t', 'a', 'b', 1, 'n/a')"),
            "chart_points: y must be a number, got text 'n/a'");
  EXPECT_EQ(error("chart_intervals('t', 'a', 'n', 1, 2, 0)"),
            "chart_intervals: high must not be below low, got 2 to 0");
  EXPECT_EQ(error("chart_intervals('t', x'0000', 'n', 1, 2, 0)"),
            "chart_intervals: axis must be text, got a BLOB of 2 bytes");
  EXPECT_EQ(error("chart_intervals(column1, 'a', 'n', 1, 0, 2) FROM (VALUES ('t'), ('u'))"),
            "chart_intervals: title must stay the same within a group, where it was 't', got text "
            "'u'");
  EXPECT_EQ(error("chart_intervals('t', 'a', CAST(x'ff' AS TEXT), 1, 0, 2)"),
            "chart_intervals: name must be UTF-8 text, got text '?'");
}

// 300,000 points in a text that a page can hold, and every row told.
TEST_F(Charts, ManyPointsStaySmall) {
  const std::string svg = db.Text(
      "WITH RECURSIVE n(n) AS (SELECT 1 UNION ALL SELECT n + 1 FROM n WHERE n < 300000) SELECT "
      "chart_points('t', 'a', 'b', n, (n * 7919) % 10007) FROM n");
  EXPECT_LT(svg.size(), 200'000u);
  EXPECT_THAT(svg, HasSubstr("300000 points: a from 1 to 300000, b from 0 to 10006."));
}

TEST_F(Charts, TextOfAnyKindStaysText) {
  const std::string svg = db.Text(
      "SELECT chart_intervals(char(0) || '\"><script>x</script>' || char(8238), '&amp;', 'a''b' || "
      "char(7), 1, 0, 2)");
  EXPECT_THAT(svg, Not(HasSubstr("<script")));
  EXPECT_THAT(svg, HasSubstr("\uFFFD&quot;&gt;&lt;script&gt;x&lt;/script&gt;\uFFFD"));
  EXPECT_THAT(svg, HasSubstr("&amp;amp;"));
  EXPECT_THAT(svg, HasSubstr(">a&#39;b\uFFFD<"));
}

}  // namespace
}  // namespace ladderline::testing
