// Questions to models, against R: the texts of models_r.json are made by R's lm and the documented
// format alone, so that neither our fit nor our writing takes part.
#include <gmock/gmock.h>

#include <cmath>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using Json = nlohmann::ordered_json;
using ::testing::HasSubstr;

const Json& Cases() {
  static const Json file = ReadOrderedJson("models_r.json");
  return file["cases"];
}

std::string Quoted(const std::string& text) {
  std::string out = "'";
  for (const char c : text) out += c == '\'' ? std::string("''") : std::string(1, c);
  return out + "'";
}

std::string Literal(const Json& value) {
  return value.is_string() ? Quoted(value.get<std::string>()) : value.dump();
}

// `, 1.6, '4', 60`
std::string Inputs(const Json& inputs) {
  std::string out;
  for (const Json& input : inputs) out += ", " + Literal(input);
  return out;
}

// The model of a case as an SQL literal, and its input columns' names.
struct Case {
  explicit Case(const Json& c) : json(c), text(Quoted(c["model"].dump())) {
    for (const Json& column : c["model"]["columns"])
      if (!column.contains("role")) names.push_back(column["name"]);
  }
  // The same inputs as pairs, the last one first.
  std::string Pairs(const Json& inputs) const {
    std::string out;
    for (size_t i = names.size(); i-- > 0;)
      out += ", " + Quoted(names[i]) + ", " + Literal(inputs[i]);
    return out;
  }
  const Json& json;
  std::string text;
  std::vector<std::string> names;
};

class ModelFunctions : public ::testing::Test {
 protected:
  double Ask(const std::string& function, const Case& c, const std::string& arguments) {
    return db.Number("SELECT " + function + "(" + c.text + arguments + ")");
  }
  Database db;
};

constexpr double kDigits = 11;

TEST_F(ModelFunctions, NewRowsAgreeWithR) {
  for (const Json& json : Cases()) {
    const Case c(json);
    const std::string level = ", " + json["level"].dump();
    for (const Json& row : json["new"]) {
      for (const std::string& inputs : {Inputs(row["inputs"]), c.Pairs(row["inputs"])}) {
        const auto expect = [&](const char* function, const char* figure, bool with_level) {
          EXPECT_TRUE(
              Agrees(row[figure], Ask(function, c, (with_level ? level : "") + inputs), kDigits))
              << json["name"] << ": " << function << inputs;
        };
        expect("fitted_scale", "scale", false);
        expect("fitted_typical", "typical", false);
        expect("fitted_mean", "mean", false);
        expect("typical_low", "typical_low", true);
        expect("typical_high", "typical_high", true);
        expect("case_low", "case_low", true);
        expect("case_high", "case_high", true);
        expect("leverage", "leverage", false);
      }
    }
  }
}

TEST_F(ModelFunctions, PredictionsAgreeWithR) {
  for (const Json& json : Cases()) {
    const Case c(json);
    for (const Json& row : json["new"]) {
      const auto rows = db.Rows(
          "SELECT typical, typical_low, typical_high, mean, mean_low, mean_high, case_low, "
          "case_high FROM model_predictions(" +
          c.text + ", " + json["level"].dump() + Inputs(row["inputs"]) + ")");
      ASSERT_EQ(rows.size(), 1U);
      size_t i = 0;
      for (const char* figure : {"typical", "typical_low", "typical_high", "mean", "mean_low",
                                 "mean_high", "case_low", "case_high"}) {
        ASSERT_TRUE(rows[0][i].has_value()) << figure;
        EXPECT_TRUE(Agrees(row[figure], std::stod(*rows[0][i++]), kDigits))
            << json["name"] << ": " << figure << Inputs(row["inputs"]);
      }
    }
  }
}

TEST_F(ModelFunctions, FittedRowsAgreeWithR) {
  for (const Json& json : Cases()) {
    const Case c(json);
    for (const Json& row : json["rows"]) {
      const bool weighted = json["model"]["columns"].back().value("role", "") == "weight";
      const std::string inputs =
          c.Pairs(row["inputs"]) + (weighted ? ", 'w', " + row["weight"].dump() : "");
      for (const char* figure :
           {"residual", "leverage", "studentized_residual", "cooks_distance"}) {
        const bool takes_y = std::string(figure) != "leverage";
        const double value =
            Ask(figure, c, (takes_y ? ", " + row["y"].dump() : std::string()) + inputs);
        const double expected = row[figure];
        // A residual is a difference: its digits are those of the response.
        const double unit = std::string(figure) == "leverage" ? expected : 1;
        EXPECT_LE(std::abs(value - expected), 1e-11 * std::max(std::abs(expected), unit))
            << json["name"] << ": " << figure << inputs << ": " << value << " for " << expected;
      }
    }
  }
}

