// Tests of normality, shape summaries and pictures as SQL speaks of them.
#include <cmath>
#include <string>
#include <vector>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

const char* const kTests[] = {"jarque_bera", "shapiro_wilk", "anderson_darling", "dagostino_k2"};

// What takes one column and answers in JSON.
const char* const kAggregates[] = {"jarque_bera",   "shapiro_wilk",  "anderson_darling",
                                   "dagostino_k2",  "shape_summary", "histogram_bins",
                                   "quantile_pairs"};

std::string Values(const std::string& rows) {
  return "(SELECT column1 AS x FROM (VALUES " + rows + "))";
}

class ShapeSql : public ::testing::Test {
 protected:
  ShapeSql() {
    db_.LoadCsv("journals", "boxcox/journals.csv");
    db_.LoadCsv("poisons", "boxcox/poisons.csv");
    db_.LoadCsv("trees", "boxcox/trees.csv");
  }
  double Figure(const std::string& call, const std::string& figure, const std::string& from) const {
    return db_.Number("SELECT json_extract(" + call + ", '$." + figure + "') FROM " + from);
  }
  Database db_;
};

// normality_r.json: R 4.2.2 shapiro.test, nortest 1.0.4 ad.test; normality_exact.json: mpmath.
TEST_F(ShapeSql, TestsOfNormalityGiveTheFiguresOfRAndSciPy) {
  const std::string from = "journals";
  const nlohmann::json r = ReadJson("normality_r.json")["cases"];
  const nlohmann::json exact = ReadJson("normality_exact.json")["cases"];
  int checked = 0;
  for (const auto& c : r) {
    if (c["column"] != "price" || c.contains("first") || c.contains("power")) continue;
    for (const char* test : {"shapiro_wilk", "anderson_darling"}) {
      const std::string call = std::string(test) + "(price)";
      EXPECT_TRUE(Agrees(c[test][0], Figure(call, "statistic", from), 12)) << test;
      EXPECT_TRUE(Agrees(c[test][1], Figure(call, "p_value", from), 9.5)) << test;
      ++checked;
    }
  }
  for (const auto& c : exact) {
    if (c.value("column", "") != "price") continue;
    for (const char* test : {"jarque_bera", "dagostino_k2"}) {
      const std::string call = std::string(test) + "(price)";
      EXPECT_TRUE(Agrees(c["scipy"][test][0], Figure(call, "statistic", from), 12)) << test;
      EXPECT_TRUE(Agrees(c["scipy"][test][1], Figure(call, "p_value", from), 11)) << test;
      ++checked;
    }
  }
  EXPECT_EQ(checked, 4);
}

TEST_F(ShapeSql, ATestIsJsonWithItsFiveKeysInOrder) {
  for (const std::string test : kTests) {
    EXPECT_EQ(db_.Text("SELECT group_concat(key) FROM json_each((SELECT " + test +
                       "(price) FROM journals))"),
              "statistic,p_value,rows,missing,note");
    const std::string counts = "SELECT json_extract(" + test +
                               "(x), '$.rows') || ' ' || json_extract(" + test +
                               "(x), '$.missing') FROM ";
    EXPECT_EQ(db_.Text(counts + Values("(1), ('2'), (NULL), (' '), (3.5), (''), (4), (9), ('7e0'), "
                                       "(11), (20)")),
              "8 3");
  }
}

