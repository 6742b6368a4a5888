// The aggregates over columns, in SQL: groups, filters, frames, bad input, and drift.
#include <cmath>
#include <string>
#include <vector>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

// Calls on columns x, y and z (positive) of a table, and whether the answer is a count, never NULL.
struct Aggregate {
  const char* call;
  bool counts = false;
};
constexpr Aggregate kAggregates[] = {
    {"value_count(x)", true},
    {"value_sum(x)"},
    {"mean(x)"},
    {"geometric_mean(z)"},
    {"harmonic_mean(z)"},
    {"zero_share(x)"},
    {"var_samp(x)"},
    {"var_pop(x)"},
    {"stddev_samp(x)"},
    {"stddev_pop(x)"},
    {"skewness(x)"},
    {"skewness_pop(x)"},
    {"excess_kurtosis(x)"},
    {"excess_kurtosis_pop(x)"},
    {"z_against_earlier(x)"},
    {"covar_samp(y, x)"},
    {"covar_pop(y, x)"},
    {"corr(y, x)"},
    {"regr_slope(y, x)"},
    {"regr_intercept(y, x)"},
    {"regr_r2(y, x)"},
    {"regr_count(y, x)", true},
    {"regr_avgx(y, x)"},
    {"regr_avgy(y, x)"},
    {"regr_sxx(y, x)"},
    {"regr_syy(y, x)"},
    {"regr_sxy(y, x)"},
    {"median(x)"},
    {"median_abs_dev(x)"},
    {"percentile_cont(x, 0.3)"},
    {"percentile_disc(x, 0.3)"},
};

std::string NameOf(const Aggregate& aggregate) {
  return std::string(aggregate.call).substr(0, std::string(aggregate.call).find('('));
}

// Integers, reals, numeric text, zeros, negatives, ties, blanks and NULLs, in two groups.
void MakeRows(const Database& db) {
  db.Run(
      "CREATE TABLE t(id INTEGER PRIMARY KEY, g, x, y, z);"
      "WITH RECURSIVE n(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM n WHERE i < 60)"
      "INSERT INTO t SELECT i, i % 2,"
      " CASE i % 10 WHEN 0 THEN NULL WHEN 1 THEN ' ' WHEN 2 THEN 0 WHEN 3 THEN ' 2.5 '"
      "  WHEN 4 THEN -3 ELSE (i * 37 % 23) / 2.0 END,"
      " CASE WHEN i % 13 = 0 THEN NULL ELSE (i * 29 % 31) - 7 END,"
      " CASE WHEN i % 7 = 0 THEN '' ELSE (i * 17 % 19 + 1) / 4.0 END FROM n");
}

void ExpectSameColumn(const std::vector<Database::Row>& got,
                      const std::vector<Database::Row>& expected, const std::string& what) {
  ASSERT_EQ(got.size(), expected.size()) << what;
  for (size_t i = 0; i < got.size(); ++i) {
    ASSERT_EQ(got[i][0].has_value(), expected[i][0].has_value())
        << what << ", row " << i << ": " << got[i][0].value_or("NULL") << " for "
        << expected[i][0].value_or("NULL");
    if (!got[i][0]) continue;
    const double truth = std::stod(*expected[i][0]), value = std::stod(*got[i][0]);
    // Figures that are 0 but for rounding are held against the size of the data, 1.
    EXPECT_NEAR(value, truth, 1e-13 * std::max(1.0, std::abs(truth))) << what << ", row " << i;
  }
}

TEST(Aggregate, EveryOneIsListedHere) {
  const Database db;
  for (const Aggregate& aggregate : kAggregates) {
    EXPECT_EQ(
        db.Text("SELECT kind FROM ladderline_functions WHERE name = '" + NameOf(aggregate) + "'"),
        "aggregate, window");
  }
}