TEST_F(ModelFunctions, NoFittedRowIsAnUnusualCombination) {
  for (const Json& json : Cases()) {
    const Case c(json);
    for (const Json& row : json["rows"])
      EXPECT_TRUE(db.IsNull("SELECT fit_note(" + c.text + Inputs(row["inputs"]) + ")"))
          << json["name"] << Inputs(row["inputs"]);
  }
}

TEST_F(ModelFunctions, TermsAgreeWithRAtAnyLevelAndKindOfErrors) {
  for (const Json& json : Cases()) {
    const Case c(json);
    for (const char* errors : {"classical", "hc3"}) {
      const auto rows = db.Rows(
          "SELECT term, coefficient, standard_error, low, high, t, p_value, errors FROM "
          "model_terms(" +
          c.text + ", NULL, " + Quoted(errors) + ") ORDER BY position");
      ASSERT_EQ(rows.size(), json[errors].size());
      for (size_t i = 0; i < rows.size(); ++i) {
        const Json& expected = json[errors][i];
        EXPECT_EQ(*rows[i][0], expected["term"].get<std::string>());
        size_t column = 1;
        for (const char* figure : {"coefficient", "standard_error", "low", "high", "t", "p_value"})
          EXPECT_TRUE(Agrees(expected[figure], std::stod(*rows[i][column++]), kDigits))
              << json["name"] << " " << errors << " " << *rows[i][0] << ": " << figure;
        EXPECT_EQ(*rows[i][7], errors);
      }
    }
  }
}

TEST_F(ModelFunctions, TermsSayWhereTheyComeFrom) {
  const Case c(Cases()[2]);  // weight of car, cylinders against 6, power + 10 in logs
  const auto rows = db.Rows(
      "SELECT position, term, column_name, category_level, transform FROM "
      "model_terms(" +
      c.text + ")");
  ASSERT_EQ(rows.size(), 5U);
  using Row = Database::Row;
  EXPECT_EQ(rows[0], (Row{"1", "intercept", std::nullopt, std::nullopt, std::nullopt}));
  EXPECT_EQ(rows[1], (Row{"2", "weight of car", "weight of car", std::nullopt, "identity"}));
  EXPECT_EQ(rows[3], (Row{"4", "cylinders is 8", "cylinders", "8", std::nullopt}));
  EXPECT_EQ(rows[4], (Row{"5", "power", "power", std::nullopt, "log_offset 10"}));
}

// The host asks for a plan for each side of an OR, and then shows no argument of the call.
TEST_F(ModelFunctions, TablesTakeAnyCondition) {
  const Case c(Cases()[2]);
  db.Run("CREATE TABLE kept AS SELECT " + c.text + " AS model");
  for (const char* condition :
       {"position = 1 OR term = 'power'", "t.position > 3 OR t.rowid = 2", "term IN ('power', 'x')",
        "coefficient IS NULL OR term LIKE 'p%' OR kept.rowid = 7",
        "(position = 2 OR position = 4) AND (term = 'power' OR coefficient > 1e9)"}) {
    const auto count = [&](const std::string& from) {
      return db.Text("SELECT group_concat(position) FROM " + from + " WHERE " + condition);
    };
    EXPECT_EQ(count("kept, model_terms(kept.model, 0.9) AS t"),
              count("kept, (SELECT rowid AS rowid, * FROM model_terms(" + c.text +
                    ", 0.9) LIMIT 99) AS t"))
        << condition;
  }
  EXPECT_EQ(db.ErrorOf("SELECT * FROM model_terms"),
            "model_terms: takes (model [, level [, errors]]), got 0 arguments");
  EXPECT_EQ(db.ErrorOf("SELECT * FROM model_facts() WHERE fact = 'aic' OR value = 1"),
            "model_facts: takes (model), got 0 arguments");
}

