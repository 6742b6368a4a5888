// Polynomials and products through SQL: against R on open data, against exact rational arithmetic,
// against NIST's certified values; and what bad labels get.
#include <gmock/gmock.h>

#include <cmath>

#include "core/support/text.h"
#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using nlohmann::json;
using ::testing::HasSubstr;

constexpr double kDigits = 9;

double NumberOf(const std::optional<std::string>& text) {
  return text ? std::stod(*text) : std::nan("");
}

// Fits and keeps in table m; labels without the response's.
struct Case {
  const char *name, *csv, *arguments;
  std::vector<std::string> inputs;  // of the reference's predictions
  const char* inflation;            // which terms' variance inflations it has
};

void ExpectNumbers(const Database& db, const std::string& sql, const json& expected,
                   const std::string& what) {
  const auto rows = db.Rows(sql);
  ASSERT_EQ(rows.size(), expected.size()) << what;
  for (size_t i = 0; i < rows.size(); ++i) {
    EXPECT_TRUE(Agrees(expected[i].get<double>(), NumberOf(rows[i][0]), kDigits))
        << what << " row " << i;
  }
}

TEST(Roles, PolynomialsAndProductsAgreeWithR) {
  const Case cases[] = {
      {"trees_cubic",
       "trees",
       "'Volume', Volume, 'Girth | polynomial 3', Girth, 'Height', Height",
       {"9, 70", "13.5, 82", "25, 60"},
       "position > 1"},
      {"trees_origin",
       "trees",
       "'Volume', Volume, 'Girth | polynomial 2', Girth, 'Height', Height, "
       "'intercept | option', 'none'",
       {"9, 70", "13.5, 82", "25, 60"},
       "true"},
      {"trees_product",
       "trees",
       "'Volume | log_offset', Volume, 'Girth | log_offset -5', Girth, 'Height', Height, "
       "'both | product Girth Height', NULL",
       {"9, 70", "13.5, 82", "25, 60"},
       "position > 1"},
      {"poisons_product",
       "poisons",
       "'time | negative_reciprocal', time, 'poison | category 1', poison, 'treat | category A', "
       "treat, 'both | product treat poison', 'not looked at'",
       {"'1', 'A'", "'3', 'D'", "'2', 'B'"},
       "position IN (2, 4, 7)"},
      {"ornstein_slopes",
       "ornstein",
       "'interlocks | log_offset 1', interlocks, 'assets | log_offset', assets, "
       "'slope | product assets nation', x'00', 'nation', nation",
       {"10000, 'CAN'", "5000, 'US'", "200000, 'UK'"},
       nullptr},
  };
  const json all = ReadJson("roles.json");
  for (const Case& c : cases) {
    const json& r = all["models"][c.name];
    const Database db;
    db.LoadCsv("d", std::string("boxcox/") + c.csv + ".csv");
    db.Run("CREATE TABLE m AS SELECT ols_model(" + std::string(c.arguments) + ") AS model FROM d");
    // R puts products last.
    const std::string order =
        c.inflation == nullptr ? " ORDER BY column_name = 'slope', position" : " ORDER BY position";
    ExpectNumbers(db, "SELECT coefficient FROM m, model_terms(m.model)" + order, r["coefficients"],
                  c.name);
    for (const char* kind : {"standard_error", "hc0", "hc3"}) {
      const std::string errors = kind == std::string("standard_error") ? "classical" : kind;
      ExpectNumbers(
          db, "SELECT standard_error FROM m, model_terms(m.model, 0.95, '" + errors + "')" + order,
          r[kind], std::string(c.name) + " " + kind);
    }
    for (const char* fact : {"residual_sd", "r_squared", "press"}) {
      EXPECT_TRUE(Agrees(r[fact].get<double>(),
                         db.Number("SELECT fact(model, '" + std::string(fact) + "') FROM m"),
                         kDigits))
          << c.name << ' ' << fact;
    }
    const std::string by_column =
        c.inflation == nullptr ? " ORDER BY column_name = 'slope', position" : "";
    for (const char* figure : {"parameters", "sum_of_squares", "f", "p_value"}) {
      const std::string name = figure == std::string("p_value") ? "p" : figure;
      ExpectNumbers(db,
                    "SELECT " + std::string(figure) + " FROM m, model_tests(m.model)" + by_column,
                    r["test_" + name], std::string(c.name) + " test " + figure);
    }
    ExpectNumbers(
        db,
        "SELECT variance_inflation FROM m, model_terms(m.model) WHERE " +
            std::string(c.inflation == nullptr ? "position IN (2, 3, 6)" : c.inflation) +
            (c.inflation == nullptr ? " ORDER BY column_name = 'slope', column_name = 'nation'"
                                    : order),
        r["inflation"], std::string(c.name) + " inflation");
    ExpectNumbers(db, "SELECT cooks_distance FROM m, model_influence(m.model) LIMIT 5",
                  r["cooks_distance"], std::string(c.name) + " influence");
    for (size_t i = 0; i < c.inputs.size(); ++i) {
      EXPECT_TRUE(Agrees(r["predictions"][i].get<double>(),
                         db.Number("SELECT fitted_scale(model, " + c.inputs[i] + ") FROM m"),
                         kDigits))
          << c.name << " prediction " << i;
      EXPECT_TRUE(Agrees(r["leverages"][i].get<double>(),
                         db.Number("SELECT leverage(model, " + c.inputs[i] + ") FROM m"), kDigits))
          << c.name << " leverage " << i;
    }
  }
}

