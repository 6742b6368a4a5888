// The scalars of re-expression, as SQL sees them. Their digits are proved in core/transform_test.
#include <cmath>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

// One call per function, with arguments inside every domain; sweeps replace one at a time.
struct CallCase {
  const char* function;
  std::vector<const char*> arguments;
};

const std::vector<CallCase>& Calls() {
  static const std::vector<CallCase> calls = {
      {"log_offset", {"8", "1", "10"}},
      {"log_offset_inverse", {"2", "1", "10"}},
      {"sqrt_offset", {"8", "1"}},
      {"sqrt_offset_inverse", {"3", "1"}},
      {"square", {"7"}},
      {"square_inverse", {"49"}},
      {"power_of", {"8", "0.5"}},
      {"power_of_inverse", {"8", "0.5"}},
      {"reciprocal", {"8"}},
      {"negative_reciprocal", {"8"}},
      {"log_reflected", {"88", "101"}},
      {"log_reflected_inverse", {"-2", "101"}},
      {"box_cox", {"8", "0.25", "1"}},
      {"box_cox_inverse", {"2", "0.25", "1"}},
      {"yeo_johnson", {"-3", "0.5"}},
      {"yeo_johnson_inverse", {"-3", "0.5"}},
      {"asinh_scaled", {"-250", "0.1"}},
      {"asinh_scaled_inverse", {"-25", "0.1"}},
      {"logit", {"88", "0", "100", "0.01"}},
      {"logit_inverse", {"2", "0", "100", "0.01"}},
      {"z_score", {"57", "45", "6"}},
      {"z_score_inverse", {"2", "45", "6"}},
      {"rescale", {"15", "10", "30", "0", "100"}},
      {"rescale_inverse", {"25", "10", "30", "0", "100"}},
      {"center", {"57", "45"}},
      {"center_inverse", {"12", "45"}},
      {"date_from_days", {"19782"}},
  };
  return calls;
}

std::string CallText(const CallCase& c, size_t replaced, const std::string& by) {
  std::string text = std::string(c.function) + "(";
  for (size_t i = 0; i < c.arguments.size(); ++i) {
    if (i > 0) text += ", ";
    text += i == replaced ? by : c.arguments[i];
  }
  return text + ")";
}

constexpr size_t kNone = 99;

// Closed forms: each expected value follows from the definition by arithmetic.
TEST(Transforms, GiveTheValuesOfTheirDefinitions) {
  const Database db;
  const std::pair<const char*, double> cases[] = {
      {"log_offset(1)", 0},
      {"log_offset(99, 1, 10)", 2},
      {"log_offset(7, 1, 2)", 3},
      {"log_offset_inverse(0)", 1},
      {"log_offset_inverse(2, 1, 10)", 99},
      {"sqrt_offset(16)", 4},
      {"sqrt_offset(15, 1)", 4},
      {"sqrt_offset(0)", 0},
      {"sqrt_offset_inverse(4)", 16},
      {"sqrt_offset_inverse(4, 1)", 15},
      {"square(-9)", 81},
      {"square_inverse(81)", 9},
      {"power_of(4, 1.5)", 8},
      {"power_of(0, 2)", 0},
      {"power_of(4, -0.5)", 0.5},
      {"power_of_inverse(0.5, -0.5)", 4},
      {"reciprocal(4)", 0.25},
      {"reciprocal(reciprocal(-8))", -8},
      {"negative_reciprocal(4)", -0.25},
      {"negative_reciprocal(negative_reciprocal(8))", 8},
      {"log_reflected(99, 100)", 0},
      {"log_reflected_inverse(0, 100)", 99},
      {"box_cox(9, 0.5)", 4},
      {"box_cox(8, 0.5, 1)", 4},
      {"box_cox(1, 0)", 0},
      {"box_cox_inverse(4, 0.5)", 9},
      {"box_cox_inverse(4, 0.5, 1)", 8},
      {"box_cox_inverse(-2, 0.5, 3)", -3},
      {"box_cox_inverse(-1, 1)", 0},
      {"yeo_johnson(8, 0.5)", 4},
      {"yeo_johnson(-8, 1.5)", -4},
      {"yeo_johnson(0, 7)", 0},
      {"yeo_johnson_inverse(4, 0.5)", 8},
      {"yeo_johnson_inverse(-4, 1.5)", -8},
      {"asinh_scaled(0, 3)", 0},
      {"logit(0.5)", 0},
      {"logit(50, 0, 100)", 0},
      {"logit_inverse(0)", 0.5},
      {"logit_inverse(0, 0, 100, 0.01)", 50},
      {"z_score(57, 45, 6)", 2},
      {"z_score_inverse(2, 45, 6)", 57},
      {"rescale(15, 10, 30)", 0.25},
      {"rescale(15, 10, 30, 0, 100)", 25},
      {"rescale(35, 10, 30)", 1.25},
      {"rescale_inverse(0.25, 10, 30)", 15},
      {"rescale_inverse(25, 10, 30, 0, 100)", 15},
      {"center(57, 45)", 12},
      {"center_inverse(12, 45)", 57},
  };
  for (const auto& [call, value] : cases)
    EXPECT_DOUBLE_EQ(db.Number(std::string("SELECT ") + call), value) << call;
}