TEST_F(ModelFunctions, TheModelsOwnLevelAndErrorsAreTheDefault) {
  const Case c(Cases()[1]);  // hc3
  const std::string own = "SELECT group_concat(low || errors) FROM model_terms(" + c.text;
  EXPECT_EQ(db.Text(own + ")"), db.Text(own + ", 0.9, 'hc3')"));
  EXPECT_NE(db.Text(own + ")"), db.Text(own + ", 0.95, 'hc3')"));
  EXPECT_EQ(db.ErrorOf(own + ", 0.9, 'cluster')"),
            "model_terms: errors must be one of classical, hc0, hc1, hc2, hc3, got text 'cluster'");
  EXPECT_EQ(db.ErrorOf(own + ", 95)"),
            "model_terms: level must lie between 0 and 1, got 95; write 0.95");
}

TEST_F(ModelFunctions, ColumnsAreDescribed) {
  const Case c(Cases()[2]);
  const auto rows = db.Rows(
      "SELECT position, column_name, role, kind, transform, observed_low, "
      "CAST(round(observed_high, 1) AS TEXT), levels, "
      "reference, reference_given, missing, unit FROM model_columns(" +
      c.text + ")");
  ASSERT_EQ(rows.size(), 5U);
  using Row = Database::Row;
  const auto none = std::nullopt;
  EXPECT_EQ(rows[0], (Row{"1", "mpg", "response", "number", "identity", "10.4", "33.9", none, none,
                          none, "0", none}));
  EXPECT_EQ(rows[2], (Row{"3", "cylinders", "predictor", "category", none, none, none, "3", "6",
                          "1", "0", none}));
  EXPECT_EQ(rows[3], (Row{"4", "power", "predictor", "number", "log_offset 10", "52", "335.0", none,
                          none, none, "0", none}));
  EXPECT_EQ((*rows[4][2]), "weight");
}

// Every bin counted again from the rows, of both scales; PiDigits has whole numbers.
TEST_F(ModelFunctions, HistogramsCountTheFittedRows) {
  db.LoadCsv("d", "nist/Lew.csv");
  db.Run("CREATE TABLE r AS SELECT y + 600 AS y, rowid AS x, rowid % 7 <> 0 AS used FROM d");
  db.Run(
      "CREATE TABLE m AS SELECT ols_model('y | log_offset 2', iif(used, y, NULL), 'x', x) AS model "
      "FROM r");
  db.Run("CREATE TABLE h AS SELECT h.* FROM m, model_histogram(m.model) AS h");
  EXPECT_EQ(db.Number("SELECT count(*) FROM h WHERE scale = 'original'"),
            db.Number("SELECT count(*) FROM h AS low, h AS high WHERE low.scale = 'original' AND "
                      "high.scale = 'original' AND low.high = high.low") +
                1);
  for (const std::string scale : {"original", "re-expressed"}) {
    const std::string value = scale == "original" ? "y" : "log_offset(y, 2)";
    EXPECT_EQ(db.Number("SELECT sum(rows) FROM h WHERE scale = '" + scale + "'"),
              db.Number("SELECT count(*) FROM r WHERE used"));
    EXPECT_EQ(db.Text("SELECT group_concat(position) FROM h WHERE scale = '" + scale +
                      "' AND rows <> (SELECT count(*) FROM r WHERE used AND low <= " + value +
                      " AND (" + value + " < high OR " + value +
                      " = (SELECT max(high) FROM h AS top WHERE top.scale = h.scale) AND high = " +
                      value + "))"),
              "NULL");
    const double bins = db.Number("SELECT count(*) FROM h WHERE scale = '" + scale + "'");
    EXPECT_GE(bins, 5);
    EXPECT_LE(bins, 11);  // 2 ∛171
  }
}

TEST_F(ModelFunctions, HistogramsNeedChecksAndTenRows) {
  const std::string model =
      "(WITH RECURSIVE n(n) AS (SELECT 1 UNION ALL SELECT n + 1 FROM n WHERE n < ";
  const auto rows = [&](const std::string& most, const std::string& labels) {
    return db.Number("SELECT count(*) FROM " + model + most + ") SELECT ols_model(" + labels +
                     ") AS model FROM n) AS f, model_histogram(f.model) AS h");
  };
  EXPECT_EQ(rows("9", "'y', n * n, 'n', n"), 0);
  EXPECT_GT(rows("10", "'y', n * n, 'n', n"), 3);
  EXPECT_EQ(rows("10", "'y', n * n, 'n', n, 'checks | option', 'none'"), 0);
  EXPECT_EQ(rows("10", "'y', NULL, 'n', n"), 0);
  // A date's bins are dates.
  EXPECT_EQ(db.Text("SELECT low FROM " + model +
                    "40) SELECT ols_model('d | date_days', date('2024-01-01', n || ' days'), 'n', "
                    "n) AS model FROM n) AS f, model_histogram(f.model) AS h LIMIT 1"),
            db.Text("SELECT date_from_days(19720)"));
}