TEST_F(ShapeSql, ShortageOfDataIsNullAndNeverAnError) {
  for (const std::string aggregate : kAggregates) {
    SCOPED_TRACE(aggregate);
    EXPECT_TRUE(db_.IsNull("SELECT " + aggregate + "(price) FROM journals WHERE 0"));
    EXPECT_TRUE(db_.IsNull("SELECT " + aggregate + "(x) FROM " + Values("(NULL), (''), (' ')")));
    EXPECT_TRUE(db_.IsNull("SELECT " + aggregate + "(price) FILTER (WHERE 0) FROM journals"));
  }
  const auto first = [&](const std::string& call, int n) {
    return db_.IsNull("SELECT " + call + " FROM (SELECT price FROM journals LIMIT " +
                      std::to_string(n) + ")");
  };
  EXPECT_TRUE(first("jarque_bera(price)", 1));
  EXPECT_FALSE(first("jarque_bera(price)", 2));
  EXPECT_TRUE(first("shapiro_wilk(price)", 2));
  EXPECT_FALSE(first("shapiro_wilk(price)", 3));
  for (const std::string test : {"anderson_darling", "dagostino_k2"}) {
    EXPECT_TRUE(first(test + "(price)", 7));
    EXPECT_FALSE(first(test + "(price)", 8));
  }
}

TEST_F(ShapeSql, EqualValuesGiveNoFiguresAndSayWhy) {
  for (const std::string test : kTests) {
    EXPECT_EQ(db_.Text("SELECT " + test + "(7) FROM journals LIMIT 1"),
              R"({"statistic":null,"p_value":null,"rows":180,"missing":0,)"
              R"("note":"all values are equal"})");
  }
}

TEST_F(ShapeSql, ShapiroWilkAboveItsRowsAndAndersonDarlingBeyondItsFormulaSaySo) {
  db_.Run(
      "CREATE TABLE many AS WITH RECURSIVE r(x) AS (SELECT 1 UNION ALL SELECT x + 1 FROM r "
      "WHERE x < 5001) SELECT x * x AS x FROM r");
  EXPECT_EQ(db_.Text("SELECT shapiro_wilk(x) FROM many"),
            R"({"statistic":null,"p_value":null,"rows":5001,"missing":0,"note":"takes up to 5000 )"
            R"(rows; anderson_darling takes any number"})");
  EXPECT_GT(Figure("shapiro_wilk(x)", "p_value", "(SELECT x FROM many LIMIT 5000)"), 0);
  EXPECT_EQ(Figure("anderson_darling(x)", "p_value", "many"), 3.7e-24);
  EXPECT_EQ(db_.Text("SELECT json_extract(anderson_darling(x), '$.note') FROM many"),
            "p_value is at most this: the formula ends here");
}

TEST_F(ShapeSql, BadValuesAreNamed) {
  for (const std::string aggregate : kAggregates) {
    const auto error = [&](const std::string& value) {
      return db_.ErrorOf("SELECT " + aggregate + "(x) FROM " + Values("(1), (" + value + "), (2)"));
    };
    EXPECT_EQ(error("'n/a'"), aggregate + ": x must be a number, got text 'n/a'");
    EXPECT_EQ(error("x'00'"), aggregate + ": x must be a number, got a BLOB of 1 bytes");
    EXPECT_EQ(error("9e999"), aggregate + ": x must be a number, got an infinity");
  }
  const auto error = [&](const std::string& call) {
    return db_.ErrorOf("SELECT " + call + " FROM trees");
  };
  EXPECT_EQ(error("histogram_bins(Volume, 0)"),
            "histogram_bins: bins must be a whole number from 1 to 1000, got 0");
  EXPECT_EQ(error("histogram_bins(Volume, 2.5)"),
            "histogram_bins: bins must be a whole number from 1 to 1000, got 2.5");
  EXPECT_EQ(error("histogram_bins(Volume, 'ten')"),
            "histogram_bins: bins must be a number, got text 'ten'");
  EXPECT_EQ(error("histogram_bins(Volume, rowid)"),
            "histogram_bins: bins must stay the same within a group, where it was 1, got 2");
  EXPECT_EQ(error("quantile_pairs(Volume, 1000001)"),
            "quantile_pairs: points must be a whole number from 1 to 1000000, got 1000001");
}

