// ols_model against R 4.2 (base, car, sandwich) on open data and against NIST's certified values,
// through SQL alone; and what bad input gets.
#include <gmock/gmock.h>

#include <cmath>

#include "core/support/text.h"
#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using nlohmann::json;
using ::testing::EndsWith;
using ::testing::HasSubstr;

constexpr double kDigits = 9;

double NumberOr(const json& value) { return value.is_null() ? std::nan("") : value.get<double>(); }

// Compares one column of a table-valued function, in order, with an array of numbers.
void ExpectColumn(const Database& db, const std::string& sql, const json& expected) {
  const auto rows = db.Rows(sql);
  ASSERT_EQ(rows.size(), expected.size()) << sql;
  for (size_t i = 0; i < rows.size(); ++i) {
    const double got = rows[i][0] ? std::stod(*rows[i][0]) : std::nan("");
    EXPECT_TRUE(Agrees(NumberOr(expected[i]), got, kDigits)) << sql << " row " << i;
  }
}

// Every figure of tests/reference/labelled_models.json for the model kept in table m.
void ExpectModel(const Database& db, const std::string& name) {
  const json all = ReadJson("labelled_models.json");
  const json& r = all["models"][name];
  ExpectColumn(db, "SELECT coefficient FROM m, model_terms(m.model)", r["coefficients"]);
  for (const std::string kind : {"classical", "hc0", "hc1", "hc2", "hc3"}) {
    ExpectColumn(db, "SELECT standard_error FROM m, model_terms(m.model, 0.95, '" + kind + "')",
                 r[kind == "classical" ? "standard_error" : kind]);
  }
  for (const std::string fact :
       {"rows_fitted", "residual_df", "residual_sd", "r_squared", "adjusted_r_squared", "f",
        "f_df1", "f_df2", "f_p", "log_likelihood", "aic", "bic", "log_likelihood_original",
        "aic_original", "press", "median_absolute_error"}) {
    EXPECT_TRUE(
        Agrees(NumberOr(r[fact]), db.Number("SELECT fact(model, '" + fact + "') FROM m"), kDigits))
        << name << " " << fact;
  }
  ExpectColumn(db, "SELECT parameters FROM m, model_tests(m.model)", r["test_parameters"]);
  ExpectColumn(db, "SELECT sum_of_squares FROM m, model_tests(m.model)", r["test_sum_of_squares"]);
  ExpectColumn(db, "SELECT f FROM m, model_tests(m.model)", r["test_f"]);
  ExpectColumn(db, "SELECT p_value FROM m, model_tests(m.model)", r["test_p"]);
  ExpectColumn(
      db,
      "SELECT min(variance_inflation) FROM m, model_terms(m.model) WHERE column_name IS NOT "
      "NULL GROUP BY column_name ORDER BY min(position)",
      r["inflation"]);
  ExpectColumn(db, "SELECT key FROM m, model_influence(m.model) LIMIT 5", r["influential_rows"]);
  ExpectColumn(db, "SELECT cooks_distance FROM m, model_influence(m.model) LIMIT 5",
               r["cooks_distance"]);
  ExpectColumn(db, "SELECT leverage FROM m, model_influence(m.model) LIMIT 5", r["leverage"]);
  ExpectColumn(db, "SELECT studentized_residual FROM m, model_influence(m.model) LIMIT 5",
               r["studentized_residual"]);
}

TEST(OlsModel, LogsAndCategoriesAgreeWithR) {
  const Database db;
  db.LoadCsv("ornstein", "boxcox/ornstein.csv");
  db.Run(
      "CREATE TABLE m AS SELECT ols_model('interlocks | log_offset 1', interlocks, "
      "'assets | log_offset', assets, 'sector', sector, 'nation', nation) AS model FROM ornstein");
  ExpectModel(db, "ornstein_log");
  const json r = ReadJson("labelled_models.json");
  EXPECT_TRUE(Agrees(r["smearing"]["ornstein_log"],
                     db.Number("SELECT fact(model,'smearing') FROM m"), kDigits));
  ExpectColumn(db,
               "SELECT value FROM (SELECT observed_low AS v1, lower_quartile AS v2, upper_quartile "
               "AS v3, observed_high AS v4, mean AS v5, sd AS v6 FROM m, model_columns(m.model) "
               "WHERE column_name = 'assets') c, json_each(json_array(v1,v2,v3,v4,v5,v6))",
               r["columns"]["assets"]);
}

