// model_for_release: the fit with merged levels against R and against real refits, what is gone
// from the text, and what cannot be given away.
#include <gmock/gmock.h>

#include <cmath>
#include <cstring>
#include <map>
#include <set>

#include "tests/sql/claims.h"
#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using nlohmann::json;
using ::testing::HasSubstr;
using ::testing::Not;

class Release : public ::testing::Test {
 protected:
  Release() {
    db.LoadCsv("firms", "boxcox/ornstein.csv");
    // 400 cases with keys, trades and districts of few rows, gaps, and costs of which each is
    // unlike any other.
    db.Run(
        "CREATE TABLE repair AS WITH RECURSIVE s(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM s "
        "WHERE i < 400) SELECT i, 'case-' || (90000 + i * 7) AS id, "
        "60.123 + i * 7919 % 1013 * 0.917 + (i % 3) * 90.031 + i * i % 17 * (1 + i % 5) AS cost, "
        "CASE WHEN i % 199 = 7 THEN NULL ELSE i * 7919 % 101 + 0.371 END AS age, "
        "CASE WHEN i % 97 = 0 THEN 'Glazing of spires' WHEN i % 131 = 0 THEN 'Chimneys' "
        "WHEN i % 61 = 0 THEN 'Locks' WHEN i % 3 = 0 THEN 'Plumbing' WHEN i % 3 = 1 THEN 'Damp' "
        "ELSE 'Roofing' END AS trade, "
        "CASE WHEN i % 101 = 0 THEN 'Saltspur Isle' WHEN i % 7 < 3 THEN 'Northfold' WHEN i % 7 < 6 "
        "THEN 'Eastmere' ELSE 'Corvane' END AS district, i * 37 % 83 + 1 AS size, i % 13 AS crew "
        "FROM s");
    db.Run(
        "CREATE VIEW merged AS SELECT i, id, cost, age, size, crew, CASE WHEN trade IN ('Glazing "
        "of spires', 'Chimneys') THEN 'other levels' ELSE trade END AS trade, CASE WHEN district "
        "IN ('Saltspur Isle', 'Corvane') THEN 'other levels' ELSE district END AS district FROM "
        "repair");
  }

  static std::string Fit(const std::string& labels, const std::string& rows) {
    return "(SELECT ols_model(" + labels + ") FROM " + rows + ")";
  }
  std::string Released(const std::string& labels, const std::string& rows, int floor = 5) const {
    return db.Text("SELECT model_for_release(" + Fit(labels, rows) + ", " + std::to_string(floor) +
                   ")");
  }
  static std::string Quoted(const std::string& text) {
    std::string quoted = "'";
    for (const char c : text) quoted += c == '\'' ? "''" : std::string(1, c);
    return quoted + "'";
  }
  std::string Problem(const std::string& labels, const std::string& rows, int floor = 5) const {
    return db.Text("SELECT model_problem(" + Quoted(Released(labels, rows, floor)) + ")");
  }

  Database db;
};

// ---- The fit with merged levels ----

TEST_F(Release, AgreesWithR) {
  const json file = ReadJson("release.json");
  ASSERT_EQ(file["cases"].size(), 6u);
  for (const json& c : file["cases"]) {
    SCOPED_TRACE(c["labels"].get<std::string>());
    const std::string model = Quoted(Released(c["labels"], "firms", c["floor"]));
    ASSERT_EQ(db.Text("SELECT model_problem(" + model + ")"), "NULL");
    const auto rows =
        db.Rows("SELECT term, coefficient, standard_error FROM model_terms(" + model + ")");
    ASSERT_EQ(rows.size(), c["terms"].size());
    std::map<std::string, std::pair<double, double>> terms;
    for (const auto& row : rows) terms[*row[0]] = {std::stod(*row[1]), std::stod(*row[2])};
    for (size_t i = 0; i < c["terms"].size(); ++i) {
      const std::string term = c["terms"][i];
      ASSERT_TRUE(terms.contains(term)) << term;
      EXPECT_TRUE(Agrees(c["coefficient"][i], terms[term].first, 10)) << term;
      EXPECT_TRUE(Agrees(c["standard_error"][i], terms[term].second, 11)) << term;
    }
    for (const char* fact :
         {"residual_sd", "r_squared", "adjusted_r_squared", "f", "log_likelihood"})
      EXPECT_TRUE(Agrees(c[fact], db.Number("SELECT fact(" + model + ", '" + fact + "')"), 11))
          << fact;
  }
}