TEST_F(ShapeSql, GroupsAndFiltersAreTheRowsTheyName) {
  for (const std::string aggregate : kAggregates) {
    SCOPED_TRACE(aggregate);
    const auto grouped = db_.Rows("SELECT treat, " + aggregate +
                                  "(time) FROM poisons GROUP BY treat ORDER BY treat");
    ASSERT_EQ(grouped.size(), 4u);
    for (const auto& row : grouped) {
      const std::string is = "treat = '" + *row[0] + "'";
      EXPECT_EQ(*row[1], db_.Text("SELECT " + aggregate + "(time) FROM poisons WHERE " + is));
      EXPECT_EQ(*row[1],
                db_.Text("SELECT " + aggregate + "(time) FILTER (WHERE " + is + ") FROM poisons"));
    }
  }
}

// Every kind of frame, each row's answer beside that of the frame's rows alone. Tests of moments
// keep sums, whose last digits may differ with the order of the rows.
TEST_F(ShapeSql, MovingFramesAnswerAsTheirRowsAlone) {
  db_.Run(
      "CREATE TABLE t(id INTEGER PRIMARY KEY, x); INSERT INTO t(x) SELECT price FROM journals "
      "LIMIT 40; UPDATE t SET x = NULL WHERE id % 7 = 0; UPDATE t SET x = 1e9 WHERE id = 12; "
      "UPDATE t SET x = 60 WHERE id BETWEEN 20 AND 24");
  const struct {
    const char* frame;
    int first, last;  // relative to the row; a large number is the end of the table
  } frames[] = {{"ROWS 9 PRECEDING", -9, 0},
                {"ROWS BETWEEN 12 PRECEDING AND 3 FOLLOWING", -12, 3},
                {"ROWS BETWEEN CURRENT ROW AND UNBOUNDED FOLLOWING", 0, 1000},
                {"ROWS UNBOUNDED PRECEDING", -1000, 0},
                {"ROWS BETWEEN 30 PRECEDING AND 22 PRECEDING", -30, -22}};
  for (const std::string call :
       {"jarque_bera(x)", "shapiro_wilk(x)", "anderson_darling(x)", "dagostino_k2(x)",
        "shape_summary(x)", "histogram_bins(x)", "histogram_bins(x, 4)", "quantile_pairs(x, 5)"}) {
    for (const auto& frame : frames) {
      const auto moving = db_.Rows("SELECT id, " + call + " OVER (ORDER BY id " + frame.frame +
                                   ") FROM t ORDER BY id");
      for (const auto& row : moving) {
        const std::string alone =
            db_.Text("SELECT " + call + " FROM t WHERE id - " + *row[0] + " BETWEEN " +
                     std::to_string(frame.first) + " AND " + std::to_string(frame.last));
        const std::string got = row[1].value_or("NULL");
        if (call[0] != 'j' && call[0] != 'd') {
          EXPECT_EQ(got, alone) << call << " " << frame.frame << " at " << *row[0];
          continue;
        }
        ASSERT_EQ(got == "NULL", alone == "NULL") << call << " " << frame.frame;
        if (got == "NULL") continue;
        const auto a = nlohmann::json::parse(alone), b = nlohmann::json::parse(got);
        EXPECT_EQ(a["rows"], b["rows"]);
        EXPECT_EQ(a["missing"], b["missing"]);
        EXPECT_EQ(a["note"], b["note"]);
        if (a["statistic"].is_null()) continue;
        EXPECT_TRUE(Agrees(a["statistic"], b["statistic"], 8)) << call << frame.frame << *row[0];
      }
    }
  }
}

TEST_F(ShapeSql, AnEmptyFrameIsNull) {
  for (const std::string aggregate : kAggregates) {
    EXPECT_EQ(db_.Text("SELECT count(w) FROM (SELECT " + aggregate +
                       "(time) OVER (ROWS BETWEEN 200 FOLLOWING AND 300 FOLLOWING) AS w "
                       "FROM poisons)"),
              "0");
  }
}