// mpmath 1.2.1, 30 digits: log(8.5), log10(8.5+1), asinh(250*0.1)/0.1, log(0.8/0.2),
// (121.5**0.25 - 1)/0.25, -log(101 - 88), log(0.99/0.01).
TEST(Transforms, GiveIrrationalValuesToTheLastDigits) {
  const Database db;
  const std::pair<const char*, double> cases[] = {
      {"log_offset(8.5)", 2.14006616349627076},
      {"log_offset(8.5, 1, 10)", 0.977723605288847766},
      {"asinh_scaled(250, 0.1)", 39.1242276564125565},
      {"logit(0.8)", 1.38629436111989062},
      {"box_cox(120.5, 0.25, 1)", 9.28018303640385911},
      {"log_reflected(88, 101)", -2.56494935746153674},
      {"logit(100, 0, 100, 0.01)", 4.59511985013458993},
  };
  for (const auto& [call, value] : cases)
    EXPECT_TRUE(Agrees(value, db.Number(std::string("SELECT ") + call), 15)) << call;
}

TEST(Transforms, MissingInMissingOut) {
  const Database db;
  for (const CallCase& c : Calls()) {
    EXPECT_FALSE(db.IsNull("SELECT " + CallText(c, kNone, ""))) << c.function;
    for (size_t i = 0; i < c.arguments.size(); ++i) {
      for (const char* missing : {"NULL", "''", "' \t'"})
        EXPECT_TRUE(db.IsNull("SELECT " + CallText(c, i, missing))) << CallText(c, i, missing);
    }
  }
}

TEST(Transforms, WhatIsNoNumberIsAnErrorThatNamesIt) {
  const Database db;
  for (const CallCase& c : Calls()) {
    for (size_t i = 0; i < c.arguments.size(); ++i) {
      const std::pair<const char*, const char*> bad[] = {{"'n/a'", "text 'n/a'"},
                                                         {"x'0102'", "a BLOB of 2 bytes"},
                                                         {"9e999", "an infinity"},
                                                         {"'1,5'", "text '1,5'"}};
      for (const auto& [value, got] : bad) {
        const std::string error = db.ErrorOf("SELECT " + CallText(c, i, value));
        EXPECT_EQ(error.find(std::string(c.function) + ": "), 0U) << error;
        EXPECT_NE(error.find(std::string(" must be a number, got ") + got), std::string::npos)
            << error;
      }
    }
  }
  EXPECT_EQ(db.ErrorOf("SELECT box_cox(1, 'x')"), "box_cox: lambda must be a number, got text 'x'");
  EXPECT_EQ(db.ErrorOf("SELECT rescale(1, 2, 3, 4, 'x')"),
            "rescale: new_high must be a number, got text 'x'");
  EXPECT_EQ(db.ErrorOf("SELECT logit_inverse(1, 'x', 3)"),
            "logit_inverse: low must be a number, got text 'x'");
}

TEST(Transforms, NumericTextIsANumber) {
  const Database db;
  EXPECT_EQ(db.Number("SELECT log_offset(' 99 ', '1.', '1e1')"), 2);
  EXPECT_EQ(db.Number("SELECT square('12')"), 144);
}