TEST(OlsModel, WeightsAndASquareRootAgreeWithR) {
  const Database db;
  db.LoadCsv("trees", "boxcox/trees.csv");
  db.Run(
      "CREATE TABLE m AS SELECT ols_model('Volume | sqrt_offset', Volume, 'Girth', Girth, "
      "'Height', "
      "Height, 'w | weight', Height / 50.0) AS model FROM trees");
  ExpectModel(db, "trees_weighted");
}

TEST(OlsModel, WithoutInterceptAgreesWithR) {
  const Database db;
  db.LoadCsv("trees", "boxcox/trees.csv");
  db.Run(
      "CREATE TABLE m AS SELECT ols_model('Volume', Volume, 'Girth', Girth, 'Height', Height, "
      "'intercept | option', 'none') AS model FROM trees");
  ExpectModel(db, "trees_no_intercept");
}

TEST(OlsModel, FirstCategoryWithoutInterceptGetsAllIndicators) {
  const Database db;
  db.LoadCsv("poisons", "boxcox/poisons.csv");
  db.Run(
      "CREATE TABLE m AS SELECT ols_model('time | negative_reciprocal', time, 'poison | category', "
      "poison, 'treat | category A', treat, 'intercept | option', 'none') AS model FROM poisons");
  ExpectModel(db, "poisons_no_intercept");
}

// The digits the issue of accuracy is settled by; the table is printed for the record.
TEST(OlsModel, NistRegressionsKeepTheirDigits) {
  struct Set {
    const char *name, *call;
    double coefficients, errors;
  };
  constexpr const char* kLine = "ols_model_plain(y, x)";
  constexpr const char* kPowers5 = "ols_model_plain(y, x, x*x, x*x*x, x*x*x*x, x*x*x*x*x)";
  const Set sets[] = {
      {"Norris", kLine, 13, 13},
      {"Pontius", "ols_model_plain(y, x, x*x)", 13, 13},
      {"NoInt1", "ols_model('y', y, 'x', x, 'intercept | option', 'none')", 13, 13},
      {"NoInt2", "ols_model('y', y, 'x', x, 'intercept | option', 'none')", 13, 13},
      {"Longley", "ols_model_plain(y, x1, x2, x3, x4, x5, x6)", 13, 13},
      {"Wampler1", kPowers5, 13, 9},
      {"Wampler2", kPowers5, 13, 9},
      {"Wampler3", kPowers5, 13, 13},
      {"Wampler4", kPowers5, 13, 13},
      {"Wampler5", kPowers5, 13, 13},
      {"Filip",
       "ols_model_plain(y, x, pow(x,2), pow(x,3), pow(x,4), pow(x,5), pow(x,6), pow(x,7), "
       "pow(x,8), pow(x,9), pow(x,10))",
       7, 7},
  };
  const json certified = ReadJson("nist/certified.json");
  std::printf("%-10s %12s %15s %12s\n", "set", "coefficients", "standard errors", "residual sd");
  for (const Set& set : sets) {
    const Database db;
    db.LoadCsv("d", std::string("nist/") + set.name + ".csv");
    const json& truth = certified["sets"][set.name];
    db.Run("CREATE TABLE m AS SELECT " + std::string(set.call) +
           " AS model FROM (SELECT d.*, 1.0 * d.y AS y FROM d)");
    const auto terms = db.Rows("SELECT coefficient, standard_error FROM m, model_terms(m.model)");
    ASSERT_EQ(terms.size(), truth["coefficients"].size()) << set.name;
    double coefficients = 15, errors = 15;
    for (size_t i = 0; i < terms.size(); ++i) {
      ASSERT_TRUE(terms[i][0] && terms[i][1]) << set.name << " term " << i;
      const json& c = truth["coefficients"][i];
      coefficients = std::min(
          coefficients,
          DigitsAgreed(std::stod(c["estimate"].get<std::string>()), std::stod(*terms[i][0])));
      errors = std::min(errors, DigitsAgreed(std::stod(c["std_dev"].get<std::string>()),
                                             std::stod(*terms[i][1])));
    }
    const double sd = DigitsAgreed(std::stod(truth["residual_sd"].get<std::string>()),
                                   db.Number("SELECT fact(model, 'residual_sd') FROM m"));
    std::printf("%-10s %12.1f %15.1f %12.1f\n", set.name, coefficients, errors, sd);
    EXPECT_GE(coefficients, set.coefficients) << set.name;
    EXPECT_GE(errors, set.errors) << set.name;
  }
}