TEST(Aggregate, AFrameAnswersLikeAGroupOfItsRows) {
  struct Frame {
    const char* over;
    const char* rows;  // of table u, against row t
  };
  constexpr Frame kFrames[] = {
      {"ORDER BY id ROWS 3 PRECEDING", "u.id BETWEEN t.id - 3 AND t.id"},
      {"ORDER BY id ROWS BETWEEN 4 PRECEDING AND 2 FOLLOWING",
       "u.id BETWEEN t.id - 4 AND t.id + 2"},
      {"ORDER BY id", "u.id <= t.id"},
      {"ORDER BY id ROWS BETWEEN CURRENT ROW AND UNBOUNDED FOLLOWING", "u.id >= t.id"},
      {"ORDER BY id ROWS BETWEEN 12 PRECEDING AND 3 PRECEDING",  // empty from the start
       "u.id BETWEEN t.id - 12 AND t.id - 3"},
      {"ORDER BY id ROWS BETWEEN 2 FOLLOWING AND 9 FOLLOWING",  // empty at the end
       "u.id BETWEEN t.id + 2 AND t.id + 9"},
      {"ORDER BY id RANGE BETWEEN 5 PRECEDING AND CURRENT ROW", "u.id BETWEEN t.id - 5 AND t.id"},
      {"ORDER BY id / 4 GROUPS BETWEEN 1 PRECEDING AND CURRENT ROW",
       "u.id / 4 BETWEEN t.id / 4 - 1 AND t.id / 4"},
      {"ORDER BY id ROWS BETWEEN 6 PRECEDING AND CURRENT ROW EXCLUDE CURRENT ROW",
       "u.id BETWEEN t.id - 6 AND t.id - 1"},
      {"PARTITION BY g ORDER BY id ROWS 5 PRECEDING",
       "u.g = t.g AND u.id BETWEEN t.id - 10 AND t.id"},
      {"PARTITION BY g", "u.g = t.g"},
  };
  const Database db;
  MakeRows(db);
  for (const Aggregate& aggregate : kAggregates) {
    const std::string call = aggregate.call;
    for (const Frame& frame : kFrames) {
      const std::string grouped = "SELECT (SELECT " + call + " FROM (SELECT * FROM t AS u WHERE " +
                                  frame.rows + " ORDER BY id)) FROM t ORDER BY id";
      const std::string moving = "SELECT " + call + " OVER (" + frame.over + ") FROM t ORDER BY id";
      ExpectSameColumn(db.Rows(moving), db.Rows(grouped), call + " OVER (" + frame.over + ")");
    }
    // FILTER, in groups and in frames: the rows that are left out might as well not be there.
    const std::string filter = " FILTER (WHERE id % 3 <> 0) ";
    ExpectSameColumn(db.Rows("SELECT " + call + filter + "FROM t GROUP BY g ORDER BY g"),
                     db.Rows("SELECT " + call + " FROM t WHERE id % 3 <> 0 GROUP BY g ORDER BY g"),
                     call + " with FILTER");
    ExpectSameColumn(db.Rows("SELECT " + call + filter +
                             "OVER (ORDER BY id ROWS 7 PRECEDING) FROM t ORDER BY id"),
                     db.Rows("SELECT (SELECT " + call +
                             " FROM (SELECT * FROM t AS u WHERE u.id % 3 <> 0 AND u.id BETWEEN "
                             "t.id - 7 AND t.id ORDER BY id)) FROM t ORDER BY id"),
                     call + " with FILTER and OVER");
  }
}