// All that a model says of terms, tests, facts, effects and predictions, against a refit of rows in
// which the levels were merged before.
class ReleaseRefit : public Release, public ::testing::WithParamInterface<std::string> {};

TEST_P(ReleaseRefit, IsThatOfTheMergedRows) {
  const std::string labels = GetParam();
  db.Run("CREATE TABLE m AS SELECT " + Quoted(Released(labels, "repair")) + " AS released, " +
         Fit(labels, "merged") + " AS refitted");
  ASSERT_EQ(db.Text("SELECT model_problem(released) FROM m"), "NULL");
  if (const size_t at = labels.find("Chimneys"); at != std::string::npos) {
    // Its reference was merged: the commonest level stands in.
    const std::string reference =
        db.Text("SELECT reference FROM m, model_columns(released) WHERE column_name = 'trade'");
    EXPECT_EQ(reference, "Plumbing");
    std::string with = labels;
    db.Run("UPDATE m SET refitted = " + Fit(with.replace(at, 8, reference), "merged"));
  }
  const auto expect_same = [&](const std::string& columns, const std::string& table,
                               const std::string& rest, double digits) {
    const auto read = [&](const char* which) {
      return db.Rows("SELECT " + columns + " FROM m, " + table + "(" + which + rest);
    };
    const auto got = read("released"), expected = read("refitted");
    ASSERT_EQ(got.size(), expected.size()) << table;
    ASSERT_FALSE(got.empty());
    for (size_t i = 0; i < got.size(); ++i) {
      for (size_t j = 0; j < got[i].size(); ++j) {
        ASSERT_EQ(got[i][j].has_value(), expected[i][j].has_value())
            << table << " " << i << " " << j;
        if (!got[i][j] || *got[i][j] == *expected[i][j]) continue;
        EXPECT_TRUE(Agrees(std::stod(*expected[i][j]), std::stod(*got[i][j]), digits))
            << table << " " << *got[i][0] << " " << j;
      }
    }
  };
  expect_same(
      "term, column_name, category_level, transform, coefficient, low, high, "
      "standard_error, t, p_value, variance_inflation",
      "model_terms", ", 0.9, 'classical')", 9);
  expect_same("column_name, parameters, sum_of_squares, f, p_value", "model_tests", ")", 9);
  expect_same("fact, value", "model_facts",
              ") WHERE fact NOT IN ('median_absolute_error', 'press', 'smearing', 'digest', "
              "'rows_offered', 'rows_left_out', 'rows_with_gaps')",
              9);
  expect_same("column_name, kind, unit, levels, reference", "model_columns",
              ") WHERE role <> 'key'", 9);
  for (const char* check : {"condition_number", "variance_inflation", "rows_per_term"}) {
    expect_same("check_name, status, statistic, finding", "model_checks",
                std::string(") WHERE check_name = '") + check + "'", 9);
  }
  const std::string inputs = ", 'age', 40, 'trade', t.trade, 'district', t.district" +
                             std::string(labels.find("'size") == std::string::npos ||
                                                 labels.find("weight") != std::string::npos
                                             ? ""
                                             : ", 'size', 30");
  for (const std::string function : {"fitted_typical(w", "fitted_scale(w", "typical_low(w, 0.9",
                                     "case_high(w, 0.9", "leverage(w"}) {
    const std::string call = function + inputs + ")";
    const auto of = [&](const std::string& which) {
      return db.Rows("SELECT " + call + " FROM (SELECT " + which +
                     " AS w FROM m), (SELECT DISTINCT trade, district FROM merged) AS t "
                     "ORDER BY t.trade, t.district");
    };
    const auto got = of("released"), expected = of("refitted");
    ASSERT_EQ(got.size(), expected.size());
    for (size_t i = 0; i < got.size(); ++i)
      EXPECT_TRUE(Agrees(std::stod(*expected[i][0]), std::stod(*got[i][0]), 9)) << call;
  }
}

INSTANTIATE_TEST_SUITE_P(
    Kinds, ReleaseRefit,
    ::testing::Values(
        "'cost | log_offset', cost, 'age', age, 'trade', trade, 'district', district, 'k | key', "
        "id",
        "'cost', cost, 'trade | category Chimneys', trade, 'age | polynomial 3', age, "
        "'district | category Eastmere', district, 'p | product age trade', NULL",
        "'cost | sqrt_offset', cost, 'k | key', id, 'age | log_offset', age, 'size', size, "
        "'district', district, 'trade', trade, 'p | product trade size', NULL, 'n | product age "
        "size', NULL",
        "'cost | box_cox 0.25', cost, 'trade', trade, 'age | center', age, 'district', district, "
        "'size | weight', size, 'intercept | option', 'none', 'p | product age district', NULL",
        "'cost', cost, 'age', age, 'trade', trade, 'district', district, 'k | key', id, "
        "'size | weight', size"));