std::string ModelError(const Database& db, const std::string& arguments,
                       const std::string& from = "t") {
  return db.ErrorOf("SELECT ols_model(" + arguments + ") FROM " + from);
}

class OlsModelInput : public ::testing::Test {
 protected:
  OlsModelInput() {
    db_.Run(
        "CREATE TABLE t(id, cost, age, trade, code, day, n);"
        "INSERT INTO t VALUES (1, 120, 10, 'Damp', '03', '2024-01-05', 1),"
        "(2, 300, 40, 'Roof', '04', '2024-02-01', 2), (3, 90, 5, 'Damp', '03', '2024-03-09', 1),"
        "(4, 200, 20, 'Roof', '05', '2024-03-30', 3), (5, 150, 33, 'Damp', '03', '2024-05-02', 2)");
  }
  Database db_;
};

TEST_F(OlsModelInput, WrongTypesNameColumnValueAndRow) {
  db_.Run("INSERT INTO t(id, cost, age) VALUES (6, 10, 'n/a')");
  EXPECT_EQ(ModelError(db_, "'cost', cost, 'age', age"),
            "ols_model: age must be a number, got text 'n/a' (row 6); for codes write "
            "'age | category'");
  EXPECT_EQ(ModelError(db_, "'cost', trade"),
            "ols_model: cost must be a number, got text 'Damp' (row 1); for values that are no "
            "numbers use number_or_null(cost)");
  EXPECT_EQ(ModelError(db_, "'cost', cost, 'age | number', age"),
            "ols_model: age must be a number, got text 'n/a' (row 6); for values that are no "
            "numbers use number_or_null(age)");
  EXPECT_EQ(ModelError(db_, "'cost', cost, 'building age | number', age"),
            "ols_model: building age must be a number, got text 'n/a' (row 6); for values that are "
            "no numbers use number_or_null");
  EXPECT_EQ(ModelError(db_, "'cost', cost, 'b', x'0102'"),
            "ols_model: b must be a number or text, got a BLOB of 2 bytes (row 1)");
  EXPECT_EQ(ModelError(db_, "'cost', cost, 'age', 9e999"),
            "ols_model: age must be a number, got an infinity (row 1)");
}

TEST_F(OlsModelInput, CodesAndDatesAskForAKind) {
  EXPECT_EQ(ModelError(db_, "'cost', cost, 'code', code"),
            "ols_model: code has a leading zero, which a number would lose, got text '03' (row 1); "
            "write 'code | category' for codes or 'code | number'");
  EXPECT_EQ(ModelError(db_, "'cost', cost, 'day', day"),
            "ols_model: day is a date, and its label does not say how to use it, got text "
            "'2024-01-05' (row 1); write 'day | date_days' or 'day | category'");
  EXPECT_EQ(
      db_.Number("SELECT fact(ols_model('cost', cost, 'day | date_days', day), 'terms') FROM t"),
      2);
  EXPECT_EQ(
      db_.Number("SELECT fact(ols_model('cost', cost, 'code | number', code), 'terms') FROM t"), 2);
  EXPECT_EQ(
      db_.Number("SELECT fact(ols_model('cost', cost, 'code | category', code), 'terms') FROM t"),
      3);
}