// Condition number and inflation are those of the raw powers, but powers are no trouble.
TEST(Roles, ChecksTakePowersAndProductsAsTheyAre) {
  const json r = ReadJson("roles.json")["models"];
  const Database db;
  db.LoadCsv("trees", "boxcox/trees.csv");
  for (const auto& [name, arguments] :
       {std::pair{"trees_cubic",
                  "'Volume', Volume, 'Girth | polynomial 3', Girth, 'Height', Height"},
        {"trees_product",
         "'Volume | log_offset', Volume, 'Girth | log_offset -5', Girth, 'Height', Height, "
         "'both | product Girth Height', NULL"}}) {
    db.Run("CREATE TABLE m AS SELECT ols_model(" + std::string(arguments) +
           ") AS model FROM trees");
    const auto check = [&](const std::string& of, const std::string& what) {
      return db.Text("SELECT " + what + " FROM m, model_checks(m.model) WHERE check_name = '" + of +
                     "'");
    };
    EXPECT_TRUE(Agrees(r[name]["condition_number"].get<double>(),
                       std::stod(check("condition_number", "statistic")), kDigits));
    double largest = 0;
    for (const json& inflation : r[name]["inflation"])
      largest = std::max(largest, inflation.get<double>());
    EXPECT_TRUE(Agrees(largest, std::stod(check("variance_inflation", "statistic")), kDigits));
    EXPECT_EQ(check("variance_inflation", "status"), "fine");
    EXPECT_EQ(check("condition_number", "status"), "fine");
    EXPECT_THAT(check("variance_inflation", "finding"),
                HasSubstr(name == std::string("trees_cubic") ? "(Girth power 2 most)"
                                                             : "(Girth by Height most)"));
    db.Run("DROP TABLE m");
  }
}

// Fewest digits of two columns of numbers that agree.
double FewestDigits(const Database& db, const std::string& column,
                    const std::vector<double>& truth) {
  const auto rows = db.Rows("SELECT " + column + " FROM m, model_terms(m.model)");
  EXPECT_EQ(rows.size(), truth.size());
  double digits = 17;
  for (size_t i = 0; i < std::min(rows.size(), truth.size()); ++i)
    digits = std::min(digits, DigitsAgreed(truth[i], NumberOf(rows[i][0])));
  return digits;
}