// Errors of the model's own kind are there; they are near those of a refit, not the same.
TEST_F(Release, OwnErrorsFollowAndOtherKindsAreGone) {
  for (const std::string kind : {"hc0", "hc3", "cluster"}) {
    SCOPED_TRACE(kind);
    const std::string labels =
        "'cost', cost, 'age', age, 'trade', trade, 'district', district, "
        "'crew | cluster', crew, 'errors | option', '" +
        kind + "'";
    const std::string model = Quoted(Released(labels, "repair"));
    for (const auto& row :
         db.Rows("SELECT a.standard_error / b.standard_error, a.term, a.note FROM model_terms(" +
                 model + ") AS a, model_terms(" + Fit(labels, "merged") + ") AS b USING (term)")) {
      ASSERT_TRUE(row[0].has_value()) << *row[1];
      if (row[1]->find("other levels") != std::string::npos) {
        EXPECT_THAT(*row[2], HasSubstr(kind + " errors are those within these levels"));
      } else {
        EXPECT_NEAR(std::stod(*row[0]), 1, 0.05) << *row[1];
      }
    }
    EXPECT_EQ(db.Number("SELECT count(*) FROM model_terms(" + model +
                        ", 0.95, 'classical') WHERE "
                        "standard_error IS NULL"),
              0);
    EXPECT_THAT(db.ErrorOf("SELECT * FROM model_terms(" + model + ", 0.95, 'hc2')"),
                HasSubstr("errors must be one of classical, "));
  }
}

// Without levels of few rows the fit stays as it is, to the bit, with all of its errors.
TEST_F(Release, WithoutSmallLevelsTheFitIsTheSame) {
  const std::string labels =
      "'interlocks', interlocks, 'assets | log_offset', assets, 'nation', "
      "nation, 'errors | option', 'hc3'";
  const std::string model = Quoted(Released(labels, "firms", 10));
  for (const std::string kind : {"classical", "hc0", "hc3"}) {
    EXPECT_EQ(
        db.Rows("SELECT * FROM model_terms(" + model + ", 0.9, '" + kind + "')"),
        db.Rows("SELECT * FROM model_terms(" + Fit(labels, "firms") + ", 0.9, '" + kind + "')"));
  }
  const std::string kept = ") WHERE fact NOT IN ('digest', 'median_absolute_error')";
  EXPECT_EQ(db.Rows("SELECT * FROM model_facts(" + model + kept),
            db.Rows("SELECT * FROM model_facts(" + Fit(labels, "firms") + kept));
  // That one is the error of a row.
  const double exact =
                   db.Number("SELECT fact(" + Fit(labels, "firms") + ", 'median_absolute_error')"),
               told = db.Number("SELECT fact(" + model + ", 'median_absolute_error')");
  EXPECT_NE(told, exact);
  EXPECT_NEAR(told, exact, 0.005 * exact);
  EXPECT_EQ(
      db.Number("SELECT count(*) FROM model_checks(" + model + ") WHERE status <> 'not computed'"),
      14);
}

// A polynomial is written over its rounded range, and says the same.
TEST_F(Release, PolynomialsSayTheSameOverARoundedRange) {
  const std::string labels = "'cost', cost, 'age | polynomial 5', age, 'size', size";
  db.Run("CREATE TABLE m AS SELECT " + Quoted(Released(labels, "repair")) + " AS a, " +
         Fit(labels, "repair") + " AS b");
  EXPECT_EQ(db.Number("SELECT observed_high FROM m, model_columns(a) WHERE column_name = 'age'"),
            110);
  for (const char* function : {"fitted_typical", "leverage"}) {
    for (const char* age : {"0.371", "40", "100.371"}) {
      const auto of = [&](const char* which) {
        return db.Number(std::string("SELECT ") + function + "(" + which + ", " + age +
                         ", 20) FROM m");
      };
      EXPECT_TRUE(Agrees(of("b"), of("a"), 11)) << function << age;
    }
  }
}