TEST_F(OlsModelInput, LabelInDoubleQuotesIsRecognisedByItsValue) {
  db_.Run("CREATE TABLE dirty(cost, day); INSERT INTO dirty VALUES ('TBC', '2024-01-05')");
  const auto error = [&](const std::string& arguments) {
    return db_.ErrorOf("SELECT ols_model(" + arguments + ") FROM dirty");
  };
  EXPECT_EQ(
      error("\"cost\", cost"),
      "ols_model: TBC must be a number, got text 'TBC' (row 1); write labels in single quotes");
  EXPECT_EQ(error("'y', 1, \"cost\", 2, 'x | number', cost"),
            "ols_model: x must be a number, got text 'TBC' (row 1); for values that are no numbers "
            "use number_or_null(x)");
  EXPECT_EQ(error("'y', 1, \"day\", day"),
            "ols_model: 2024-01-05 is a date, and its label does not say how to use it, got text "
            "'2024-01-05' (row 1); write labels in single quotes");
}

TEST_F(OlsModelInput, ColumnThatMixesTextAndNumbersIsAnError) {
  EXPECT_EQ(ModelError(db_, "'cost', cost, 'm', CASE id WHEN 3 THEN 12 ELSE trade END"),
            "ols_model: m mixes numbers with other text, got text 'Damp' (row 1) and 12 (row 3); "
            "number_or_null makes NULL of words, for codes write 'm | category'");
  EXPECT_THAT(ModelError(db_, "'cost', cost, 'm', CASE id WHEN 3 THEN trade ELSE 12 END"),
              HasSubstr("(row 3); for codes write 'm | category'"));
}

TEST_F(OlsModelInput, LabelsMustBeConstantTextOnce) {
  EXPECT_EQ(ModelError(db_, "120.5, cost"),
            "ols_model: label 1 must be text, got 120.5; write labels in single quotes");
  EXPECT_THAT(ModelError(db_, "'cost', cost, \"age\", age"),
              HasSubstr("label 2 must be text, got 10; write labels in single quotes"));
  EXPECT_THAT(ModelError(db_, "'cost', cost, trade, age"),
              HasSubstr("label 2 must be the same in every row, got 'Damp' and then text 'Roof'"));
  EXPECT_THAT(ModelError(db_, "'cost', cost, 'age', age, 'age', n"),
              HasSubstr("label 'age' is given twice"));
  EXPECT_THAT(ModelError(db_, "'cost', cost, 'age | lg', age"), HasSubstr("log_offset"));
  EXPECT_THAT(ModelError(db_, "'cost', cost, '', age"), HasSubstr("label is empty"));
  EXPECT_THAT(ModelError(db_, "'cost', cost, 'age'"), HasSubstr("in pairs, got 3 arguments"));
  EXPECT_THAT(ModelError(db_, "'cost', cost, CAST(x'61ff' AS TEXT), age"), HasSubstr("not UTF-8"));
}

TEST_F(OlsModelInput, ResponseMustComeFirstAndBeANumber) {
  EXPECT_THAT(ModelError(db_, "'trade | category', trade, 'age', age"),
              HasSubstr("must be a number"));
  EXPECT_THAT(ModelError(db_, "'level | option', 0.9"), HasSubstr("not an option"));
}

TEST_F(OlsModelInput, OptionsAreChecked) {
  const std::string head = "'cost', cost, 'age', age, ";
  EXPECT_THAT(ModelError(db_, head + "'level | option', 95"),
              HasSubstr("option level must be a number between 0 and 1, got 95; write 0.95"));
  EXPECT_THAT(ModelError(db_, head + "'level | option', 99.9"), HasSubstr("; write 0.999"));
  EXPECT_THAT(ModelError(db_, head + "'level | option', 1"), EndsWith("got 1"));
  EXPECT_THAT(ModelError(db_, head + "'errors | option', 'robust'"),
              HasSubstr("or 'cluster', got text 'robust'"));
  EXPECT_THAT(ModelError(db_, head + "'colour | option', 'red'"),
              HasSubstr("is unknown; known are"));
  EXPECT_THAT(ModelError(db_, head + "'level | option', 0.9, 'level | option', 0.9"),
              HasSubstr("given twice"));
}

