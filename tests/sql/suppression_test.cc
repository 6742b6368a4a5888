// suppression_floor as SQL sees it. The rule itself is tested in tests/core.
#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

class Suppression : public ::testing::Test {
 protected:
  void SetUp() override {
    db.Run(
        "CREATE TABLE cell(district TEXT, trade TEXT, cases);"
        "INSERT INTO cell VALUES ('Northfold', 'Plumbing', 40), ('Northfold', 'Damp', 3),"
        " ('Northfold', 'Roofing', 12), ('Northfold', 'Glazing', 21), ('Eastmere', 'Plumbing', 2),"
        " ('Eastmere', 'Damp', ' 3 '), ('Eastmere', 'Roofing', 9), ('Eastmere', 'Glazing', NULL)");
  }
  Database db;
};

// By the rule in core/release/suppression.h: 3 alone would be the total less the rest, 2 and 3
// are 5 together.
TEST_F(Suppression, HidesASecondCountWhereOneWouldFollowFromTheTotal) {
  const auto rows = db.Rows(
      "SELECT trade, CASE WHEN cases >= suppression_floor(cases, 5) OVER (PARTITION BY district) "
      "THEN cases END FROM cell WHERE district = 'Northfold' ORDER BY trade");
  EXPECT_EQ(rows, (std::vector<Database::Row>{{"Damp", std::nullopt},
                                              {"Glazing", "21"},
                                              {"Plumbing", "40"},
                                              {"Roofing", std::nullopt}}));
  EXPECT_EQ(db.Rows("SELECT district, suppression_floor(cases, 5) FROM cell GROUP BY district "
                    "ORDER BY district"),
            (std::vector<Database::Row>{{"Eastmere", "5"}, {"Northfold", "21"}}));
}

TEST_F(Suppression, OfNothingIsNull) {
  EXPECT_TRUE(db.IsNull("SELECT suppression_floor(cases, 5) FROM cell WHERE false"));
  EXPECT_TRUE(db.IsNull("SELECT suppression_floor(cases, 5) FROM cell WHERE cases IS NULL"));
  EXPECT_TRUE(db.IsNull("SELECT suppression_floor(cases, NULL) FROM cell"));
}

TEST_F(Suppression, FramesAreAsComputedAfresh) {
  db.Run(
      "CREATE TABLE series AS WITH RECURSIVE s(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM s "
      "WHERE i < 300) SELECT i, (i * i * 7 + i * 3) % 17 AS n FROM s");
  EXPECT_EQ(db.Rows("SELECT suppression_floor(n, 4) OVER (ORDER BY i ROWS 5 PRECEDING) FROM series "
                    "ORDER BY i"),
            db.Rows("SELECT (SELECT suppression_floor(n, 4) FROM series AS f WHERE f.i BETWEEN s.i "
                    "- 5 AND s.i) FROM series AS s ORDER BY s.i"));
}

TEST_F(Suppression, WhatIsNoCountIsAnError) {
  const auto error = [&](const std::string& n, const std::string& floor) {
    return db.ErrorOf("SELECT suppression_floor(" + n + ", " + floor + ")");
  };
  const std::string whole = "must be a whole number from 0 to 9007199254740992";
  EXPECT_EQ(error("-1", "5"), "suppression_floor: n " + whole + ", got -1");
  EXPECT_EQ(error("2.5", "5"), "suppression_floor: n " + whole + ", got 2.5");
  EXPECT_EQ(error("1e17", "5"), "suppression_floor: n " + whole + ", got 1.0e+17");
  EXPECT_EQ(error("'under 5'", "5"), "suppression_floor: n must be a number, got text 'under 5'");
  EXPECT_EQ(error("1", "0"),
            "suppression_floor: floor must be a whole number from 1 to 9007199254740992, got 0");
  EXPECT_EQ(error("1", "0.5"),
            "suppression_floor: floor must be a whole number from 1 to 9007199254740992, got 0.5");
  EXPECT_EQ(db.ErrorOf("SELECT suppression_floor(column1, column2) FROM (VALUES (1, 5), (2, 6))"),
            "suppression_floor: floor must stay the same within a group, where it was 5, got 6");
}

}  // namespace
}  // namespace ladderline::testing