// The documented quantiles and bins, beside scores of normal_scores.h.
TEST_F(ModelFunctions, ResidualsAreSummedUp) {
  db.LoadCsv("d", "nist/Lew.csv");
  db.Run("CREATE TABLE r AS SELECT y, rowid AS x FROM d");
  db.Run("CREATE TABLE m AS SELECT ols_model('y', y, 'x', x) AS model FROM r");
  db.Run(
      "CREATE TABLE e AS SELECT residual(model, y, x) AS e, fitted_scale(model, x) AS fit "
      "FROM r, m");
  for (const Database::Row& row :
       db.Rows("SELECT probability, residual, normal_score, (SELECT percentile_cont(e, "
               "probability) FROM e), (SELECT normal_score FROM quantile_rows((SELECT "
               "quantile_pairs(e, 200) FROM e)) WHERE value = residual) FROM m, "
               "model_residual_quantiles(m.model)")) {
    EXPECT_TRUE(Agrees(std::stod(*row[3]), std::stod(*row[1]), 8)) << *row[0];
    if (*row[0] == "0.0" || *row[0] == "1.0") {
      EXPECT_NEAR(std::abs(std::stod(*row[2])), 2.73478, 1e-5);  // qnorm(0.625/200.25)
    }
  }
  EXPECT_EQ(db.Number("SELECT count(*) FROM m, model_residual_quantiles(m.model)"), 11);
  EXPECT_EQ(db.Number("SELECT count(*) FROM m, model_residual_bins(m.model)"), 10);
  for (const Database::Row& row :
       db.Rows("SELECT rows, mean, sd, (SELECT count(*) FROM e WHERE fit BETWEEN fitted_low - 1e-9 "
               "AND fitted_high + 1e-9), (SELECT avg(e) FROM e WHERE fit BETWEEN fitted_low - 1e-9 "
               "AND fitted_high + 1e-9), (SELECT stddev_samp(e) FROM e WHERE fit BETWEEN "
               "fitted_low - 1e-9 AND fitted_high + 1e-9) FROM m, model_residual_bins(m.model)")) {
    EXPECT_EQ(row[0], row[3]);
    EXPECT_TRUE(Agrees(std::stod(*row[4]), std::stod(*row[1]), 5));
    EXPECT_TRUE(Agrees(std::stod(*row[5]), std::stod(*row[2]), 5));
  }
}

TEST_F(ModelFunctions, FactsComeInTheirOrder) {
  const Case c(Cases()[0]);
  std::string names;
  for (const auto& row : db.Rows("SELECT fact FROM model_facts(" + c.text + ")"))
    names += *row[0] + " ";
  EXPECT_EQ(names,
            "status reason family name response rows_offered rows_fitted rows_left_out "
            "rows_with_gaps rows_outside terms residual_df residual_sd median_absolute_error "
            "r_squared adjusted_r_squared f f_df1 f_df2 f_p log_likelihood aic bic "
            "log_likelihood_original aic_original bic_original press smearing digest ");
  const auto fact = [&](const std::string& name) {
    return db.Text("SELECT fact(" + c.text + ", '" + name + "')");
  };
  EXPECT_EQ(fact("status"), "fitted");
  EXPECT_EQ(fact("reason"), "NULL");
  EXPECT_EQ(fact("name"), "tree volume");
  EXPECT_EQ(fact("rows_offered"), "34");
  EXPECT_EQ(fact("rows_left_out"), "3");
  EXPECT_EQ(fact("terms"), "3");
  EXPECT_EQ(fact("r_squared"), "NULL");  // models_r.R leaves it out: a fact this model lacks
  EXPECT_TRUE(
      Agrees(Cases()[0]["model"]["smearing"]["values"][0], std::stod(fact("smearing")), 15));
  EXPECT_EQ(db.ErrorOf("SELECT fact(" + c.text + ", 'rsquared')")
                .find("fact: name must be one of status, reason, family, "),
            0U);
}