TEST(Roles, NistPolynomialsReachTheDigitsOfDoubleData) {
  const json certified = ReadJson("nist/certified.json");
  std::printf("%-10s %12s %15s\n", "set", "coefficients", "standard errors");
  for (const auto& [name, degree] : {std::pair{"Filip", 10},
                                     {"Wampler1", 5},
                                     {"Wampler2", 5},
                                     {"Wampler3", 5},
                                     {"Wampler4", 5},
                                     {"Wampler5", 5}}) {
    const Database db;
    db.LoadCsv("d", std::string("nist/") + name + ".csv");
    db.Run("CREATE TABLE m AS SELECT ols_model('y', y, 'x | polynomial " + std::to_string(degree) +
           "', x) AS model FROM d");
    std::vector<double> coefficients, errors;
    for (const json& term : certified["sets"][name]["coefficients"]) {
      coefficients.push_back(std::stod(term["estimate"].get<std::string>()));
      errors.push_back(std::stod(term["std_dev"].get<std::string>()));
    }
    const double reached = FewestDigits(db, "coefficient", coefficients);
    const double reached_errors = FewestDigits(db, "standard_error", errors);
    std::printf("%-10s %12.1f %15.1f\n", name, reached, reached_errors);
    EXPECT_GE(reached, 13.0) << name;
    EXPECT_GE(reached_errors, 13.0) << name;
  }
}

// Exact rational arithmetic: polynomials.py.
TEST(Roles, PolynomialsFarFromZeroAndOfHighDegreeKeepTheirDigits) {
  const json all = ReadJson("polynomials.json");
  for (const auto& [name, c] : all["cases"].items()) {
    const Database db;
    db.Run("CREATE TABLE d(x REAL, y REAL)");
    for (size_t i = 0; i < c["x"].size(); ++i) {
      db.Run("INSERT INTO d VALUES (" + NumberText(c["x"][i].get<double>()) + ", " +
             NumberText(c["y"][i].get<double>()) + ")");
    }
    const std::string intercept =
        c["intercept"].get<bool>() ? "" : ", 'intercept | option', 'none'";
    db.Run("CREATE TABLE m AS SELECT ols_model('y', y, 'x | polynomial " + c["degree"].dump() +
           "', x" + intercept + ") AS model FROM d");
    EXPECT_GE(FewestDigits(db, "coefficient", c["coefficients"]), 15.0) << name;
    EXPECT_GE(FewestDigits(db, "standard_error", c["standard_errors"]), 15.0) << name;
    EXPECT_TRUE(Agrees(c["residual_sd"].get<double>(),
                       db.Number("SELECT fact(model, 'residual_sd') FROM m"), 15))
        << name;
    // Scalars evaluate in the kept basis: of every fitted row, to rounding, what the list has.
    EXPECT_EQ(db.Text("SELECT max(abs(i.leverage - leverage(m.model, d.x)) > 1e-10) || '' FROM m, "
                      "model_influence(m.model) AS i, d WHERE d.rowid = i.key"),
              "0")
        << name;
    if (c["intercept"].get<bool>()) {
      EXPECT_LT(db.Number("SELECT abs(sum(residual(model, y, x))) / max(abs(y)) FROM m, d"), 1e-12);
    }
  }
}

class RolesInput : public ::testing::Test {
 protected:
  RolesInput() {
    db_.Run(
        "CREATE TABLE t(cost, age, units, trade, district);"
        "INSERT INTO t VALUES (120, 10, 1, 'Damp', 'North'), (300, 40, 2, 'Roof', 'North'), "
        "(90, 10, 3, 'Damp', 'South'), (200, 20, 5, 'Roof', 'South'), (150, 40, 4, 'Damp', "
        "'North'), (170, 20, 2, 'Roof', 'North'), (180, 10, 6, 'Roof', 'South'), "
        "(110, 20, 3, 'Damp', 'North'), (260, 40, 1, 'Damp', 'South')");
  }
  std::string Problem(const std::string& arguments) const {
    const std::string error = db_.ErrorOf("SELECT ols_model(" + arguments + ") FROM t");
    return error == "(no error)" ? db_.Text("SELECT coalesce(model_problem(ols_model(" + arguments +
                                            ")), 'sound') FROM t")
                                 : error;
  }
  Database db_;
};