// The sum of squares of the full fit less that of the fit with merged levels would tell how far
// apart these lie: residuals are told in the size of the merged fit. The text holds bins to six
// digits or so.
TEST_F(Release, ResidualsDoNotTellOfTheFullFit) {
  db.Run(
      "CREATE TABLE visit AS WITH RECURSIVE s(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM s WHERE "
      "i < 60) SELECT i, CASE WHEN i = 60 THEN 'Locks' WHEN i > 55 THEN 'Chimneys' WHEN i % 2 "
      "THEN 'Damp' ELSE 'Plumbing' END AS trade, 50 + i * 37 % 50 + 70 * (i = 60) AS cost FROM s");
  for (const char* response : {"cost", "cost | sqrt_offset", "cost | asinh_scaled 0.01",
                               "cost | log_offset", "cost | reciprocal"}) {
    SCOPED_TRACE(response);
    const std::string labels = "'" + std::string(response) + "', cost, 'trade', trade";
    const std::string full = Fit(labels, "visit");
    const std::string released = Quoted(Released(labels, "visit"));
    const auto fact = [&](const std::string& model, const char* name) {
      return db.Number("SELECT fact(" + model + ", '" + name + "')");
    };
    const auto sum_in_bins = [&](const std::string& model) {
      return db.Number(
          "SELECT sum(rows * mean * mean + coalesce((rows - 1) * sd * sd, 0)) FROM "
          "model_residual_bins(" +
          model + ")");
    };
    const auto sum_of_fit = [&](const std::string& model) {
      return fact(model, "residual_sd") * fact(model, "residual_sd") * fact(model, "residual_df");
    };
    ASSERT_LT(sum_of_fit(full), 0.99 * sum_of_fit(released));
    EXPECT_TRUE(Agrees(sum_in_bins(full), sum_of_fit(full), 5));
    EXPECT_TRUE(Agrees(sum_in_bins(released), sum_of_fit(released), 5));
    // The second moment, where smearing has one.
    const json smearing = json::parse(db.Text("SELECT " + released))["smearing"];
    if (response != std::string("cost | sqrt_offset")) continue;
    EXPECT_TRUE(Agrees(60 * smearing["values"][2].get<double>(), sum_of_fit(released), 9));
  }
}

// Where the way back is steep, points of few rows carry the mean: none rather than a wrong one.
TEST_F(Release, MeansThatRestOnFewRowsAreLeftOut) {
  const std::string labels = "'cost | reciprocal', cost, 'age', age";
  const std::string rows = "(SELECT * FROM repair WHERE i <= 90)";
  const double mean = db.Number("SELECT fitted_mean(" + Fit(labels, rows) + ", 40)");
  const std::string released = Quoted(Released(labels, rows, 20));
  const double told = db.IsNull("SELECT fitted_mean(" + released + ", 40)")
                          ? mean
                          : db.Number("SELECT fitted_mean(" + released + ", 40)");
  EXPECT_NEAR(told, mean, 0.02 * std::abs(mean));
}

// ---- What is gone ----