TEST(Aggregate, ShortageOfDataIsNullAndBadDataIsAnError) {
  const Database db;
  db.Run("CREATE TABLE t(x, y, z)");
  const auto fill = [&](const char* values) {
    db.Run(std::string("DELETE FROM t; INSERT INTO t(x, y) VALUES ") + values +
           "; UPDATE t SET z = x");
  };
  for (const Aggregate& aggregate : kAggregates) {
    const std::string call = aggregate.call;
    const std::string name = NameOf(aggregate);
    const std::string nothing = aggregate.counts ? "0" : "NULL";
    EXPECT_EQ(db.Text("SELECT " + call + " FROM t"), nothing) << call << " of no rows";
    fill("(NULL, 1), ('', 2), (' \t', NULL)");
    EXPECT_EQ(db.Text("SELECT " + call + " FROM t"), nothing) << call << " of missing values";

    fill("(1, 1), ('n/a', 2)");
    EXPECT_EQ(db.ErrorOf("SELECT " + call + " FROM t"),
              name + ": x must be a number, got text 'n/a'");
    fill("(x'0102', 2)");
    EXPECT_EQ(db.ErrorOf("SELECT " + call + " FROM t"),
              name + ": x must be a number, got a BLOB of 2 bytes");
    fill("(9e999, 2)");
    EXPECT_EQ(db.ErrorOf("SELECT " + call + " FROM t"),
              name + ": x must be a number, got an infinity");
    EXPECT_EQ(db.ErrorOf("SELECT " + call + " OVER () FROM t"),
              name + ": x must be a number, got an infinity");
    if (call.find("y,") != std::string::npos) {
      fill("(1, '2024-03-05')");
      EXPECT_EQ(db.ErrorOf("SELECT " + call + " FROM t"),
                name + ": y must be a number, got text '2024-03-05'");
    }
    db.Run("DELETE FROM t");
    EXPECT_NE(db.ErrorOf("SELECT " + name + "() FROM t"), "(no error)");
    EXPECT_NE(db.ErrorOf("SELECT " + name + "(x, y, x) FROM t"), "(no error)");
  }
}

TEST(Aggregate, FiguresBeyondTheRangeAreNull) {
  const Database db;
  const std::string from = " FROM (VALUES (-1e308), (1e308), (1.5e308))";
  EXPECT_TRUE(db.IsNull("SELECT var_samp(column1)" + from));
  EXPECT_TRUE(db.IsNull("SELECT value_sum(column1) FROM (VALUES (1e308), (1e308))"));
  // sd of -1, 1 and 1.5 is √(31/12 - …): mean 1/2, squares 9/4 + 1/4 + 1 = 7/2, over 2: 7/4.
  EXPECT_TRUE(Agrees(1e308 * std::sqrt(1.75), db.Number("SELECT stddev_samp(column1)" + from), 14));
  EXPECT_TRUE(Agrees(0.5e308, db.Number("SELECT mean(column1)" + from), 14));
  EXPECT_TRUE(Agrees(1e-200,
                     db.Number("SELECT stddev_samp(column1) FROM (VALUES (1e-200), "
                               "(2e-200), (3e-200))"),
                     14));
}

TEST(Aggregate, NistColumnsReachTheLimitOfDoubleData) {
  // tests/reference/nist/reference_lre.md gives the digits that rounding the data to double leaves.
  const std::pair<const char*, double> limits[] = {
      {"PiDigits", 15}, {"Lottery", 15}, {"Lew", 15},      {"Mavro", 13.1}, {"Michelso", 13.8},
      {"NumAcc1", 15},  {"NumAcc2", 15}, {"NumAcc3", 9.5}, {"NumAcc4", 8.3}};
  const auto certified = ReadJson("nist/certified.json")["sets"];
  const Database db;
  for (const auto& [set, sd_limit] : limits) {
    db.LoadCsv(set, std::string("nist/") + set + ".csv");
    const double mean = std::stod(certified[set]["mean"].get<std::string>());
    const double sd = std::stod(certified[set]["sd"].get<std::string>());
    const std::string from = std::string(" FROM ") + set;
    EXPECT_TRUE(Agrees(mean, db.Number("SELECT mean(y)" + from), 14.7)) << set;
    EXPECT_TRUE(Agrees(sd, db.Number("SELECT stddev_samp(y)" + from), sd_limit - 0.3)) << set;
    // A frame of as many rows, moving over a far value and on over the whole set.
    const std::string n = std::to_string(certified[set]["n"].get<int>() - 1);
    const std::string moved =
        "SELECT v FROM (SELECT 0 AS part, 1e12 AS y, 0 AS at UNION ALL SELECT 1, y, rowid" + from +
        ") WINDOW w AS (ORDER BY part, at ROWS " + n + " PRECEDING) ORDER BY part DESC, at DESC";
    std::string sql = moved;
    EXPECT_TRUE(Agrees(mean, db.Number(sql.replace(7, 1, "mean(y) OVER w")), 14.7)) << set;
    sql = moved;
    EXPECT_TRUE(Agrees(sd, db.Number(sql.replace(7, 1, "stddev_samp(y) OVER w")), sd_limit - 0.3))
        << set << " as a frame";
  }
}