TEST(Transforms, OutsideTheDomainIsNull) {
  const Database db;
  for (const char* call : {"log_offset(0)",
                           "log_offset(-1, 1)",
                           "log_offset(5, 0, 1)",
                           "log_offset(5, 0, -2)",
                           "log_offset_inverse(1, 0, 0)",
                           "log_offset_inverse(5000)",
                           "sqrt_offset(-0.5)",
                           "sqrt_offset_inverse(-1)",
                           "square(1e200)",
                           "square_inverse(-1)",
                           "power_of(-1, 2)",
                           "power_of(0, -1)",
                           "power_of(3, 0)",
                           "power_of_inverse(3, 0)",
                           "power_of_inverse(-3, 2)",
                           "reciprocal(0)",
                           "negative_reciprocal(0.0)",
                           "log_reflected(100, 100)",
                           "box_cox(0, 0.5)",
                           "box_cox(-3, 2)",
                           "box_cox(-1, 0, 1)",
                           "box_cox_inverse(-3, 0.5)",
                           "box_cox_inverse(2, -0.5)",
                           "yeo_johnson_inverse(1, -1)",
                           "yeo_johnson_inverse(-1, 3)",
                           "asinh_scaled(1, 0)",
                           "asinh_scaled(1, -2)",
                           "asinh_scaled_inverse(1, 0)",
                           "logit(0)",
                           "logit(1)",
                           "logit(1.2)",
                           "logit(5, 5, 5)",
                           "logit(0.5, 0, 1, 0.5)",
                           "logit(0.5, 0, 1, -0.1)",
                           "logit_inverse(0, 3, 3)",
                           "z_score(5, 5, 0)",
                           "z_score(5, 5, -1)",
                           "z_score_inverse(1, 5, 0)",
                           "rescale(5, 3, 3)",
                           "rescale(5, 3, 4, 2, 2)",
                           "rescale_inverse(5, 3, 3)",
                           "date_from_days(0.5)",
                           "date_from_days(2932897)",
                           "date_from_days(-719529)"}) {
    EXPECT_TRUE(db.IsNull(std::string("SELECT ") + call)) << call;
  }
}

TEST(Transforms, WrongNumberOfArgumentsIsAnError) {
  const Database db;
  EXPECT_EQ(db.ErrorOf("SELECT logit(5, 0)"),
            "logit: takes (p [, low = 0, high = 1 [, inset = 0]]), got 2 arguments");
  EXPECT_EQ(db.ErrorOf("SELECT rescale(5, 0, 1, 2)"),
            "rescale: takes (x, old_low, old_high [, new_low = 0, new_high = 1]), got 4 arguments");
  for (const char* call : {"square()", "square(1, 2)", "box_cox(1)", "z_score(1, 2)",
                           "log_offset(1, 2, 3, 4)", "re_express(1)"}) {
    EXPECT_NE(db.ErrorOf(std::string("SELECT ") + call).find("wrong number of arguments"),
              std::string::npos)
        << call;
  }
}

TEST(Specs, SpeakTheSameLanguageAsTheFunctions) {
  const Database db;
  const std::pair<const char*, const char*> cases[] = {
      {"identity", "%"},
      {"log_offset", "log_offset(%)"},
      {"log_offset 1 10", "log_offset(%, 1, 10)"},
      {"sqrt_offset 0.5", "sqrt_offset(%, 0.5)"},
      {"square", "square(%)"},
      {"power_of -0.5", "power_of(%, -0.5)"},
      {"reciprocal", "reciprocal(%)"},
      {"negative_reciprocal", "negative_reciprocal(%)"},
      {"log_reflected 101", "log_reflected(%, 101)"},
      {"box_cox 0.25 1", "box_cox(%, 0.25, 1)"},
      {"yeo_johnson 0.25", "yeo_johnson(%, 0.25)"},
      {"asinh_scaled 0.1", "asinh_scaled(%, 0.1)"},
      {"logit 0 100 0.01", "logit(%, 0, 100, 0.01)"},
      {"z_score 45 6", "z_score(%, 45, 6)"},
      {"rescale 10 30 0 100", "rescale(%, 10, 30, 0, 100)"},
      {"center 45", "center(%, 45)"},
  };
  for (const auto& [spec, call] : cases) {
    for (const char* x : {"0.25", "7", "88.5", "100"}) {
      std::string direct = call;
      direct.replace(direct.find('%'), 1, x);
      const std::string quoted = std::string("'") + spec + "'";
      const std::string there = "re_express(" + std::string(x) + ", " + quoted + ")";
      EXPECT_EQ(db.Number("SELECT " + there), db.Number("SELECT " + direct)) << there;
      EXPECT_NEAR(db.Number("SELECT back_transform(" + there + ", " + quoted + ")"), std::stod(x),
                  1e-12 * std::stod(x))
          << there;
    }
  }
  EXPECT_EQ(db.Text("SELECT re_express('2024-02-29', 'date_days')"), "19782");
  EXPECT_EQ(db.Text("SELECT back_transform(19782, 'date_days')"), "2024-02-29");
  EXPECT_TRUE(db.IsNull("SELECT re_express('soon', 'date_days')"));
}