// Keys, names of levels of few rows and exact values of single rows are nowhere in the text, nor
// are counts below the floor where it counts rows. What its triangle tells of levels has the floor.
TEST_F(Release, TheTextTellsNoKeyNoSmallLevelAndNoSingleRow) {
  db.Run(
      "UPDATE repair SET cost = cost * 4 WHERE i = 33; UPDATE repair SET age = 399.17 WHERE i = "
      "44");
  for (const std::string labels :
       {"'cost | log_offset', cost, 'age', age, 'trade', trade, 'district', district, 'case | "
        "key', id",
        "'cost | sqrt_offset', cost, 'trade | category Chimneys', trade, 'case | key', id, 'age', "
        "age",
        "'cost', cost, 'age | log_offset', age, 'case | key', id, 'crew | category', crew",
        "'cost | box_cox', cost, 'case | key', id, 'age', age, 'size', size, 'errors | option', "
        "'hc3'"}) {
    SCOPED_TRACE(labels);
    const std::string text = Released(labels, "repair");
    const json model = json::parse(text);
    ASSERT_EQ(model["status"], "fitted");
    for (const char* word :
         {"Glazing", "Chimneys", "Saltspur", "case-", "| key", "influence", "digest"})
      EXPECT_EQ(text.find(word), std::string::npos) << word;
    std::set<double> values;
    for (const auto& row : db.Rows("SELECT cost FROM repair UNION ALL SELECT age FROM repair"))
      if (row[0]) values.insert(std::stod(*row[0]));
    for (const json& column : model["columns"]) {
      for (const json& value : column.value("values", json::array()))
        EXPECT_FALSE(values.contains(value.get<double>())) << value;
      for (const json& level : column.value("levels", json::array()))
        EXPECT_GE(level[1].get<int>(), 5);
      EXPECT_EQ(column.value("missing", 0) % 5, 0);
    }
    EXPECT_EQ((model["rows"]["offered"].get<int>() - model["rows"]["fitted"].get<int>()) % 5, 0);
    for (const json& bin : model["residuals"]["bins"]) EXPECT_TRUE(bin[0] == 0 || bin[0] >= 5);
    for (const auto& [name, bins] : model["response_histogram"].items())
      for (const json& rows : bins["rows"]) EXPECT_TRUE(rows == 0 || rows >= 5) << name;
    const json& quantiles = model["residuals"]["quantiles"];
    EXPECT_TRUE(quantiles[0].is_null() && quantiles[1].is_null() && quantiles[10].is_null());
    for (const json& check : model["checks"]) {
      EXPECT_THAT(check["finding"].get<std::string>(), Not(HasSubstr("sds from the fit")));
      EXPECT_THAT(check.value("remedy", ""), Not(HasSubstr("model_influence")));
    }
    // No residual of a row, as the full model has it.
    for (const auto& row : db.Rows("SELECT residual FROM model_residual_quantiles(" +
                                   Fit(labels, "repair") + ") WHERE probability IN (0, 1)"))
      EXPECT_THAT(text, Not(HasSubstr(row[0]->substr(0, 9))));
  }
}

std::vector<double> Unpacked(const std::string& base64) {
  static const std::string kDigits =
      "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
  std::string bytes;
  unsigned bits = 0, held = 0;
  for (const char c : base64) {
    if (c == '=') break;
    bits = (bits << 6 | static_cast<unsigned>(kDigits.find(c))) & 0xFFFFFF;
    if ((held += 6) < 8) continue;
    held -= 8;
    bytes += static_cast<char>(bits >> held & 0xFF);
  }
  std::vector<double> numbers(bytes.size() / sizeof(double));
  std::memcpy(numbers.data(), bytes.data(), numbers.size() * sizeof(double));
  return numbers;
}

// What a reader can work out of the basis. An indicator's centre is its mean, and its sum of
// squares in R is n m (1 − m): both count the rows of its level.
TEST_F(Release, WhatTheBasisCountsIsNoLevelBelowTheFloor) {
  for (const std::string labels :
       {"'cost', cost, 'trade', trade, 'district', district, 'case | key', id",
        "'cost', cost, 'trade', trade, 'crew | category', crew, 'age', age, 'p | product trade "
        "age', "
        "NULL",
        "'cost', cost, 'trade | category Chimneys', trade, 'district', district"}) {
    for (const int floor : {5, 20, 40}) {
      SCOPED_TRACE(labels + std::to_string(floor));
      const json model = json::parse(Released(labels, "repair", floor));
      if (model["status"] != "fitted") continue;
      const double n = model["rows"]["fitted"];
      const std::vector<double> centre = Unpacked(model["basis"]["centre"]),
                                factor = Unpacked(model["basis"]["factor"]);
      std::map<int, double> left = {};
      int counted = 0;
      size_t k = 0;
      for (const json& term : model["terms"]) {
        if (term["coefficient"].is_null()) continue;
        const size_t at = k++;
        const json factors = term.value("factors", json::array());
        if (factors.size() != 1 || factors[0].size() != 3) continue;
        const double rows = n * centre[at];
        EXPECT_NEAR(rows, std::round(rows), 1e-6);
        EXPECT_GE(std::round(rows), floor) << term["name"];
        double squares = 0;
        for (size_t i = 1; i <= at; ++i) squares += std::pow(factor[at * (at + 1) / 2 + i], 2);
        EXPECT_NEAR(squares, rows * (1 - rows / n), 1e-6) << term["name"];
        const int column = factors[0][0];
        left.try_emplace(column, n).first->second -= rows;
        ++counted;
      }
      EXPECT_GT(counted, 2);
      for (const auto& [column, rows] : left) EXPECT_GE(std::round(rows), floor);
    }
  }
}

// ---- Everything else goes on working ----