TEST_F(ShapeSql, OrderOfRowsChangesNoBit) {
  for (const std::string aggregate :
       {"shapiro_wilk", "anderson_darling", "shape_summary", "histogram_bins", "quantile_pairs"}) {
    const std::string call = "SELECT " + aggregate + "(price) FROM (SELECT price FROM journals ";
    EXPECT_EQ(db_.Text(call + "ORDER BY price DESC)"), db_.Text(call + "ORDER BY citations)"));
  }
}

// R 4.2.2, e1071 1.7.13 on boxcox/trees.csv, as in describe_r.json.
TEST_F(ShapeSql, ShapeSummaryRowsNameEveryFigureInOrder) {
  const nlohmann::json r = ReadJson("describe_r.json")["univariate"]["boxcox/trees.csv Volume"];
  const auto rows = db_.Rows(
      "SELECT name, value, typeof(value) FROM shape_summary_rows((SELECT "
      "shape_summary(Volume) FROM trees))");
  const std::vector<std::pair<std::string, double>> expected = {
      {"rows", 31},
      {"missing", 0},
      {"zeros", 0},
      {"negatives", 0},
      {"least", r["percentile_cont"][0]},
      {"lower_quartile", r["percentile_cont"][2]},
      {"median", r["median"]},
      {"upper_quartile", r["percentile_cont"][5]},
      {"largest", r["percentile_cont"][8]},
      {"mean", r["mean"]},
      {"sd", r["stddev_samp"]},
      {"skewness", r["skewness"]},
      {"excess_kurtosis", r["excess_kurtosis"]}};
  ASSERT_EQ(rows.size(), expected.size() + 1);
  for (std::size_t i = 0; i < expected.size(); ++i) {
    EXPECT_EQ(*rows[i][0], expected[i].first);
    EXPECT_TRUE(Agrees(expected[i].second, std::stod(*rows[i][1]), 12)) << expected[i].first;
    EXPECT_EQ(*rows[i][2], i < 4 ? "integer" : "real") << expected[i].first;
  }
  EXPECT_EQ(*rows.back()[0], "reading");
  EXPECT_EQ(*rows.back()[1], "Long tail of large values: the mean is 25% above the median.");
}

TEST_F(ShapeSql, HistogramRowsAddUpAndAreDrawn) {
  const auto rows = db_.Rows(
      "SELECT low, high, rows, share, sketch FROM histogram_rows((SELECT histogram_bins(x) FROM " +
      Values("(0), (0), (0), (0), (1), (1), (3), (NULL)") + "))");
  const std::vector<Database::Row> expected = {
      {"0", "1", "4", "0.5714285714285714", std::string(40, '#')},
      {"1", "2", "2", "0.2857142857142857", std::string(20, '#')},
      {"2", "3", "0", "0", ""},
      {"3", "4", "1", "0.14285714285714285", std::string(10, '#')}};
  EXPECT_EQ(rows, expected);
  EXPECT_EQ(db_.Text("SELECT histogram_bins(x, 2) FROM " + Values("(1), (2), (3), (5)")),
            R"({"rows":4,"missing":0,"bins":[[1.0,3.0,2],[3.0,5.0,2]]})");
  EXPECT_EQ(db_.Text("SELECT histogram_bins(5.5, 9) FROM trees"),
            R"({"rows":31,"missing":0,"bins":[[5.5,5.5,31]]})");
  for (const std::string call : {"histogram_bins(time)", "histogram_bins(time, 7)"}) {
    EXPECT_EQ(
        db_.Text("SELECT sum(rows) || ' ' || round(sum(share), 12) FROM histogram_rows((SELECT " +
                 call + " FROM poisons))"),
        "48 1.0");
  }
}