TEST_F(RolesInput, TermsAndColumnsAreNamedAfterTheirParts) {
  db_.Run(
      "CREATE TABLE m AS SELECT ols_model('cost', cost, 'age | polynomial 2', age, 'units', units, "
      "'district', district, 'trade', trade, 'slope | product units district', NULL, 'cell | "
      "product district trade', NULL) AS model FROM t");
  EXPECT_EQ(db_.Text("SELECT group_concat(term || ' / ' || coalesce(column_name, '') || ' / ' || "
                     "coalesce(category_level, ''), '; ') FROM m, model_terms(m.model)"),
            "intercept /  / ; age power 1 / age / ; age power 2 / age / ; units / units / ; "
            "district is South / district / South; trade is Roof / trade / Roof; "
            "units by district is South / slope / South; "
            "district is South by trade is Roof / cell / South by Roof");
  EXPECT_EQ(db_.Text("SELECT group_concat(column_name || ' ' || role || ' ' || coalesce(kind, "
                     "'-'), '; ') FROM m, model_columns(m.model)"),
            "cost response number; age predictor polynomial; units predictor number; district "
            "predictor category; trade predictor category; slope product -; cell product -");
  EXPECT_EQ(db_.Text("SELECT group_concat(column_name || ' ' || parameters, '; ') FROM m, "
                     "model_tests(m.model)"),
            "age 2; units 1; district 1; trade 1; slope 1; cell 1");
  // Raw inputs only: neither powers nor products.
  EXPECT_FALSE(db_.IsNull("SELECT fitted_typical(model, 20, 2, 'North', 'Roof') FROM m"));
  EXPECT_EQ(db_.Text("SELECT fit_note(model, 60, 2, 'North', 'Roof') FROM m"),
            "age 60 lies outside 10 to 40");
  EXPECT_THAT(db_.ErrorOf("SELECT fitted_typical(model, 20, 2, 'North', 'Roof', 1) FROM m"),
              HasSubstr("takes 4 inputs (age, units, district, trade)"));
}

TEST_F(RolesInput, PowersBeyondTheDifferentValuesAreLeftOut) {
  db_.Run(
      "CREATE TABLE m AS SELECT ols_model('cost', cost, 'age | polynomial 5', age) AS model FROM "
      "t; CREATE TABLE q AS SELECT ols_model('cost', cost, 'age | polynomial 2', age) AS model "
      "FROM t");
  const auto rows = db_.Rows(
      "SELECT a.coefficient, b.coefficient, a.note FROM (SELECT t.* FROM m, model_terms(m.model) t)"
      " a LEFT JOIN (SELECT t.* FROM q, model_terms(q.model) t) b USING (position)");
  ASSERT_EQ(rows.size(), 6u);
  for (size_t i = 0; i < 6; ++i) {
    EXPECT_EQ(rows[i][0].has_value(), i < 3);
    if (i < 3) {
      EXPECT_TRUE(Agrees(NumberOf(rows[i][1]), NumberOf(rows[i][0]), 13));
    } else {
      EXPECT_EQ(*rows[i][2], "left out: repeats the lower powers of age");
    }
  }
  EXPECT_EQ(db_.Text("SELECT parameters FROM m, model_tests(m.model)"), "2");
  EXPECT_TRUE(Agrees(db_.Number("SELECT fitted_typical(model, 20) FROM q"),
                     db_.Number("SELECT fitted_typical(model, 20) FROM m"), 13));
  EXPECT_EQ(db_.Text("SELECT group_concat(note, ';') FROM (SELECT ols_model('cost', cost, "
                     "'one | polynomial 2', 7) AS model FROM t) f, model_terms(f.model)"),
            "left out: always the same value;left out: repeats the lower powers of one");
}