TEST_F(Release, AMergedLevelIsAskedForByItsNewName) {
  const std::string model =
      Quoted(Released("'cost', cost, 'age', age, 'trade', trade, 'case | key', id", "repair"));
  EXPECT_TRUE(db.IsNull("SELECT fitted_typical(" + model + ", 40, 'Chimneys')"));
  EXPECT_FALSE(db.IsNull("SELECT fitted_typical(" + model + ", 40, 'other levels')"));
  EXPECT_EQ(db.Text("SELECT fit_note(" + model + ", 40, 'Chimneys')"),
            "trade 'Chimneys' was never seen (levels of few rows stand under 'other levels')");
  EXPECT_TRUE(db.IsNull("SELECT fit_note(" + model + ", 40, 'Damp')"));
  for (const char* function :
       {"model_effects", "model_columns", "model_cautions", "model_checks", "model_histogram",
        "model_residual_bins", "model_residual_quantiles"})
    EXPECT_GT(db.Number(std::string("SELECT count(*) FROM ") + function + "(" + model + ")"), 0)
        << function;
  EXPECT_EQ(db.Number("SELECT count(*) FROM model_influence(" + model + ")"), 0);
  const std::string brief = db.Text("SELECT model_brief(" + model + ")");
  EXPECT_THAT(brief, HasSubstr("Levels of fewer than 5 rows were put together (other levels in "
                               "trade)"));
  EXPECT_THAT(ClaimsIn(db.Text("SELECT caution FROM model_cautions(" + model +
                               ") WHERE caution LIKE 'Made for release%'")),
              ::testing::IsEmpty());
  EXPECT_THAT(db.Text("SELECT fact(model_compare(" + model + ", " + model + "), 'reading')"),
              HasSubstr("does not say which rows it was fitted to"));
  EXPECT_EQ(
      db.Text("SELECT finding FROM model_checks(" + model + ") WHERE check_name = 'leverage'"),
      "Not computed: levels of few rows were put together for release, and the rows are not "
      "at hand; the full model has it.");
}

// What checks found in the residuals goes on, less the term of a level that is no more.
TEST_F(Release, ChecksOfResidualsAreThoseOfTheFullFit) {
  db.Run("UPDATE repair SET cost = 250 + i WHERE trade = 'Chimneys'");
  const std::string labels = "'cost', cost, 'trade', trade, 'case | key', id",
                    rows = "(SELECT * FROM repair WHERE trade NOT IN ('Damp', 'Roofing'))";
  const std::string full = Fit(labels, rows), released = Quoted(Released(labels, rows));
  const std::string figures =
                        "SELECT check_name, status, printf('%.3g', statistic), df, "
                        "printf('%.3g', p_value) FROM model_checks(",
                    of_residuals =
                        ") WHERE check_name IN ('breusch_pagan', 'white', 'reset', 'jarque_bera', "
                        "'shapiro_wilk', 'residual_skewness', 'durbin_watson', 'breusch_godfrey')";
  EXPECT_EQ(db.Rows(figures + released + of_residuals), db.Rows(figures + full + of_residuals));
  const auto white = [&](const std::string& model) {
    return db.Text("SELECT finding FROM model_checks(" + model + ") WHERE check_name = 'white'");
  };
  ASSERT_THAT(white(full), HasSubstr(" the classical ones (trade is Chimneys)."));
  EXPECT_THAT(white(released), HasSubstr(" the classical ones."));
}

TEST_F(Release, ReleasingAgainWithAHigherFloorMergesFurther) {
  const std::string labels = "'cost', cost, 'age', age, 'trade', trade, 'case | key', id";
  const std::string once = Released(labels, "repair");
  EXPECT_EQ(db.Text("SELECT model_for_release(" + Quoted(once) + ", 5)"), once);
  const std::string twice = db.Text("SELECT model_for_release(" + Quoted(once) + ", 10)");
  EXPECT_EQ(db.Rows("SELECT term, round(coefficient, 9) FROM model_terms(" + Quoted(twice) + ")"),
            db.Rows("SELECT term, round(coefficient, 9) FROM model_terms(" +
                    Quoted(Released(labels, "repair", 10)) + ")"));
}

TEST_F(Release, ReleasingAgainWithALowerFloorChangesNothing) {
  const std::string once =
      Released("'cost', cost, 'age', age, 'trade', trade, 'case | key', id", "repair", 20);
  EXPECT_EQ(db.Text("SELECT model_for_release(" + Quoted(once) + ", 3)"), once);
}

// ---- What cannot be given away ----