TEST_F(OlsModelInput, GapsAndOutsideValuesAreCountedByColumn) {
  db_.Run(
      "INSERT INTO t VALUES (6, NULL, ' ', 'Damp', '03', '2024-01-05', 1), (7, -5, 3, '', '03', "
      "'', 1)");
  db_.Run(
      "CREATE TABLE m AS SELECT ols_model('cost | log_offset', cost, 'age', age, 'trade', trade, "
      "'case | key', id) AS model FROM t");
  const auto facts = db_.Rows(
      "SELECT fact(model,'rows_offered'), fact(model,'rows_fitted'), fact(model,'rows_left_out'), "
      "fact(model,'rows_with_gaps'), fact(model,'rows_outside') FROM m");
  EXPECT_EQ(facts[0], (Database::Row{"7", "5", "2", "2", "1"}));
  const auto columns =
      db_.Rows("SELECT column_name, missing, outside FROM m, model_columns(m.model)");
  EXPECT_EQ(columns[0], (Database::Row{"cost", "1", "1"}));
  EXPECT_EQ(columns[1], (Database::Row{"age", "1", "0"}));
  EXPECT_EQ(columns[2], (Database::Row{"trade", "1", "0"}));
}

TEST_F(OlsModelInput, KeysOfSeveralRowsAreNoted) {
  const auto note = [&](const std::string& key) {
    return db_.Text("SELECT note FROM (SELECT ols_model('cost', cost, 'age', age, 'case | key', " +
                    key + ") AS m FROM t), model_columns(m) WHERE role = 'key'");
  };
  EXPECT_EQ(note("id"), "NULL");
  EXPECT_EQ(note("trade"), "2 values occur more than once");
  EXPECT_EQ(note("code"), "1 value occurs more than once");
  EXPECT_EQ(note("iif(id < 4, NULL, id)"), "NULL");
}

TEST_F(OlsModelInput, ShortageOfDataIsARefusedModel) {
  const auto reason = [&](const std::string& arguments, const std::string& from) {
    return db_.Text("SELECT model_problem(ols_model(" + arguments + ")) FROM " + from);
  };
  EXPECT_EQ(reason("'cost', cost, 'age', age", "t WHERE 0"), "no rows");
  EXPECT_THAT(reason("'cost', NULL, 'age', age", "t"),
              HasSubstr("no complete rows among 5 rows offered; cost is missing in 5"));
  EXPECT_EQ(reason("'cost', cost, 'age', age, 'n', n", "t WHERE id <= 2"), "needs 3 rows, has 2");
  EXPECT_EQ(reason("'cost', cost, 'trade | category Plumbing', trade", "t"),
            "no complete row has the reference level 'Plumbing' of trade");
  EXPECT_EQ(reason("'cost', cost, 'trade | category damp', trade", "t"),
            "no complete row has the reference level 'damp' of trade; there is 'Damp'");
  EXPECT_THAT(reason("'cost', cost, 'age', age, 'w | weight', 0", "t"),
              HasSubstr("w is outside its domain in 5"));
}

TEST_F(OlsModelInput, NegativeWeightIsAnError) {
  EXPECT_EQ(ModelError(db_, "'cost', cost, 'age', age, 'w | weight', 2 - id"),
            "ols_model: w must not be negative, got -1 (row 3)");
}

TEST_F(OlsModelInput, CollinearColumnsKeepTheirRowAndAreNamed) {
  const auto terms = db_.Rows(
      "SELECT term, coefficient, note FROM (SELECT ols_model('cost', cost, 'age', age, 'n', n, "
      "'both', age + 2 * n, 'one', 1) AS model FROM t) m, model_terms(m.model)");
  ASSERT_EQ(terms.size(), 5u);
  EXPECT_TRUE(terms[2][1].has_value());
  EXPECT_FALSE(terms[3][1].has_value());
  EXPECT_EQ(*terms[3][2], "left out: repeats age, n");
  EXPECT_FALSE(terms[4][1].has_value());
  EXPECT_EQ(*terms[4][2], "left out: always the same value");
}