TEST_F(ModelFunctions, FactReadsOtherResultsToo) {
  const std::string profile =
      R"('{"lambda":0.25,"low":null,"rows":12,"simple_spec":"log_offset"}')";
  EXPECT_EQ(db.Number("SELECT fact(" + profile + ", 'lambda')"), 0.25);
  EXPECT_EQ(db.Text("SELECT typeof(fact(" + profile + ", 'rows'))"), "integer");
  EXPECT_EQ(db.Text("SELECT fact(" + profile + ", 'simple_spec')"), "log_offset");
  EXPECT_TRUE(db.IsNull("SELECT fact(" + profile + ", 'low')"));
  EXPECT_TRUE(db.IsNull("SELECT fact(" + profile + ", 'high')"));
  EXPECT_EQ(db.ErrorOf("SELECT fact(" + profile + ", 'skewness')"),
            "fact: name must be one of lambda, low, high, level, log_likelihood, rows, missing, "
            "outside, simple, simple_spec, p_identity, p_log, at_limit, note, got text 'skewness'");
  EXPECT_EQ(db.ErrorOf("SELECT fact('{\"a\":1}', 'a')"),
            "fact: result must be a model or another JSON result of this extension, got text "
            "'{\"a\":1}'");
  EXPECT_EQ(db.ErrorOf("SELECT fact(5, 'a')"),
            "fact: result must be a model or another JSON result of this extension, got 5");
  EXPECT_TRUE(db.IsNull("SELECT fact(NULL, 'a')"));
  EXPECT_TRUE(db.IsNull("SELECT fact(' ', 'a')"));
  EXPECT_TRUE(db.IsNull("SELECT fact(" + profile + ", NULL)"));
}

TEST_F(ModelFunctions, FactReadsEveryKeyOfEveryResult) {
  db.Run("CREATE TABLE cost(x)");
  db.Run(
      "INSERT INTO cost VALUES(120), (85.5), (240), (90), (310), (150), (95), (130), (''), (NULL)");
  for (const char* function :
       {"box_cox_profile", "yeo_johnson_profile", "value_audit", "shape_summary", "jarque_bera",
        "shapiro_wilk", "anderson_darling", "dagostino_k2", "histogram_bins", "quantile_pairs"}) {
    const std::string result = db.Text("SELECT " + std::string(function) + "(x) FROM cost");
    const auto keys = db.Rows("SELECT key, type IN ('array', 'object'), atom FROM json_each(" +
                              Quoted(result) + ")");
    EXPECT_GE(keys.size(), 3U) << function;
    for (const auto& key : keys) {
      const auto fact = db.Rows("SELECT fact(" + Quoted(result) + ", " + Quoted(*key[0]) + ")");
      if (*key[1] == "1") continue;
      EXPECT_EQ(fact[0][0], key[2]) << function << " " << *key[0];
    }
  }
}

TEST_F(ModelFunctions, CoefficientsByName) {
  const Case c(Cases()[2]);
  EXPECT_EQ(db.Number("SELECT coefficient(" + c.text + ", 'cylinders is 8')"),
            Cases()[2]["classical"][3]["coefficient"].get<double>());
  EXPECT_TRUE(db.IsNull("SELECT coefficient(" + c.text + ", 'cylinders')"));
  EXPECT_TRUE(db.IsNull("SELECT coefficient(" + c.text + ", NULL)"));
}

TEST_F(ModelFunctions, NullInNullOut) {
  const Case c(Cases()[0]);
  EXPECT_TRUE(db.IsNull("SELECT fitted_typical(NULL, 1, 2, 3, 4)"));
  EXPECT_TRUE(db.IsNull("SELECT fitted_mean('', 1)"));
  EXPECT_TRUE(db.IsNull("SELECT fitted_typical(" + c.text + ", 12, NULL)"));
  EXPECT_TRUE(db.IsNull("SELECT fitted_typical(" + c.text + ", '', 75)"));
  EXPECT_TRUE(db.IsNull("SELECT typical_low(" + c.text + ", NULL, 12, 75)"));
  EXPECT_TRUE(db.IsNull("SELECT residual(" + c.text + ", NULL, 12, 75)"));
  EXPECT_TRUE(db.IsNull("SELECT residual(" + c.text + ", -1, 12, 75)"));  // outside log_offset
  EXPECT_EQ(db.Text("SELECT model_problem(NULL)"), "no model");
  EXPECT_TRUE(db.IsNull("SELECT model_problem(" + c.text + ")"));
  EXPECT_EQ(db.Text("SELECT fit_note(NULL, 1)"), "no model");
  EXPECT_EQ(db.Rows("SELECT * FROM model_terms(NULL)").size(), 0U);
  EXPECT_EQ(db.Rows("SELECT * FROM model_predictions(NULL, 0.9, 1)").size(), 0U);
}