// A column beside the polynomial that is one of its powers takes that power's place.
TEST_F(RolesInput, PowersThatAnotherColumnIsAreThatColumns) {
  const auto terms = [&](const std::string& predictors) {
    return db_.Rows(
        "SELECT coefficient, standard_error, variance_inflation, note FROM (SELECT "
        "ols_model('cost', cost, " +
        predictors + ") AS model FROM t) f, model_terms(f.model)");
  };
  db_.Run("UPDATE t SET units = units + 7");
  const auto alone = terms("'u | polynomial 3', units");
  ASSERT_EQ(alone.size(), 4u);
  const std::pair<const char*, size_t> others[] = {{"'o | number', units", 1},
                                                   {"'o | number', units * units", 2},
                                                   {"'o | number', 1 + 2 * units", 1}};
  for (const auto& [other, power] : others) {
    const auto both = terms(std::string(other) + ", 'u | polynomial 3', units");
    ASSERT_EQ(both.size(), 5u);
    EXPECT_EQ(both[1 + power][3], "left out: repeats o");
    const bool shifted = std::string(other).find('+') != std::string::npos;
    for (size_t k = shifted ? 1 : 0; k < 4; ++k) {
      const auto& row = both[k == 0 ? 0 : k == power ? 1 : k + 1];
      const double unit = shifted && k == power ? 2 : 1;
      EXPECT_TRUE(Agrees(NumberOf(alone[k][0]), unit * NumberOf(row[0]), 9)) << other << k;
      EXPECT_TRUE(Agrees(NumberOf(alone[k][1]), unit * NumberOf(row[1]), 9)) << other << k;
      if (k > 0 && k != power) {
        EXPECT_TRUE(Agrees(NumberOf(alone[k][2]), NumberOf(row[2]), 9)) << other << k;
      }
    }
  }
}

// The same space spanned by numbers alone: raw powers and their products.
TEST_F(RolesInput, AProductOfAPolynomialMultipliesEachOfItsPowers) {
  db_.Run(
      "WITH RECURSIVE c(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM c WHERE i < 60) INSERT INTO t "
      "SELECT 100 + (i * 37) % 41 + i % 9 * 5, 5 + i % 9, 1 + (i * 7) % 11, CASE i % 3 WHEN 0 THEN "
      "'Damp' ELSE 'Roof' END, CASE WHEN i % 5 < 2 THEN 'North' ELSE 'South' END FROM c");
  const auto terms = [&](const std::string& predictors) {
    db_.Run("DROP TABLE IF EXISTS m; CREATE TABLE m AS SELECT ols_model('cost', cost, " +
            predictors + ") AS model FROM t");
    return db_.Rows(
        "SELECT a.coefficient, a.standard_error, a.variance_inflation, a.term, b.standard_error "
        "FROM "
        "(SELECT t.* FROM m, model_terms(m.model) t) a JOIN (SELECT t.* FROM m, "
        "model_terms(m.model, "
        "0.95, 'hc3') t) b USING (position) ORDER BY position");
  };
  struct Pair {
    const char *by_roles, *by_numbers, *name;
  };
  const Pair pairs[] = {
      {"'age | polynomial 2', age, 'units', units, 'p | product age units', 0",
       "'a1', age, 'a2', age * age, 'u', units, 'a1u', age * units, 'a2u', age * age * units",
       "age power 2 by units"},
      {"'p | product trade age', 0, 'trade', trade, 'age | polynomial 2', age",
       "'ra1', (trade = 'Damp') * age, 'ra2', (trade = 'Damp') * age * age, 'trade', trade, 'a1', "
       "age, 'a2', age * age",
       "trade is Damp by age power 2"},
      {"'age | polynomial 2', age, 'units | polynomial 2', units, 'p | product age units', 0",
       "'a1', age, 'a2', age * age, 'u1', units, 'u2', units * units, 'p11', age * units, 'p12', "
       "age * units * units, 'p21', age * age * units, 'p22', age * age * units * units",
       "age power 2 by units power 2"}};
  for (const Pair& pair : pairs) {
    const auto roles = terms(pair.by_roles), numbers = terms(pair.by_numbers);
    ASSERT_EQ(roles.size(), numbers.size()) << pair.name;
    bool named = false;
    for (size_t i = 0; i < roles.size(); ++i) {
      named = named || *roles[i][3] == pair.name;
      for (const size_t figure : {0, 1, 4}) {
        EXPECT_TRUE(Agrees(NumberOf(numbers[i][figure]), NumberOf(roles[i][figure]), 9))
            << pair.name << ' ' << *roles[i][3] << ' ' << figure;
      }
      // A number's inflation is its own there; here powers have theirs, and so have products of
      // them.
      if (i > 0 && roles[i][3]->find("power") != std::string::npos) {
        EXPECT_TRUE(Agrees(NumberOf(numbers[i][2]), NumberOf(roles[i][2]), 8))
            << pair.name << ' ' << *roles[i][3];
      }
    }
    EXPECT_TRUE(named) << pair.name;
  }
}