TEST_F(OlsModelInput, SaturatedAndExactFitsGiveNoErrors) {
  db_.Run(
      "CREATE TABLE m AS SELECT ols_model('cost', cost, 'age', age) AS model FROM t WHERE id <= 2");
  EXPECT_TRUE(
      Agrees(6, db_.Number("SELECT coefficient(model, 'age') FROM m"), 14));  // (300−120)/30
  EXPECT_TRUE(db_.IsNull("SELECT standard_error FROM m, model_terms(m.model)"));
  EXPECT_EQ(db_.Number("SELECT fact(model, 'residual_df') FROM m"), 0);
  db_.Run("CREATE TABLE e AS SELECT ols_model('y', 3 + 2 * age, 'age', age) AS model FROM t");
  EXPECT_TRUE(db_.IsNull("SELECT fact(model, 'log_likelihood') FROM e"));
  EXPECT_TRUE(Agrees(2, db_.Number("SELECT coefficient(model, 'age') FROM e"), 14));
}

TEST_F(OlsModelInput, LevelOfOneRowGetsNoRobustErrors) {
  const auto terms = db_.Rows(
      "SELECT term, standard_error, note FROM (SELECT ols_model('cost', cost, 'code | category', "
      "code, 'errors | option', 'hc3') AS model FROM t) m, model_terms(m.model)");
  ASSERT_EQ(terms.size(), 3u);
  EXPECT_EQ(*terms[1][0], "code is 04");
  EXPECT_FALSE(terms[1][1].has_value());
  EXPECT_THAT(*terms[1][2], HasSubstr("one row alone"));
}

TEST_F(OlsModelInput, TooManyLevelsOrTermsAreARefusedModel) {
  const std::string many =
      "(WITH RECURSIVE c(i) AS (SELECT 0 UNION ALL SELECT i + 1 FROM c WHERE i < 1499) "
      "SELECT i, 'level ' || (i % 501) AS a, 'x' || (i % 500) AS b, 'y' || ((i / 3) % 500) AS c, "
      "'z' || ((i * 7 + i / 11) % 500) AS d FROM c)";
  const auto reason = [&](const std::string& arguments) {
    return db_.Text("SELECT model_problem(ols_model(" + arguments + ")) FROM " + many);
  };
  EXPECT_EQ(reason("'i', i, 'a', a"), "a has more than 500 levels; is it a key, or a number?");
  EXPECT_THAT(reason("'i', i, 'b', b, 'c', c, 'd', d"),
              HasSubstr("terms; a model takes at most 1000"));
}

TEST_F(OlsModelInput, NumbersBeyondTheRangeOfAFitAreARefusedModel) {
  for (const std::string arguments : {"'y', (n % 7) * 1e200, 'x', n * 1e-150",
                                      "'y', n % 7, 'x', n * 1e-200, 'w | weight', 1e-300"}) {
    const std::string problem = db_.Text(
        "WITH RECURSIVE c(n) AS (SELECT 1 UNION ALL SELECT n + 1 FROM c WHERE n < 20) SELECT "
        "coalesce(model_problem(ols_model(" +
        arguments + ")), 'sound') FROM c");
    EXPECT_THAT(problem, HasSubstr("too large or too small")) << arguments;
  }
  // Fitted values or coefficients out of range, found by a search for texts that do not read back.
  for (const char* rows : {"(9e307,9e307),(1e307,1e307),(1e307,9e307),(1.7e308,3),(1e307,1.7e308),"
                           "(1.7e308,1),(1.7e308,1),(9e307,9e307)",
                           "(3,4e-306),(3,0),(3,2e-306),(1,1e-306),(2,1.5e-306)"}) {
    for (const char* label : {"x", "x | power_of -0.5"}) {
      EXPECT_NO_THROW(db_.Text("WITH d(y, x) AS (VALUES " + std::string(rows) +
                               ") SELECT model_problem(ols_model('y', y, '" + label +
                               "', x)) FROM d"))
          << rows << label;
    }
  }
}