TEST_F(ModelFunctions, AFlawIsToldInWordsWhereOtherFunctionsFail) {
  const std::string requirement = " is not a model made by this extension";
  const std::string text = Case(Cases()[0]).text;
  EXPECT_TRUE(db.IsNull("SELECT model_flaw(" + text + ")"));
  EXPECT_TRUE(db.IsNull("SELECT model_flaw(ols_model('y', 1, 'x', 2))"));  // refused, and readable
  EXPECT_EQ(db.Text("SELECT model_flaw(NULL)"), "no model");
  EXPECT_EQ(db.Text("SELECT model_flaw(' ')"), "no model");
  EXPECT_EQ(db.Text("SELECT model_flaw(12.5)"), "12.5" + requirement);
  EXPECT_EQ(db.Text("SELECT model_flaw(x'7B')"), "a BLOB of 1 bytes" + requirement);
  EXPECT_EQ(db.Text("SELECT model_flaw('word')"),
            "text 'word'" + requirement + " (it is not JSON, at byte 1)");
  EXPECT_EQ(
      db.ErrorOf("SELECT model_problem('word')"),
      "model_problem: model must be a model made by this extension, got text 'word' (it is not "
      "JSON, at byte 1)");
  EXPECT_NE(db.Text("SELECT model_flaw(replace(" + text + ", 'model\":1', 'model\":2'))")
                .find("(its format has version 2, this build reads version 1)"),
            std::string::npos);
}

TEST_F(ModelFunctions, ARefusedModelAnswersNull) {
  const std::string refused =
      R"('{"ladderline_model":1,"status":"refused","reason":"needs 5 rows, has 3","family":"ols",)"
      R"("rows":{"offered":4,"fitted":3},"columns":[{"name":"y","role":"response"},{"name":"x"}]}')";
  for (const char* function : {"fitted_typical", "fitted_mean", "fitted_scale", "leverage"})
    EXPECT_TRUE(db.IsNull("SELECT " + std::string(function) + "(" + refused + ", 1)"));
  EXPECT_TRUE(db.IsNull("SELECT case_high(" + refused + ", 0.9, 1)"));
  EXPECT_TRUE(db.IsNull("SELECT cooks_distance(" + refused + ", 2, 1)"));
  EXPECT_TRUE(db.IsNull("SELECT coefficient(" + refused + ", 'x')"));
  EXPECT_EQ(db.Text("SELECT fit_note(" + refused + ", 1)"), "no model: needs 5 rows, has 3");
  EXPECT_EQ(db.Text("SELECT model_problem(" + refused + ")"), "needs 5 rows, has 3");
  EXPECT_EQ(db.Text("SELECT fact(" + refused + ", 'status')"), "refused");
  EXPECT_EQ(db.Text("SELECT value FROM model_facts(" + refused + ") WHERE fact = 'reason'"),
            "needs 5 rows, has 3");
  for (const char* table : {"model_terms", "model_columns", "model_tests", "model_influence"})
    EXPECT_EQ(db.Rows("SELECT * FROM " + std::string(table) + "(" + refused + ")").size(), 0U);
  EXPECT_EQ(db.Rows("WITH f AS (SELECT " + refused +
                    " AS m) SELECT t.* FROM f LEFT JOIN "
                    "model_terms(f.m) AS t ON true")
                .size(),
            1U);
}