TEST(Aggregate, MovingFramesDoNotDrift) {
  const Database db;
  // 1e9 and noise of sd 1e-3: sums of twelve uniform numbers, from a hash of the row number. A
  // spike of 1e6 passes through.
  constexpr const char* kNoise =
      "(((i * 2654435761) % 4294967291) / 4294967291.0 +"
      " ((i * 40503 + 12345) * 69069 % 4294967291) / 4294967291.0 - 1) / 400";
  db.Run(std::string("CREATE TABLE t(id INTEGER PRIMARY KEY, x, y);"
                     "WITH RECURSIVE n(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM n WHERE i < "
                     "1000000) INSERT INTO t SELECT i, 1e9 + ") +
         kNoise + " + (i = 990000) * 1e6, 1e9 + ((i * 48271) % 2147483647) / 1e12 FROM n");
  struct Figure {
    const char* call;
    double digits;
  };
  constexpr Figure kFigures[] = {{"var_samp(x)", 12},       {"covar_samp(y, x)", 12},
                                 {"regr_sxx(y, x)", 12},    {"skewness(x)", 8},
                                 {"excess_kurtosis(x)", 8}, {"corr(y, x)", 8}};
  std::string moving, afresh;
  for (const Figure& figure : kFigures) {
    moving += std::string(", ") + figure.call + " OVER w";
    afresh += std::string(afresh.empty() ? "" : ", ") + figure.call;
  }
  db.Run("CREATE TABLE moved AS SELECT id" + moving +
         " FROM t WINDOW w AS (ORDER BY id ROWS 100 PRECEDING)");
  // 990100 is the last frame that holds the spike.
  for (const int id : {150, 500000, 989999, 990101, 990102, 990150, 990300, 1000000}) {
    const std::string at = std::to_string(id);
    const auto moved = db.Rows("SELECT * FROM moved WHERE id = " + at);
    const auto truth =
        db.Rows("SELECT " + afresh + " FROM t WHERE id BETWEEN " + at + " - 100 AND " + at);
    for (size_t i = 0; i < std::size(kFigures); ++i) {
      EXPECT_TRUE(Agrees(std::stod(*truth[0][i]), std::stod(*moved[0][i + 1]), kFigures[i].digits))
          << kFigures[i].call << " at " << id;
    }
  }
}

TEST(Aggregate, WholeNumbersAddUpToWholeNumbers) {
  const Database db;
  EXPECT_EQ(db.Text("SELECT typeof(value_sum(column1)) || value_sum(column1) FROM "
                    "(VALUES (3), ('4'), (''))"),
            "integer7");
  EXPECT_EQ(db.Text("SELECT value_sum(column1) FROM (VALUES (9007199254740993), (1))"),
            "9007199254740994");
  EXPECT_EQ(db.Text("SELECT typeof(value_sum(column1)) FROM (VALUES (9223372036854775807), (1))"),
            "real");
  EXPECT_EQ(db.Text("SELECT typeof(value_sum(column1)) FROM (VALUES (1), (2.0))"), "real");
}