TEST_F(RolesInput, CellsWithoutRowsAreLeftOut) {
  db_.Run("DELETE FROM t WHERE district = 'South' AND trade = 'Roof'");
  EXPECT_EQ(db_.Text("SELECT note FROM (SELECT ols_model('cost', cost, 'district', district, "
                     "'trade', trade, 'cell | product district trade', 0) AS model FROM t) f, "
                     "model_terms(f.model) WHERE column_name = 'cell'"),
            "left out: always 0");
}

// Without an intercept the first category has all its indicators; its products still need one less.
TEST_F(RolesInput, WithoutInterceptProductsStillHaveAReference) {
  EXPECT_EQ(
      db_.Text("SELECT group_concat(term || coalesce(' ' || note, ''), '; ') FROM (SELECT "
               "ols_model('cost', cost, 'district', district, 'units', units, 'slope | "
               "product units district', 0, 'intercept | option', 'none') AS model FROM t) f, "
               "model_terms(f.model)"),
      "district is North; district is South; units; units by district is South");
}

TEST_F(RolesInput, BadLabelsAreErrorsInWords) {
  const std::string start = "'cost', cost, 'age', age, 'trade', trade, ";
  EXPECT_EQ(Problem(start + "'p | product age', 0"),
            "ols_model: label 'p | product age' gives 1 argument to product, which takes the names "
            "of two other labels");
  EXPECT_EQ(Problem(start + "'p | product age rent', 0"),
            "ols_model: label 'p' is a product of 'rent', which is no predictor of the model; they "
            "are age, trade");
  EXPECT_THAT(Problem(start + "'p | product cost age', 0"),
              HasSubstr("of 'cost', which is no predictor"));
  EXPECT_THAT(Problem(start + "'p | product age age', 0"),
              HasSubstr("of 'age' by itself; for a square write 'age | polynomial 2'"));
  EXPECT_THAT(Problem(start + "'p | product age trade', 0, 'q | product trade age', 0"),
              HasSubstr("label 'q' is a product that repeats 'p'"));
  EXPECT_THAT(Problem("'cost | polynomial 2', cost, 'age', age"), HasSubstr("is the response"));
  for (const std::string degree : {"0", "21", "-1", "2.5", "two"}) {
    EXPECT_THAT(Problem("'cost', cost, 'age | polynomial " + degree + "', age"),
                HasSubstr("has a degree that is no whole number from 1 to 20: " + degree));
  }
  EXPECT_THAT(Problem("'cost', cost, 'age | polynomial', age"), HasSubstr("takes its degree"));
  EXPECT_EQ(Problem("'cost', cost, 'trade | polynomial 2', trade"),
            "ols_model: trade must be a number, got text 'Damp' (row 1); for values that are no "
            "numbers use number_or_null(trade)");
  for (const std::string unit : {"1e200", "1e-200"}) {
    EXPECT_THAT(Problem("'cost', cost, 'age | polynomial 2', age * " + unit),
                HasSubstr("too large or too small"));
    EXPECT_EQ(Problem("'cost', cost, 'age | polynomial 1', age * " + unit), "sound");
  }
  EXPECT_EQ(Problem("'cost', cost, 'age | polynomial 9', age"), "needs 10 rows, has 9");
  EXPECT_EQ(Problem("'cost', cost, 'p | product age trade', 0, 'trade', trade, 'age', age"),
            "sound");
}