TEST_F(ModelFunctions, NotesSayWhatIsWrongWithARow) {
  const Case c(Cases()[2]);  // weight of car, cylinders, power
  const auto note = [&](const std::string& inputs) {
    return db.Text("SELECT fit_note(" + c.text + ", " + inputs + ")");
  };
  EXPECT_EQ(note("2.7, '6', 115"), "NULL");
  EXPECT_EQ(note("2.7, 6, 115"), "NULL");
  EXPECT_EQ(note("NULL, '4', ' '"), "weight of car is missing; power is missing");
  EXPECT_EQ(note("3, 'Damp', 150"), "cylinders 'Damp' was never seen");
  EXPECT_EQ(note("3, 4.0, 150"), "cylinders '4.0' was never seen");
  EXPECT_EQ(note("3, '4', -10"), "power -10 lies outside the domain of log_offset 10");
  EXPECT_EQ(note("9.5, '4', 30"),
            "weight of car 9.5 lies outside 1.513 to 5.424; power 30 lies outside 52 to 335");
  // A light car with four cylinders and the most power of all: each is usual alone.
  EXPECT_EQ(note("1.6, '4', 335"), "unusual combination: leverage above any fitted row");
  EXPECT_EQ(db.Text("SELECT status || ': ' || note FROM model_predictions(" + c.text +
                    ", 0.9, 1.6, '4', 335)"),
            "look: unusual combination: leverage above any fitted row");
  EXPECT_EQ(db.Text("SELECT status FROM model_predictions(" + c.text + ", NULL, 2.7, '6', 115)"),
            "fine");
  const auto missing = db.Rows("SELECT status, note, typical, case_high FROM model_predictions(" +
                               c.text + ", 0.9, 3, NULL, 150)");
  EXPECT_EQ(missing[0],
            (Database::Row{"not computed", "cylinders is missing", std::nullopt, std::nullopt}));
}

TEST_F(ModelFunctions, BadCallsAreErrorsInWords) {
  const Case c(Cases()[2]);
  const auto error = [&](const std::string& call) { return db.ErrorOf("SELECT " + call); };
  EXPECT_EQ(error("fitted_typical(" + c.text + ", 3, '4')"),
            "fitted_typical: the model takes 3 inputs (weight of car, cylinders, power) in this "
            "order, or as label–value pairs; got 2 values");
  EXPECT_EQ(error("fitted_typical(" + c.text + ", 'heavy', '4', 150)"),
            "fitted_typical: weight of car must be a number, got text 'heavy'");
  EXPECT_EQ(error("fitted_typical(" + c.text + ", 9e999, '4', 150)"),
            "fitted_typical: weight of car must be a number, got an infinity");
  EXPECT_EQ(error("fitted_typical(" + c.text + ", 3, x'3034', 150)"),
            "fitted_typical: cylinders must be text, got a BLOB of 2 bytes");
  EXPECT_EQ(error("fitted_typical(" + c.text + ", 3, CAST(x'ff' AS TEXT), 150)"),
            "fitted_typical: cylinders must be UTF-8 text, got text '?'");
  EXPECT_EQ(error("typical_low(" + c.text + ", 95, 3, '4', 150)"),
            "typical_low: level must lie between 0 and 1, got 95; it comes before the inputs");
  // A call that forgot the level.
  EXPECT_EQ(error("case_low(" + c.text + ", 35, '4', 150)"),
            "case_low: level must lie between 0 and 1, got 35; it comes before the inputs");
  EXPECT_EQ(error("case_high(" + c.text + ", 'power', 150, 'cylinders', 4, 'weight of car', 3)"),
            "case_high: level must lie between 0 and 1, got text 'power'; it comes before the "
            "inputs");
  EXPECT_THAT(error("typical_high(" + c.text + ", 0.5, '4', 150)"),
              HasSubstr("after the level the model takes 3 inputs"));
  EXPECT_EQ(
      error("fitted_typical(" + c.text + ", 'power', 150, 'cylinder', '4', 'weight of car', 3)"),
      "fitted_typical: label 'cylinder' is no input of the model; its inputs are weight of "
      "car, cylinders, power");
  EXPECT_EQ(error("fitted_typical(" + c.text + ", 'power', 150, 'power', 4, 'weight of car', 3)"),
            "fitted_typical: label 'power' is given twice");
  EXPECT_EQ(error("fitted_typical(" + c.text + ", 150, 'power', 4, 'cylinders', 3, 'x')"),
            "fitted_typical: label 1 must be text, got 150; write labels in single quotes");
  EXPECT_EQ(error("fitted_typical(" + c.text + ", 'power', 150, 'cylinders', 4, 'w', 3)"),
            "fitted_typical: the pairs leave out weight of car; they must name every input: weight "
            "of car, cylinders, power");
  EXPECT_EQ(error("fitted_typical(" + c.text + ", 'power', 150, 'weight of car', 3)"),
            "fitted_typical: the pairs leave out cylinders; they must name every input: weight of "
            "car, cylinders, power");
  EXPECT_EQ(
      error("leverage(" + c.text + ", 'power', 150, 'cylinders', 4, 'weight of car', 3, 'w', -1)"),
      "leverage: w must be a number of at least 0, got -1");
  EXPECT_EQ(error("residual(" + c.text + ", 'n/a', 3, '4', 150)"),
            "residual: y must be a number, got text 'n/a'");
  EXPECT_EQ(error("fitted_typical()"), "fitted_typical: takes (model, inputs…), got 0 arguments");
}