// One row far from all others has its value in the sums: by hand, 10000 among numbers below 10 is
// nearly all of the sum of squares, and a weight of 1e6 nearly all weights.
TEST_F(Release, ARowThatDominatesIsRefused) {
  const std::string no = "not released: ";
  const std::string rows =
      "(SELECT i, size, CASE i WHEN 17 THEN 10000 ELSE i % 10 END AS x, CASE i WHEN 17 THEN 1e6 "
      "ELSE 1 + i % 3 END AS w, i * 37 % 83 AS y FROM repair WHERE i <= 60)";
  EXPECT_EQ(Problem("'y', y, 'x', x", rows),
            no + "one row has more than half of the sum of squares of x about its mean");
  EXPECT_EQ(Problem("'x', x, 'size', size", rows),
            no + "one row has more than half of the sum of squares of x about its mean");
  EXPECT_EQ(Problem("'y', y, 'x | polynomial 2', x", rows),
            no + "one row has more than half of the sum of squares of x about its mean");
  EXPECT_EQ(Problem("'y', y, 'size', size, 'w | weight', w", rows),
            no + "one row has more than half of the sum of w");
  // Two columns that are nearly one, but for a row: neither stands out, what they share does.
  EXPECT_EQ(
      Problem("'y', y, 'size', size, 'again', size + CASE i WHEN 17 THEN 40 ELSE i % 3 END", rows),
      no + "a row decides more than half of its own fitted value");
  EXPECT_EQ(Problem("'y', y, 'size', size", rows), "NULL");
}

// Two rows at the end of a parabola have a leverage of 1/2 each, whatever the others are.
TEST_F(Release, FewRowsAtTheEndOfAPolynomialAreRefused) {
  const auto problem = [&](const std::string& at_end, const std::string& label) {
    return Problem("'y', y, '" + label + "', x",
                   "(SELECT i * 37 % 83 AS y, CASE WHEN i <= " + at_end +
                       " THEN 2 ELSE i % 2 END AS x FROM repair WHERE i <= 60)");
  };
  EXPECT_EQ(problem("2", "x | polynomial 2"),
            "not released: fewer than 5 rows stand at an end of x");
  EXPECT_EQ(problem("4", "x | polynomial 2"),
            "not released: fewer than 5 rows stand at an end of x");
  EXPECT_EQ(problem("5", "x | polynomial 2"), "NULL");
  EXPECT_EQ(Problem("'y', i * 37 % 83, 'x | polynomial 1', i = 7 OR i = 9", "repair"),
            "not released: one of the two values of x has fewer than 5 rows");
}

TEST_F(Release, EndsOfRangesAreNoRowsValue) {
  const std::string model = Quoted(
      Released("'age', 18 + i * 7919 % 80, 'size', size, 'day | date_days', date('2024-01-03', "
               "(i * 37 % 89) || ' days')",
               "repair"));
  EXPECT_EQ(db.Text("SELECT group_concat(observed_low || ' ' || observed_high, ', ') FROM "
                    "model_columns(" +
                    model + ") WHERE column_name IN ('age', 'day')"),
            "15.0 100.0, 2024-01-03 2024-04-02");
  EXPECT_EQ(
      db.Text("SELECT min(low) <= 15 AND max(high) >= 100 FROM model_histogram(" + model + ")"),
      "1");
}

// Of level a one row alone has x; that levels of another name were merged changes nothing of it.
TEST_F(Release, ATermOfOneRowIsRefusedWhateverWasMerged) {
  const std::string rows =
      "(SELECT i, i * 37 % 83 AS y, CASE WHEN i > 58 THEN 'rare' WHEN i % 2 THEN 'a' ELSE 'b' END "
      "AS k, CASE WHEN i <= 58 AND i % 2 AND i <> 7 THEN 0 ELSE i % 10 END AS x FROM repair WHERE "
      "i <= 60 UNION ALL SELECT 60 + i, i, 'c', i FROM repair WHERE i <= 6)";
  EXPECT_EQ(Problem("'y', y, 'k | category b', k, 'x', x, 'p | product k x', NULL", rows),
            "not released: a term rests on one row");
}