TEST_F(ShapeSql, QuantileRowsPairScoresWithValues) {
  EXPECT_EQ(db_.Text("SELECT quantile_pairs(x) FROM " + Values("(3), (1), (2)")).substr(0, 42),
            R"({"rows":3,"missing":0,"pairs":[[-0.8694237)");
  EXPECT_EQ(db_.Number("SELECT count(*) FROM quantile_rows((SELECT quantile_pairs(price) FROM "
                       "journals))"),
            180);
  const auto rows = db_.Rows(
      "SELECT normal_score, value FROM quantile_rows((SELECT quantile_pairs(Volume, 3) "
      "FROM trees))");
  ASSERT_EQ(rows.size(), 3u);
  // pictures.json: ranks 1, 16 and 31 of 31.
  EXPECT_NEAR(std::stod(*rows[0][0]), -2.053748910631823, 1e-14);
  EXPECT_EQ(std::stod(*rows[1][0]), 0);
  EXPECT_EQ(std::stod(*rows[1][1]), 24.2);  // the median
  EXPECT_EQ(std::stod(*rows[2][1]), 77);
}

TEST_F(ShapeSql, ARowWithoutItsCountIsMissing) {
  EXPECT_EQ(db_.Text("SELECT histogram_bins(x, CASE x WHEN 2 THEN NULL ELSE 1 END) FROM " +
                     Values("(1), (2), (3)")),
            R"({"rows":2,"missing":1,"bins":[[1.0,3.0,2]]})");
  EXPECT_TRUE(db_.IsNull("SELECT quantile_pairs(Volume, NULL) FROM trees"));
}

TEST_F(ShapeSql, TablesOfNullHaveNoRows) {
  for (const std::string table : {"shape_summary_rows", "histogram_rows", "quantile_rows"})
    EXPECT_TRUE(db_.Rows("SELECT * FROM " + table + "(NULL)").empty()) << table;
}

TEST_F(ShapeSql, TextsThatAreNoSuchResultAreRefused) {
  const struct {
    std::string table, aggregate, result;
    std::vector<std::pair<std::string, std::string>> edits;  // replace() in a sound result
  } cases[] = {{"shape_summary_rows",
                "shape_summary",
                db_.Text("SELECT shape_summary(x) FROM " + Values("(1), (2), (4), (8), (16)")),
                {{"\"rows\":5", "\"rows\":0"},
                 {"\"rows\":5", "\"rows\":5.0"},
                 {"\"rows\":5", "\"rows\":-5"},
                 {"\"rows\":5,", ""},
                 {"\"rows\":5,", "\"rows\":5,\"extra\":1,"},
                 {"\"zeros\":0", "\"zeros\":\"0\""},
                 {"\"median\":4.0", "\"median\":400"},
                 {"\"median\":4.0", "\"median\":null"},
                 {"\"median\":4.0", "\"median\":1e999"},
                 {"\"mean\":", "\"average\":"},
                 {"\"sd\":", "\"sd\":[],\"x\":"}}},
               {"histogram_rows",
                "histogram_bins",
                db_.Text("SELECT histogram_bins(x, 2) FROM " + Values("(1), (2), (3), (5)")),
                {{"[1.0,3.0,2]", "[1.0,3.0,3]"},
                 {"[1.0,3.0,2]", "[1.0,2.5,2]"},
                 {"[1.0,3.0,2]", "[3.0,3.0,2]"},
                 {"[1.0,3.0,2]", "[1.0,3.0]"},
                 {"[1.0,3.0,2]", "[1.0,null,2]"},
                 {"[1.0,3.0,2]", "[1.0,3.0,2.0]"},
                 {"[1.0,3.0,2]", "[1.0,3.0,-2]"},
                 {"\"bins\":", "\"pairs\":"},
                 {"[[1.0,3.0,2],[3.0,5.0,2]]", "[]"},
                 {"\"missing\":0", "\"missing\":null"}}},
               {"quantile_rows",
                "quantile_pairs",
                db_.Text("SELECT quantile_pairs(x) FROM " + Values("(1), (2), (7)")),
                {{"[0.0,2.0]", "[9.0,2.0]"},
                 {"[0.0,2.0]", "[0.0,0.5]"},
                 {"[0.0,2.0]", "[0.0]"},
                 {"[0.0,2.0]", "[0.0,\"2\"]"},
                 {"[0.0,2.0]", "[0.0,2.0],[0.1,3.0]"},
                 {"\"rows\":3", "\"rows\":18446744073709551615"},
                 {"\"pairs\":", "\"bins\":"}}}};
  for (const auto& c : cases) {
    const std::string start = c.table + ": result must be a result of " + c.aggregate + ", got ";
    const auto error = [&](const std::string& argument) {
      return db_.ErrorOf("SELECT * FROM " + c.table + "(" + argument + ")").substr(0, start.size());
    };
    const std::string sound = "'" + c.result + "'";
    EXPECT_EQ(db_.ErrorOf("SELECT * FROM " + c.table + "(" + sound + ")"), "(no error)");
    EXPECT_EQ(db_.ErrorOf("SELECT * FROM " + c.table + "(' '||" + sound + ")"), "(no error)");
    for (const auto& [from, to] : c.edits) {
      ASSERT_NE(c.result.find(from), std::string::npos) << from << " in " << c.result;
      EXPECT_EQ(error("replace(" + sound + ", '" + from + "', '" + to + "')"), start) << to;
    }
    for (const std::string other : {"''", "'n/a'", "12", "x'7B7D'", "'{}'", "'[]'", "'null'",
                                    "CAST(x'FF' AS TEXT)", "'{\"rows\":1}'"})
      EXPECT_EQ(error(other), start) << other;
    EXPECT_EQ(error("substr(" + sound + ", 1, 30)"), start);
  }
  EXPECT_EQ(db_.ErrorOf("SELECT * FROM histogram_rows('n/a')"),
            "histogram_rows: result must be a result of histogram_bins, got text 'n/a'");
}

