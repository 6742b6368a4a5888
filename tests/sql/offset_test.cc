// log_offset_choice as SQL sees it. The figures themselves are tested in tests/core.
#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

class Offset : public ::testing::Test {
 protected:
  void SetUp() override {
    db.LoadCsv("firms", "boxcox/ornstein.csv");
    db.LoadCsv("trees", "boxcox/trees.csv");
  }
  Database db;
};

// tests/reference/log_offsets.json, the definition at 700 digits: 28 of the 248 firms have 0.
TEST_F(Offset, OfOpenData) {
  EXPECT_NEAR(db.Number("SELECT log_offset_choice(interlocks) FROM firms"), 2.182329508498887,
              1e-10);
  EXPECT_NEAR(db.Number("SELECT log_offset_choice(Volume) FROM trees"), -1.745524556331809, 1e-10);
}

TEST_F(Offset, LeavesNoSkewness) {
  EXPECT_NEAR(db.Number("SELECT skewness(log_offset(interlocks, "
                        "(SELECT log_offset_choice(interlocks) FROM firms))) FROM firms"),
              0, 1e-12);
}

TEST_F(Offset, IsNullWhereNoneDoes) {
  for (const char* values : {"(NULL)", "(5)", "(5), (5), (5)", "(1), (2)", "(0), (0), (0), (3)",
                             "(0), (0), (3), (9)",                     // half at the least value
                             "(-9), (-2), (-1), (0)",                  // a tail to the left
                             "(1), (2), (3)",                          // no tail
                             "(''), (NULL)", "(0), (1e-200), (1)"}) {  // the root is 1e-400
    EXPECT_TRUE(
        db.IsNull(std::string("SELECT log_offset_choice(column1) FROM (VALUES ") + values + ")"))
        << values;
  }
  EXPECT_TRUE(db.IsNull("SELECT log_offset_choice(interlocks) FROM firms WHERE 0"));
}

// Of {0, a, b} it is a²/(b − 2a); missing values are left out.
TEST_F(Offset, TakesZerosNegativesAndTheWholeRange) {
  EXPECT_NEAR(db.Number("SELECT log_offset_choice(column1) FROM (VALUES (0), (NULL), (' 1 '), (5), "
                        "(''))"),
              1.0 / 3, 1e-13);
  EXPECT_NEAR(db.Number("SELECT log_offset_choice(column1) FROM (VALUES (-3), (-2), (2))") - 3,
              1.0 / 3, 1e-13);
  EXPECT_NEAR(
      db.Number("SELECT log_offset_choice(column1) FROM (VALUES (0), (1e300), (5e300))") / 1e300,
      1.0 / 3, 1e-13);
  EXPECT_NEAR(
      db.Number("SELECT log_offset_choice(column1) FROM (VALUES (0), (1e-300), (5e-300))") * 1e300,
      1.0 / 3, 1e-13);
}

TEST_F(Offset, GroupsFiltersAndFramesAreAsComputedAfresh) {
  const auto groups = db.Rows(
      "SELECT nation, log_offset_choice(assets) FROM firms GROUP BY nation ORDER BY nation");
  ASSERT_EQ(groups.size(), 4u);
  for (const auto& group : groups) {
    EXPECT_EQ(group[1], db.Rows("SELECT log_offset_choice(assets) FILTER (WHERE nation = '" +
                                *group[0] + "') FROM firms")[0][0]);
  }
  db.Run("CREATE TABLE series AS SELECT rowid AS i, nullif(interlocks, 6) AS x FROM firms");
  EXPECT_EQ(db.Rows("SELECT log_offset_choice(x) OVER (ORDER BY i ROWS 19 PRECEDING) FROM series "
                    "ORDER BY i"),
            db.Rows("SELECT (SELECT log_offset_choice(x) FROM series AS f WHERE f.i BETWEEN s.i - "
                    "19 AND s.i) FROM series AS s ORDER BY s.i"));
}

TEST_F(Offset, WhatIsNoNumberIsAnError) {
  const std::string from = "SELECT log_offset_choice(column1) FROM (VALUES (1), (2), ";
  EXPECT_EQ(db.ErrorOf(from + "('n/a'))"), "log_offset_choice: x must be a number, got text 'n/a'");
  EXPECT_EQ(db.ErrorOf(from + "(-9e999))"),
            "log_offset_choice: x must be a number, got an infinity");
}

}  // namespace
}  // namespace ladderline::testing