TEST(Specs, MayVaryFromRowToRow) {
  const Database db;
  const auto rows = db.Rows(
      "SELECT column1, re_express(9, column1) FROM (VALUES ('identity'), ('sqrt_offset'), (NULL), "
      "('square'), ('identity'))");
  const char* const expected[] = {"9", "3", nullptr, "81", "9"};
  ASSERT_EQ(rows.size(), 5U);
  for (size_t i = 0; i < rows.size(); ++i) {
    ASSERT_EQ(rows[i][1].has_value(), expected[i] != nullptr);
    EXPECT_STREQ(rows[i][1] ? rows[i][1]->c_str() : nullptr, expected[i]);
  }
}

TEST(Specs, AConstantSpecServesEveryRow) {
  const Database db;
  EXPECT_EQ(db.Number("WITH RECURSIVE n(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM n WHERE i < "
                      "1000) SELECT sum(re_express(i, 'sqrt_offset 0') = sqrt_offset(i)) FROM n"),
            1000);
}

TEST(Specs, WhatCannotBeReadIsAnErrorEvenForAMissingValue) {
  const Database db;
  const std::pair<const char*, const char*> cases[] = {
      {"'log_offset 1 1'",
       "re_express: spec must be a transform and its arguments, got text 'log_offset 1 1': base "
       "must "
       "be above 0 and other than 1, got 1"},
      {"'power_of'",
       "re_express: spec must be a transform and its arguments, got text 'power_of': power_of "
       "takes "
       "p, got 0 arguments"},
      {"'z_score'", "re_express: spec must give its arguments as numbers, got text 'z_score'"},
      {"'log_offset auto'",
       "re_express: spec must give its arguments as numbers, got text 'log_offset auto'"},
      {"x'00'", "re_express: spec must be text, got a BLOB of 1 bytes"},
  };
  for (const auto& [spec, message] : cases) {
    EXPECT_EQ(db.ErrorOf(std::string("SELECT re_express(1, ") + spec + ")"), message);
    EXPECT_EQ(db.ErrorOf(std::string("SELECT re_express(NULL, ") + spec + ")"), message);
  }
  EXPECT_NE(
      db.ErrorOf("SELECT back_transform(1, 'cube')")
          .find("back_transform: spec must be a transform and its arguments, got text 'cube': "
                "no transform is called 'cube'; known are identity, log_offset,"),
      std::string::npos);
  EXPECT_TRUE(db.IsNull("SELECT re_express(1, NULL)"));
  EXPECT_TRUE(db.IsNull("SELECT re_express('', 'square')"));
  EXPECT_EQ(db.ErrorOf("SELECT re_express('n/a', 'square')"),
            "re_express: x must be a number, got text 'n/a'");
}

TEST(Dates, AgreeWithTheHostsCalendar) {
  const Database db;
  // 2440587.5 is the Julian day of 1970-01-01; the steps reach over every kind of leap year.
  EXPECT_EQ(
      db.Number("WITH RECURSIVE n(d) AS (SELECT -719528 UNION ALL SELECT d + 97 FROM n WHERE "
                "d + 97 <= 2932896) "
                "SELECT count(*) FROM n WHERE date_from_days(d) IS NOT date(d + 2440587.5) OR "
                "date_days(date(d + 2440587.5)) IS NOT d"),
      0);
}

TEST(Dates, AnythingButAStrictDateIsNull) {
  const Database db;
  for (const char* d :
       {"NULL", "''", "'2023-02-29'", "'2024-1-5'", "'05.01.2024'", "'20240105'", "'2024-01-05 '",
        "'2024-01-05 10:00'", "20240105", "1.5", "x'3230'", "'n/a'"})
    EXPECT_TRUE(db.IsNull(std::string("SELECT date_days(") + d + ")")) << d;
  EXPECT_EQ(db.Text("SELECT typeof(date_days('2024-01-05')) || typeof(date_from_days(0))"),
            "integertext");
}