TEST_F(ShapeSql, AnyRangeOfNumbersIsAnswered) {
  for (const std::string aggregate : kAggregates) {
    for (const std::string values :
         {"(-1e300), (1e300), (0), (1), (2), (3), (4), (5), (6)",
          "(1e-300), (2e-300), (4e-300), (5e-300), (8e-300), (9e-300), (10e-300), (99e-300)",
          "(1.7e308), (-1.7e308), (1.6e308), (-1.6e308), (0), (1e308), (-1e308), (5e307)",
          "(5e-324), (1e-323), (0), (-5e-324), (2e-323), (3e-323), (5e-323), (9e-323)"}) {
      const std::string json = db_.Text("SELECT " + aggregate + "(x) FROM " + Values(values));
      EXPECT_TRUE(nlohmann::json::accept(json)) << json;
    }
  }
  for (const std::string test : kTests) {
    const std::string from =
        Values("(1.7e308), (-1.7e308), (1.6e308), (-1.6e308), (0), (1e308), (-1e308), (5e307)");
    const double p = Figure(test + "(x)", "p_value", from);
    EXPECT_TRUE(p > 0 && p <= 1) << test << " " << p;
  }
}

TEST_F(ShapeSql, ViewsAndTriggersMayUseThem) {
  db_.Run(
      "CREATE VIEW drawn AS SELECT * FROM histogram_rows((SELECT histogram_bins(price) FROM "
      "journals));"
      "CREATE VIEW tested AS SELECT shapiro_wilk(price) AS result FROM journals;"
      "CREATE TABLE log(x);"
      "CREATE TRIGGER noted AFTER DELETE ON trees BEGIN INSERT INTO log SELECT "
      "shape_summary(Volume) FROM trees; END; DELETE FROM trees WHERE rowid = 1");
  EXPECT_GT(db_.Rows("SELECT * FROM drawn").size(), 5u);
  EXPECT_FALSE(db_.IsNull("SELECT result FROM tested"));
  EXPECT_EQ(db_.Text("SELECT json_extract(x, '$.rows') FROM log"), "30");
}

}  // namespace
}  // namespace ladderline::testing