// 2^±540 are powers of two: whatever is no multiple of the response must come out bit for bit, also
// through the model's text.
TEST_F(OlsModelInput, ResponsesAtTheEndsOfTheRangeHaveTheSameRatios) {
  const auto figures = [&](const std::string& unit) {
    const std::string model =
        "(WITH RECURSIVE c(n) AS (SELECT 1 UNION ALL SELECT n + 1 FROM c WHERE n < 20) SELECT "
        "ols_model('y', (n % 7) * " +
        unit + ", 'x | number', n, 'errors | option', 'hc3') FROM c)";
    return db_.Rows("SELECT t, p_value, standard_error / " + unit + " FROM model_terms(" + model +
                    ", 0.95, 'classical'" +
                    ") UNION ALL SELECT fact(m, 'f'), fact(m, 'r_squared'), (case_high(m, 0.9, 4) "
                    "- typical_low(m, 0.9, 4)) / " +
                    unit + " FROM (SELECT " + model + " AS m)");
  };
  const auto plain = figures("1.0");
  ASSERT_EQ(plain.size(), 3u);
  for (const int exponent : {-540, 540})
    EXPECT_EQ(figures(NumberText(std::ldexp(1.0, exponent))), plain);
}

TEST_F(OlsModelInput, ArgumentLimitOfTheHostIsInWords) {
  std::string pairs = "'y', cost";
  for (int i = 1; i < 63; ++i) pairs += ", 'x" + std::to_string(i) + "', age";
  EXPECT_EQ(ModelError(db_, pairs), "(no error)");
  EXPECT_THAT(ModelError(db_, pairs + ", 'x63', age"), HasSubstr("too many arguments"));
}

TEST_F(OlsModelInput, QuotesAndEmojiInLabelsAndLevelsSurvive) {
  db_.Run(
      "CREATE TABLE m AS SELECT ols_model('cost', cost, '\"the \"\"old\"\" | 🏠\"', CASE WHEN id < "
      "3 THEN "
      "'a \"b\" \\ 🏚' ELSE 'c' END) AS model FROM t");
  EXPECT_EQ(db_.Text("SELECT group_concat(term, ';') FROM m, model_terms(m.model)"),
            "intercept;the \"old\" | 🏠 is a \"b\" \\ 🏚");
  EXPECT_THAT(ModelError(db_, "'cost', cost, 'c', CAST(x'ff41' AS TEXT)"),
              HasSubstr("c must be UTF-8 text"));
}

// Levels come, leave and come again in another order: bit for bit the same nevertheless.
TEST_F(OlsModelInput, EarlierFramesLeaveNoTrace) {
  const std::string rows =
      "WITH RECURSIVE n(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM n WHERE i < 60), d AS (SELECT "
      "i, 1 + ((i * 37) % 41) / 7.0 AS y, (i * 17) % 23 / 3.0 AS x, 'g' || ((i * i + i / 7) % 5) "
      "AS g FROM n) ";
  const std::string call = "ols_model('y | box_cox', y, 'x', x, 'g', g)";
  EXPECT_EQ(db_.Number(rows + ", o AS (SELECT i, " + call +
                       " OVER (ORDER BY i ROWS 24 PRECEDING) AS m FROM d) SELECT count(*) FROM o "
                       "WHERE m <> (SELECT " +
                       call +
                       " FROM (SELECT * FROM d WHERE d.i BETWEEN o.i - 24 AND o.i ORDER BY "
                       "i))"),
            0);
}

TEST_F(OlsModelInput, MovingFramesAgreeWithTheSameRowsFitAfresh) {
  for (const std::string call :
       {"ols_model('cost', cost, 'age', age, 'trade', trade, 'k | key', id)",
        "ols_model('cost', cost, 'age', age)"}) {
    const auto moving =
        db_.Rows("SELECT id, " + call + " OVER (ORDER BY id ROWS 3 PRECEDING) FROM t ORDER BY id");
    for (const auto& row : moving) {
      EXPECT_EQ(*row[1], db_.Text("SELECT " + call + " FROM t WHERE id BETWEEN " + *row[0] +
                                  " - 3 AND " + *row[0]))
          << "row " << *row[0];
    }
  }
}

TEST_F(OlsModelInput, EachGroupGetsItsOwnModel) {
  const auto rows = db_.Rows(
      "SELECT trade, model_problem(ols_model('cost', cost, 'age', age, 'n', n)) FROM t GROUP BY "
      "trade "
      "ORDER BY trade");
  ASSERT_EQ(rows.size(), 2u);
  EXPECT_FALSE(rows[0][1].has_value());
  EXPECT_EQ(*rows[1][1], "needs 3 rows, has 2");
}

}  // namespace
}  // namespace ladderline::testing