TEST_F(ModelFunctions, WhatIsNoModelIsAnError) {
  const auto error = [&](const std::string& call) { return db.ErrorOf("SELECT " + call); };
  EXPECT_EQ(error("fitted_typical('{\"a\":1}', 1)"),
            "fitted_typical: model must be a model made by this extension, got text '{\"a\":1}' "
            "(it lacks ladderline_model)");
  EXPECT_EQ(error("fitted_typical('{\"ladderline_model\":7}', 1)"),
            "fitted_typical: model must be a model made by this extension, got text "
            "'{\"ladderline_model\":7}' (its format has version 7, this build reads version 1)");
  EXPECT_EQ(error("fitted_typical(12, 1)"),
            "fitted_typical: model must be a model made by this extension, got 12");
  EXPECT_EQ(error("fitted_typical(x'00', 1)"),
            "fitted_typical: model must be a model made by this extension, got a BLOB of 1 bytes");
  EXPECT_EQ(error("* FROM model_terms('n/a')"),
            "model_terms: model must be a model made by this extension, got text 'n/a' (it is not "
            "JSON, at byte 2)");
  EXPECT_EQ(error("fact('{\"ladderline_model\":7}', 'f')"),
            "fact: result must be a model made by this extension, got text "
            "'{\"ladderline_model\":7}' (its format has version 7, this build reads version 1)");
}

TEST_F(ModelFunctions, AWeightConcernsOnlyFittedRows) {
  const Case c(Cases()[2]);
  const std::string pairs = c.Pairs(Cases()[2]["new"][0]["inputs"]);
  const double typical = Ask("fitted_typical", c, pairs);
  EXPECT_EQ(Ask("fitted_typical", c, pairs + ", 'w', 4"), typical);
  EXPECT_EQ(Ask("fitted_typical", c, pairs + ", 'w', NULL"), typical);
  EXPECT_TRUE(Agrees(4 * Ask("leverage", c, pairs), Ask("leverage", c, pairs + ", 'w', 4"), 15));
  EXPECT_TRUE(std::isnan(Ask("leverage", c, pairs + ", 'w', NULL")));
  EXPECT_TRUE(std::isnan(Ask("cooks_distance", c, ", 20" + pairs + ", 'w', 0")));
}

TEST_F(ModelFunctions, WorkInViewsTriggersAndGeneratedColumns) {
  const Case c(Cases()[0]);
  db.Run("CREATE TABLE saved(m TEXT)");
  db.Run("INSERT INTO saved VALUES(" + c.text + ")");
  db.Run("CREATE VIEW terms AS SELECT t.term, t.coefficient FROM saved, model_terms(saved.m) AS t");
  EXPECT_EQ(db.Rows("SELECT * FROM terms").size(), 3U);
  db.Run("CREATE TABLE tree(girth, height, volume AS (fitted_typical(" + c.text +
         ", girth, height)) STORED)");
  db.Run("INSERT INTO tree VALUES(12, 75)");
  EXPECT_TRUE(Agrees(Cases()[0]["new"][1]["typical"], db.Number("SELECT volume FROM tree"), 11));
  db.Run("CREATE TABLE log(volume)");
  db.Run(
      "CREATE TRIGGER note AFTER INSERT ON tree BEGIN INSERT INTO log SELECT p.typical FROM "
      "saved, model_predictions(saved.m, 0.9, new.girth, new.height) AS p; END");
  db.Run("INSERT INTO tree VALUES(20, 87)");
  EXPECT_TRUE(Agrees(Cases()[0]["new"][2]["typical"], db.Number("SELECT volume FROM log"), 11));
}

}  // namespace
}  // namespace ladderline::testing