TEST(Aggregate, PercentileFractionsMustBeOneFractionIn0To1) {
  const Database db;
  for (const std::string name : {"percentile_cont", "percentile_disc"}) {
    const auto error = [&](const std::string& fractions) {
      return db.ErrorOf("SELECT " + name + "(column1, column2) FROM (VALUES " + fractions + ")");
    };
    EXPECT_EQ(error("(1, 1.5)"), name + ": fraction must lie in 0..1, got 1.5");
    EXPECT_EQ(error("(NULL, -0.1)"), name + ": fraction must lie in 0..1, got -0.1");
    EXPECT_EQ(error("(1, 'half')"), name + ": fraction must be a number, got text 'half'");
    EXPECT_EQ(error("(1, 0.5), (2, 0.9)"),
              name + ": fraction must stay the same within a group, where it was 0.5, got 0.9");
    EXPECT_EQ(error("(1, 0.5), (2, NULL), (3, 0.5)"), "(no error)");
    EXPECT_TRUE(db.IsNull("SELECT " + name + "(1, NULL)"));
    // Each group may have its own.
    EXPECT_EQ(db.Text("SELECT group_concat(v, ' ') FROM (SELECT " + name +
                      "(column2, column1) AS v FROM (VALUES (0, 5), (0, 7), (1, 5), (1, 7)) "
                      "GROUP BY column1)"),
              "5.0 7.0");
  }
}

TEST(Aggregate, ATrailingBaselineLeavesTheCurrentRowOut) {
  const Database db;
  db.Run(
      "CREATE TABLE weekly(district, week, n);"
      "INSERT INTO weekly VALUES ('Nord', 1, 10), ('Nord', 2, 12), ('Nord', 3, 11),"
      " ('Nord', 4, 19), ('Nord', 5, NULL), ('Nord', 6, 12), ('Sued', 1, 4), ('Sued', 2, 4),"
      " ('Sued', 3, 4)");
  const auto rows = db.Rows(
      "SELECT z_against_earlier(n) OVER (PARTITION BY district ORDER BY week ROWS 3 PRECEDING) "
      "FROM weekly ORDER BY district, week");
  for (const size_t i : {0u, 1u, 4u, 6u, 7u, 8u}) EXPECT_FALSE(rows[i][0].has_value()) << i;
  // Week 3 against 10 and 12: 0. Week 4 against 10, 12, 11: mean 11, sd 1. Week 6 against 11, 19
  // and nothing: mean 15, sd √32.
  EXPECT_EQ(std::stod(*rows[2][0]), 0);
  EXPECT_EQ(std::stod(*rows[3][0]), 8);
  EXPECT_TRUE(Agrees(-3 / std::sqrt(32.0), std::stod(*rows[5][0]), 15));
}

TEST(ValueAudit, TellsWhatIsInADirtyColumn) {
  const Database db;
  db.Run(
      "CREATE TABLE t(x); INSERT INTO t VALUES (NULL), (''), ('  '), (12), (-3), (2.5), (9e999),"
      " ('7'), ('0'), ('1e999'), ('03'), ('2024-03-05'), ('n/a'), (x'00ff'), (x'')");
  const std::string from = " FROM value_audit_rows((SELECT value_audit(x) FROM t))";
  const std::vector<Database::Row> expected = {
      {"missing", "1", std::nullopt},
      {"blank", "2", "  "},
      {"integer", "2", "-3"},
      {"real", "2", "Inf"},
      {"numeric_text", "2", "0"},
      {"leading_zero", "1", "03"},
      {"date_like", "1", "2024-03-05"},
      {"other_text", "2", "n/a"},
      {"blob", "2", "x''"},
      {"zero", "1", "0"},
      {"negative", "1", "-3"},
  };
  EXPECT_EQ(db.Rows("SELECT *" + from), expected);
  EXPECT_EQ(db.Text("SELECT value_audit(x) ->> 'least' FROM t"), "-3");
  EXPECT_EQ(db.Text("SELECT value_audit(x) ->> 'largest' FROM t"), "12");
  EXPECT_EQ(db.Text("SELECT value_audit(x) ->> 'rows' FROM t"), "15");
  EXPECT_EQ(db.Text("SELECT typeof(example)" + from + " WHERE kind = 'integer'"), "integer");
}