TEST_F(Release, WhatTellsOfRowsIsRefusedInWords) {
  const std::string no = "not released: ";
  EXPECT_EQ(Problem("'cost', cost, 'age', age", "(SELECT * FROM repair LIMIT 4)"),
            no + "fewer than 5 rows were fitted");
  EXPECT_EQ(Problem("'cost', cost, 'age', age", "(SELECT * FROM repair LIMIT 6)"),
            no + "it has fewer than 5 rows more than terms, and would repeat single ones");
  EXPECT_EQ(Problem("'cost', cost, 'trade', trade",
                    "(SELECT * FROM repair WHERE i <= 60 AND trade IN ('Damp', 'Plumbing'))", 25),
            no + "all levels of trade together would be one");
  EXPECT_EQ(Problem("'cost', cost, 'urgent', trade = 'Chimneys'", "repair"),
            no + "one of the two values of urgent has fewer than 5 rows");
  EXPECT_EQ(Problem("'cost', cost, 'age | rescale', age", "repair"),
            no + "rescale holds the least and the largest age; write rounded ones in the label");
  EXPECT_EQ(Problem("'cost', cost, 'trade', trade, 'district', district, 'p | product trade "
                    "district', NULL",
                    "merged"),
            no + "a cell of trade and district has fewer than 5 rows");
  EXPECT_EQ(Problem("'cost', cost, 'size | weight', size, 'trade', trade, 'district', district, 'p "
                    "| product trade district', NULL",
                    "merged"),
            no + "how many rows trade and district share cannot be counted under weights");
  EXPECT_EQ(Problem("'cost', cost, 'trade', trade, 'size', size, 'near', size + (i = 9)", "repair"),
            no + "a term rests on one row");
  EXPECT_EQ(Problem("'cost', cost, 'age', age, 'trade', trade, 'isle', district = 'Saltspur Isle' "
                    "AND 0, 'p | product trade age', NULL",
                    "repair"),
            "NULL");
  // A refused release says nothing of rows, and stays a model that can be read.
  const std::string text =
      Released("'cost', cost, 'age', age, 'trade', trade, 'k | key', id", "repair", 900);
  EXPECT_THAT(text, Not(HasSubstr("Chimneys")));
  EXPECT_EQ(json::parse(text)["rows"]["fitted"], 0);
  EXPECT_EQ(db.Text("SELECT value FROM model_facts(" + Quoted(text) + ")"), "refused");
}

TEST_F(Release, ProductsOfCategoriesWithFullCellsAreReleased) {
  const std::string rows = "(SELECT * FROM merged WHERE trade IN ('Damp', 'Plumbing', 'Roofing'))";
  EXPECT_EQ(Problem("'cost', cost, 'trade', trade, 'district', district, 'p | product trade "
                    "district', NULL",
                    rows),
            "NULL");
  EXPECT_EQ(Problem("'cost', cost, 'trade', trade, 'urgent', i % 2, 'p | product trade urgent', "
                    "NULL",
                    rows),
            "NULL");
}

TEST_F(Release, ReasonsOfRefusedModelsLoseWhatTheySayOfRows) {
  EXPECT_EQ(Problem("'cost', cost, 'age', age", "(SELECT * FROM repair WHERE false)"), "no rows");
  EXPECT_EQ(Problem("'cost', cost, 'a', age, 'b', i, 'c', size", "(SELECT * FROM repair LIMIT 3)"),
            "too few rows");
  EXPECT_EQ(Problem("'cost', cost, 'age', NULL", "(SELECT * FROM repair LIMIT 3)"),
            "no complete rows");
  EXPECT_EQ(Problem("'cost', cost, 'trade | category Gutters', trade", "repair"),
            "no complete row has the reference level of a category");
  EXPECT_EQ(Problem("'cost', cost, 'size | box_cox', 3.25", "repair"),
            "a re-expression cannot be estimated");
  const std::string text =
      Released("'cost', cost, 'trade | category Gutters', trade, 'k | key', id", "repair");
  EXPECT_THAT(text, Not(HasSubstr("Damp")));
  EXPECT_THAT(text, Not(HasSubstr("key")));
}

TEST_F(Release, BadCallsAreErrors) {
  const std::string model = Fit("'cost', cost, 'age', age", "repair");
  EXPECT_TRUE(db.IsNull("SELECT model_for_release(NULL, 5)"));
  EXPECT_TRUE(db.IsNull("SELECT model_for_release(" + model + ", NULL)"));
  EXPECT_EQ(db.ErrorOf("SELECT model_for_release(" + model + ", 0)"),
            "model_for_release: floor must be a whole number from 1 to 9007199254740992, got 0");
  EXPECT_THAT(db.ErrorOf("SELECT model_for_release('x', 5)"), HasSubstr("model must be a model"));
}

}  // namespace
}  // namespace ladderline::testing