TEST(NumberOrNull, KeepsNumbersAsTheyAre) {
  const Database db;
  const std::pair<const char*, const char*> cases[] = {
      {"12", "12:integer"},
      {"'12'", "12:integer"},
      {"' 12 '", "12:integer"},
      {"12.5", "12.5:real"},
      {"'5.'", "5.0:real"},
      {"'1e3'", "1000.0:real"},
      {"'-0.5'", "-0.5:real"},
      {"'007'", "7:integer"},
      {"9007199254740993", "9007199254740993:integer"},
  };
  for (const auto& [x, expected] : cases) {
    const std::string call = std::string("number_or_null(") + x + ", 999)";
    EXPECT_EQ(db.Text("SELECT " + call + " || ':' || typeof(" + call + ")"), expected);
  }
}

TEST(NumberOrNull, DropsWhatIsNoNumber) {
  const Database db;
  for (const char* x : {"NULL", "''", "'  '", "'n/a'", "'12 EUR'", "'1,5'", "'2024-01-05'", "x'31'",
                        "9e999", "'0x10'"})
    EXPECT_TRUE(db.IsNull(std::string("SELECT number_or_null(") + x + ")")) << x;
}

TEST(NumberOrNull, CodesCompareAsNumbersHoweverWritten) {
  const Database db;
  for (const char* x : {"-9", "-9.0", "'-9'", "' -9.00 '"}) {
    for (const char* code : {"-9", "-9.0", "'-9'", "'-9.0'"})
      EXPECT_TRUE(db.IsNull(std::string("SELECT number_or_null(") + x + ", 999, " + code + ")"));
    EXPECT_EQ(db.Number(std::string("SELECT number_or_null(") + x + ", 999, 'n/a', NULL, '')"), -9);
  }
  EXPECT_TRUE(db.IsNull("SELECT number_or_null('n/a', 'n/a')"));
  EXPECT_EQ(db.Number("SELECT number_or_null(0, '', NULL)"), 0);
  EXPECT_EQ(db.Text("SELECT number_or_null(9007199254740993, 9007199254740992)"),
            "9007199254740993");
  EXPECT_EQ(db.ErrorOf("SELECT number_or_null(1, x'01')"),
            "number_or_null: code must be a number or text, got a BLOB of 1 bytes");
}

TEST(Transforms, WorkInAnUntrustedSchema) {
  const Database db;  // PRAGMA trusted_schema=OFF
  db.Run(
      "CREATE TABLE repair(cost, age CHECK (number_or_null(age) >= 0 OR age IS NULL),"
      " log_cost AS (log_offset(cost, 1)) STORED,"
      " root_age AS (re_express(age, 'sqrt_offset')) VIRTUAL,"
      " opened TEXT CHECK (date_days(opened) IS NOT NULL));"
      "CREATE INDEX repair_cost ON repair(box_cox(cost, 0.25, 1));"
      "CREATE INDEX repair_opened ON repair(date_days(opened));"
      "CREATE VIEW shown AS SELECT log_offset_inverse(log_cost, 1) AS cost,"
      " date_from_days(date_days(opened) + 1) AS next_day FROM repair;"
      "CREATE TABLE log(z);"
      "CREATE TRIGGER noted AFTER INSERT ON repair"
      " BEGIN INSERT INTO log VALUES (asinh_scaled(new.cost, 0.5)); END;"
      "INSERT INTO repair(cost, age, opened) VALUES (99, 16, '2024-02-28'), ('0', '', "
      "'2023-02-28');");
  EXPECT_EQ(db.Number("SELECT root_age FROM repair WHERE cost = 99"), 4);
  EXPECT_EQ(db.Number("SELECT log_cost FROM repair WHERE cost = '0'"), 0);
  EXPECT_DOUBLE_EQ(db.Number("SELECT cost FROM shown"), 99);
  EXPECT_EQ(db.Text("SELECT next_day FROM shown"), "2024-02-29");
  EXPECT_EQ(db.Number("SELECT count(z) FROM log"), 2);
  EXPECT_NE(db.Rows("EXPLAIN QUERY PLAN SELECT * FROM repair WHERE date_days(opened) = 19781")[0][3]
                ->find("repair_opened"),
            std::string::npos);
  EXPECT_EQ(db.Number("SELECT count(*) FROM repair WHERE box_cox(cost, 0.25, 1) > 1"), 1);
  EXPECT_EQ(db.ErrorOf("INSERT INTO repair(cost, opened) VALUES (1, '2023-02-29')"),
            "CHECK constraint failed: date_days(opened) IS NOT NULL");
  EXPECT_EQ(db.Text("PRAGMA integrity_check"), "ok");
}

}  // namespace
}  // namespace ladderline::testing