TEST_F(RolesInput, ProductsOfManyLevelsAreRefusedByTheirCount) {
  EXPECT_EQ(db_.Text("WITH RECURSIVE c(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM c WHERE i < "
                     "3000) SELECT model_problem(ols_model('i', i, 'a | category', i % 401, "
                     "'b | category', i % 301, 'p | product a b', NULL)) FROM c"),
            "has 120701 terms; a model takes at most 1000");
}

TEST_F(RolesInput, MovingFramesAgreeWithTheSameRowsFitAfresh) {
  const std::string call =
      "ols_model('cost', cost, 'units | polynomial 2', units, 'trade', trade, 'age', age, "
      "'p | product age trade', NULL)";
  const auto moving = db_.Rows("SELECT rowid, " + call +
                               " OVER (ORDER BY rowid ROWS 7 PRECEDING) FROM t ORDER BY rowid");
  for (const auto& row : moving) {
    EXPECT_EQ(*row[1], db_.Text("SELECT " + call + " FROM t WHERE rowid BETWEEN " + *row[0] +
                                " - 7 AND " + *row[0]))
        << "row " << *row[0];
  }
}

// Effects take their contrasts from the model's basis; by hand: a quadratic through three means.
TEST_F(RolesInput, EffectsOfAPolynomialAndAProductAreThoseOfTheFit) {
  db_.Run(
      "CREATE TABLE m AS SELECT ols_model('cost', cost, 'age | polynomial 2', age) AS model FROM "
      "t");
  EXPECT_TRUE(Agrees(
      db_.Number("SELECT avg(cost) FILTER (WHERE age = 40) - avg(cost) FILTER (WHERE age = 10) "
                 "FROM t"),
      db_.Number("SELECT effect FROM m, model_effects(m.model) WHERE from_value = 10 AND to_value "
                 "= 40"),
      12));
  db_.Run(
      "DROP TABLE m; CREATE TABLE m AS SELECT ols_model('cost', cost, 'district', district, "
      "'trade', trade, 'cell | product district trade', NULL) AS model FROM t");
  const auto mean = [&](const char* district, const char* trade) {
    return db_.Number("SELECT avg(cost) FROM t WHERE district = '" + std::string(district) +
                      "' AND trade = '" + trade + "'");
  };
  const auto rows = db_.Rows(
      "SELECT effect FROM m, model_effects(m.model) WHERE column_name LIKE 'district%' ORDER BY "
      "position");
  ASSERT_GE(rows.size(), 2u);
  EXPECT_TRUE(Agrees(mean("South", "Damp") - mean("North", "Damp"), NumberOf(rows[0][0]), 12));
  EXPECT_TRUE(Agrees(mean("South", "Roof") - mean("North", "Roof"), NumberOf(rows[1][0]), 12));
}

}  // namespace
}  // namespace ladderline::testing