TEST(ValueAudit, IsNeverAnError) {
  const Database db;
  EXPECT_EQ(db.Text("SELECT value_audit(x) ->> 'rows' FROM (SELECT 1 AS x) WHERE false"), "0");
  // Bytes that are no UTF-8, an emoji, and a long text that is cut between characters.
  EXPECT_EQ(db.Text("SELECT value_audit(CAST(x'41ff42' AS TEXT)) ->> '$.examples.other_text'"),
            "A?B");
  EXPECT_EQ(db.Text("SELECT value_audit('🏚') ->> '$.examples.other_text'"), "🏚");
  EXPECT_EQ(db.Text("SELECT value_audit(printf('%.*c', 5000, 'a')) ->> '$.examples.other_text'"),
            std::string(60, 'a') + "…");
  EXPECT_EQ(db.Text("SELECT value_audit(zeroblob(1000)) ->> '$.examples.blob'"),
            "x'" + std::string(60, '0') + "…");
}

TEST(ValueAudit, MovesAndFilters) {
  const Database db;
  db.Run(
      "CREATE TABLE t(id INTEGER PRIMARY KEY, x);"
      "INSERT INTO t(x) VALUES ('n/a'), (5), (NULL), ('07'), (-2), ('?'), (1.5), (0)");
  for (const std::string over : {"ROWS 2 PRECEDING", "ROWS BETWEEN 3 PRECEDING AND 1 PRECEDING",
                                 "ROWS BETWEEN CURRENT ROW AND UNBOUNDED FOLLOWING"}) {
    const std::string rows = over == "ROWS 2 PRECEDING" ? "u.id BETWEEN t.id - 2 AND t.id"
                             : over[5] == 'B' && over[13] == '3'
                                 ? "u.id BETWEEN t.id - 3 AND t.id - 1"
                                 : "u.id >= t.id";
    EXPECT_EQ(db.Rows("SELECT value_audit(x) OVER (ORDER BY id " + over + ") FROM t ORDER BY id"),
              db.Rows("SELECT (SELECT value_audit(x) FROM (SELECT * FROM t AS u WHERE " + rows +
                      " ORDER BY id)) FROM t ORDER BY id"))
        << over;
  }
  EXPECT_EQ(db.Text("SELECT value_audit(x) FILTER (WHERE id > 6) ->> 'rows' FROM t"), "2");
}

TEST(ValueAudit, RowsTakeNothingButAnAudit) {
  const Database db;
  EXPECT_TRUE(db.Rows("SELECT * FROM value_audit_rows(NULL)").empty());
  for (const std::string bad : {"'n/a'", "'{}'", "'[1]'", "'{\"missing\":1}'", "12"}) {
    EXPECT_NE(db.ErrorOf("SELECT * FROM value_audit_rows(" + bad + ")")
                  .find("value_audit_rows: result must be a result of value_audit, got "),
              std::string::npos)
        << bad;
  }
}

TEST(Aggregate, WorkInViewsThatAreNotTrusted) {
  const Database db;  // with PRAGMA trusted_schema=OFF
  MakeRows(db);
  for (const Aggregate& aggregate : kAggregates) {
    const std::string call = aggregate.call;
    db.Run("CREATE VIEW v AS SELECT g, " + call + " AS f FROM t GROUP BY g");
    db.Run("CREATE VIEW w AS SELECT " + call + " OVER (ORDER BY id ROWS 9 PRECEDING) AS f FROM t");
    EXPECT_EQ(db.Rows("SELECT f FROM v").size(), 2u) << call;
    EXPECT_EQ(db.Rows("SELECT f FROM w").size(), 60u) << call;
    db.Run("DROP VIEW v; DROP VIEW w");
  }
  db.Run(
      "CREATE VIEW audit AS SELECT r.* FROM (SELECT value_audit(x) AS a FROM t) AS s, "
      "value_audit_rows(s.a) AS r");
  EXPECT_EQ(db.Rows("SELECT * FROM audit").size(), 11u);
}

}  // namespace
}  // namespace ladderline::testing
