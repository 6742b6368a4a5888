// Labels that leave the arguments of a transform to be estimated: what is estimated, from which
// rows, and what the user gets where there is no estimate.
#include <gmock/gmock.h>

#include <sstream>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using nlohmann::json;
using ::testing::HasSubstr;

// The numbers of a spec: `box_cox 0.25` gives 0.25.
std::vector<double> Arguments(const std::string& spec) {
  std::istringstream in(spec.substr(spec.find(' ') + 1));
  std::vector<double> numbers;
  for (double number; in >> number;) numbers.push_back(number);
  return numbers;
}

// The pairs of ols_model for a model of estimates.json; `specs` stand in for the labels' own words.
std::string Pairs(const json& model, const std::vector<std::string>& specs = {}) {
  std::string pairs;
  for (size_t i = 0; i < model["columns"].size(); ++i) {
    const std::string name = model["columns"][i][0], word = model["columns"][i][1];
    const bool other = i < specs.size() && word != "category";
    pairs += (i > 0 ? ", '" : "'") + name + " | " + (other ? specs[i] : word) + "', " + name;
  }
  if (model.contains("weight")) pairs += ", 'w | weight', " + model["weight"].get<std::string>();
  return pairs;
}

class Estimates : public ::testing::Test {
 protected:
  Estimates() {
    for (const char* file : {"trees", "poisons", "ornstein"})
      db_.LoadCsv(file, std::string("boxcox/") + file + ".csv");
  }

  std::vector<std::string> Specs(const std::string& model) const {
    std::vector<std::string> specs;
    for (const auto& row : db_.Rows("SELECT transform FROM (SELECT " + model +
                                    " AS model) m, model_columns(m.model)"))
      specs.push_back(row[0].value_or(""));
    return specs;
  }
  // Of the one column `name` in a model of the given pairs.
  std::string Column(const std::string& what, const std::string& name, const std::string& pairs,
                     const std::string& from) const {
    return db_.Text("SELECT " + what + " FROM (SELECT ols_model(" + pairs + ") AS model FROM " +
                    from + ") m, model_columns(m.model) WHERE column_name = '" + name + "'");
  }
  std::string Problem(const std::string& pairs, const std::string& from) const {
    return db_.Text("SELECT model_problem(ols_model(" + pairs + ")) FROM " + from);
  }
  // The model as text, its columns' notes apart and what counts its parameters.
  std::string Unannotated(const std::string& pairs, const std::string& from) const {
    json model = json::parse(db_.Text("SELECT ols_model(" + pairs + ") FROM " + from));
    for (json& column : model["columns"]) column.erase("note");
    for (const char* criterion : {"aic_original", "bic_original"}) model["facts"].erase(criterion);
    return model.dump();
  }

  Database db_;
};

std::string TableOf(const json& model) {
  const std::string file = model["file"];
  return file.substr(file.find('/') + 1, file.find('.') - file.find('/') - 1);
}

// tests/reference/estimates.py: textbook formulas at 80 digits on open data.
TEST_F(Estimates, AgreeWithTextbookFormulas) {
  const json file = ReadJson("estimates.json");
  for (const auto& [name, model] : file["models"].items()) {
    SCOPED_TRACE(name);
    db_.Run("CREATE TABLE m AS SELECT ols_model(" + Pairs(model) + ") AS model FROM " +
            TableOf(model));
    ASSERT_EQ(db_.Text("SELECT model_problem(model) FROM m"), "NULL");
    const std::vector<std::string> specs = Specs("(SELECT model FROM m)");
    for (size_t i = 0; i < model["columns"].size(); ++i) {
      const std::string word = model["columns"][i][1];
      if (word == "category") continue;
      EXPECT_THAT(specs[i], HasSubstr(word.substr(0, word.find(' ')) + " "));
      const std::vector<double> found = Arguments(specs[i]);
      const json& expected = model["arguments"][i];
      ASSERT_EQ(found.size(), expected.size()) << specs[i];
      for (size_t k = 0; k < found.size(); ++k)
        EXPECT_NEAR(found[k], expected[k].get<double>(), 1e-9) << specs[i];
    }
    const auto terms = db_.Rows("SELECT coefficient FROM m, model_terms(m.model)");
    ASSERT_EQ(terms.size(), model["coefficients"].size());
    for (size_t i = 0; i < terms.size(); ++i)
      EXPECT_TRUE(Agrees(model["coefficients"][i], std::stod(*terms[i][0]), 8)) << i;
    db_.Run("DROP TABLE m");
  }
}

// tests/reference/boxcox/published.json, recomputed there at 70 digits.
TEST_F(Estimates, TheResponsesLambdaIsThatOfTheRegression) {
  const auto lambda = [&](const std::string& pairs, const std::string& from) {
    return Arguments(Specs("(SELECT ols_model(" + pairs + ") FROM " + from + ")")[0])[0];
  };
  EXPECT_NEAR(lambda("'Volume | box_cox', Volume, 'Height', Height, 'Girth', Girth", "trees"),
              0.30658483345540986992, 1e-9);
  EXPECT_NEAR(lambda("'Volume | box_cox', Volume, 'Height | log_offset', Height, "
                     "'Girth | log_offset', Girth",
                     "trees"),
              -0.06731681243117202533, 1e-9);
  EXPECT_NEAR(
      lambda("'time | box_cox', time, 'poison | category', poison, 'treat', treat", "poisons"),
      -0.75016253430689385806, 1e-9);
}

// Labels with the numbers written out that the estimates came to give the same model to the bit:
// so everything that reads a model works alike.
TEST_F(Estimates, AreAsIfTheyHadBeenWrittenOut) {
  const json file = ReadJson("estimates.json");
  for (const auto& [name, model] : file["models"].items()) {
    SCOPED_TRACE(name);
    const std::string from = TableOf(model);
    const std::vector<std::string> specs =
        Specs("(SELECT ols_model(" + Pairs(model) + ") FROM " + from + ")");
    EXPECT_EQ(Unannotated(Pairs(model), from), Unannotated(Pairs(model, specs), from));
  }
}

TEST_F(Estimates, AnEstimatedPowerOrOffsetCountsAsAParameterAsInAScan) {
  for (const std::string word : {"box_cox", "yeo_johnson"}) {
    EXPECT_NEAR(
        db_.Number("SELECT fact(m, 'aic_original') FROM (SELECT ols_model('Volume | " + word +
                   "', Volume, " + "'Girth', Girth, 'Height', Height) AS m FROM trees)"),
        db_.Number("SELECT aic FROM (SELECT re_expression_scan('Volume', Volume, 'Girth', "
                   "Girth, 'Height', Height) AS s FROM trees), re_expression_rows(s) WHERE "
                   "spec LIKE '" +
                   word + " %'"),
        1e-8)
        << word;
  }
  // A mean and a spread are a straight line: the fit is the same.
  EXPECT_NEAR(db_.Number("SELECT fact(ols_model('Volume | z_score', Volume, 'Girth', Girth), "
                         "'aic_original') FROM trees"),
              db_.Number("SELECT fact(ols_model('Volume', Volume, 'Girth', Girth), "
                         "'aic_original') FROM trees"),
              1e-9);
}

TEST_F(Estimates, AreShownWithANoteOfWhatWasEstimated) {
  const auto columns = db_.Rows(
      "SELECT column_name, note FROM (SELECT ols_model('a | box_cox', Volume, 'b | yeo_johnson', "
      "Girth, 'c | log_offset auto', Girth * Girth, 'd | z_score', Height, 'e | center', Height * "
      "Girth, 'f | rescale', ' ' || sqrt(Girth)) AS model FROM trees) m, model_columns(m.model)");
  const std::string notes[] = {
      "lambda estimated from the rows used, given the predictors, then taken as known",
      "lambda estimated from the rows used, then taken as known",
      "offset estimated from the rows used, then taken as known",
      "mean and sd estimated from the rows used",
      "mean estimated from the rows used",
      "31 values were numbers stored as text; range observed in the rows used"};
  ASSERT_EQ(columns.size(), 6u);
  for (size_t i = 0; i < 6; ++i) EXPECT_EQ(*columns[i][1], notes[i]) << *columns[i][0];
  EXPECT_THAT(Column("note", "x", "'y', column1, 'x | box_cox', column2",
                     "(VALUES (1, 1), (3, 1), (2, 1), (5, 1), (4, 2))"),
              HasSubstr("lambda estimated from the rows used, at the end of the search"));
}

TEST_F(Estimates, ComeFromTheRowsThatAreFitted) {
  db_.Run(
      "CREATE TABLE gaps AS SELECT rowid AS i, CASE WHEN rowid % 7 = 0 THEN NULL ELSE Volume END "
      "AS "
      "y, CASE rowid % 5 WHEN 0 THEN 0 WHEN 1 THEN NULL ELSE Girth END AS x, Height AS z FROM "
      "trees");
  const std::string pairs = "'y | z_score', y, 'x | box_cox', x, 'z | rescale', z";
  const std::string complete = "(SELECT * FROM gaps WHERE y IS NOT NULL AND x > 0)";
  EXPECT_EQ(Specs("(SELECT ols_model(" + pairs + ") FROM gaps)"),
            Specs("(SELECT ols_model(" + pairs + ") FROM " + complete + ")"));
  EXPECT_NEAR(Arguments(Column("transform", "x", pairs, "gaps"))[0],
              db_.Number("SELECT box_cox_lambda(x) FROM " + complete), 1e-12);
  EXPECT_EQ(Arguments(Column("transform", "z", pairs, "gaps")),
            (std::vector<double>{db_.Number("SELECT min(z) FROM " + complete),
                                 db_.Number("SELECT max(z) FROM " + complete)}));
  EXPECT_NEAR(Arguments(Column("transform", "y", pairs, "gaps"))[1],
              db_.Number("SELECT stddev_samp(y) FROM " + complete), 1e-12);
}

TEST_F(Estimates, OnlyBoxCoxLeavesValuesOut) {
  const std::string from = "(VALUES (4, -3), (5, 0), (7, 1), (6, 2), (9, 5), (8, 40))";
  const auto outside = [&](const std::string& word) {
    return Column("outside", "x", "'y', column1, 'x | " + word + "', column2", from);
  };
  EXPECT_EQ(outside("box_cox"), "2");
  for (const char* word : {"yeo_johnson", "log_offset auto", "z_score", "center", "rescale"})
    EXPECT_EQ(outside(word), "0") << word;
  EXPECT_EQ(Column("outside", "y", "'y | box_cox', column2, 'x', column1", from), "2");
  // Values that a later case may have and no fitted row had.
  db_.Run(
      "CREATE TABLE m AS SELECT ols_model('y', column1, 'x | log_offset auto', column2) AS "
      "model FROM " +
      from);
  EXPECT_FALSE(db_.IsNull("SELECT fitted_typical(model, -3) FROM m"));
  EXPECT_TRUE(db_.IsNull("SELECT fitted_typical(model, -30) FROM m"));
  EXPECT_THAT(db_.Text("SELECT fit_note(model, -30) FROM m"),
              HasSubstr("x -30 lies outside the domain of log_offset "));
}

TEST_F(Estimates, WhereThereIsNoneTheModelIsRefusedWithTheReason) {
  const std::string from =
      "(SELECT column1 AS y, column2 AS x, 5 AS five, rowid % 2 AS two FROM (SELECT rowid, Volume "
      "AS column1, Girth AS column2 FROM trees))";
  for (const char* word : {"z_score", "rescale", "box_cox", "yeo_johnson", "log_offset auto"}) {
    EXPECT_EQ(Problem(std::string("'y', y, 'c | ") + word + "', five", from),
              std::string(word) + " of c cannot be estimated: all values are 5");
    EXPECT_EQ(Problem(std::string("'c | ") + word + "', five, 'x', x", from),
              std::string(word) + " of c cannot be estimated: all values are 5");
  }
  EXPECT_EQ(Problem("'y', y, 'x | log_offset auto', -x", from),
            "log_offset auto of x cannot be estimated: the values are not skewed to the right, and "
            "every logarithm is skewed to the left");
  EXPECT_EQ(Problem("'y', y, 'x | log_offset auto', two", from),
            "log_offset auto of x cannot be estimated: there are only two values, 0 and 1, which "
            "any offset leaves as skewed as they are");
  EXPECT_EQ(Problem("'y', y, 'x | log_offset auto', max(x, 17)", from),
            "log_offset auto of x cannot be estimated: half of the values or more are 17, which "
            "leaves every logarithm skewed to the right");
  EXPECT_EQ(Problem("'y', y, 'x | rescale', (two - 0.5) * 1.7e308 * 2", from),
            "rescale of x cannot be estimated: the spread of the values is beyond the range of "
            "numbers");
  // A power of 5 of 1e100 is no double.
  EXPECT_THAT(Problem("'y', column1, 'x | box_cox', column2 * 1e100",
                      "(VALUES (1, 5.0), (2, 9.0), (4, 9.2), (3, 9.3), (6, 9.4), (5, 9.5))"),
              HasSubstr("estimated for x, takes its values beyond the range of numbers"));
  EXPECT_THAT(Problem("'y', y, 'x | box_cox', -x", from),
              HasSubstr("no complete rows among 31 rows offered; x is outside its domain in 31"));
  EXPECT_EQ(Problem("'y | box_cox', y, 'x | z_score', x", "(SELECT 1 AS y, 2 AS x)"),
            "needs 2 rows, has 1");
  EXPECT_EQ(Problem("'y | box_cox', y, 'x | z_score', x", "(SELECT 1 AS y, 2 AS x) WHERE 0"),
            "no rows");
}

TEST_F(Estimates, AResponsesLambdaNeedsResidualsAndAnIntercept) {
  EXPECT_THAT(Problem("'y | box_cox', column1, 'x', column2", "(VALUES (1, 2), (3, 5))"),
              HasSubstr("box_cox of y cannot be estimated: needs 3 rows, has 2"));
  EXPECT_EQ(Problem("'y | box_cox', 7, 'x', Girth", "trees"),
            "box_cox of y cannot be estimated: all values are 7");
  EXPECT_THAT(Problem("'y | yeo_johnson', column1, 'x | category', column1",
                      "(VALUES (1), (1), (2), (2), (4), (4))"),
              HasSubstr("yeo_johnson of y cannot be estimated: the predictors fit the response "
                        "exactly at every power"));
  EXPECT_EQ(
      db_.ErrorOf("SELECT ols_model('Volume | box_cox', Volume, 'Girth', Girth, 'intercept | "
                  "option', 'none') FROM trees"),
      "ols_model: option intercept must be 'fitted', got 'none', where the power of Volume is "
      "estimated; without an intercept it would depend on the unit");
}

// A constant column is centred to zeros, which the fit then drops, as with its middle written out.
TEST_F(Estimates, ACentredConstantIsDropped) {
  const auto terms = db_.Rows(
      "SELECT coefficient, note FROM (SELECT ols_model('y', Volume, 'c | center', 0.1) AS model "
      "FROM trees) m, model_terms(m.model)");
  EXPECT_EQ(terms[1], (Database::Row{std::nullopt, "left out: always 0"}));
  EXPECT_EQ(Column("transform", "c", "'y', Volume, 'c | center', 0.1", "trees"), "center 0.1");
}

TEST_F(Estimates, GroupsFiltersAndFramesAreEstimatedEachForItself) {
  const std::string call =
      "ols_model('y | box_cox', interlocks + 1, 'assets | yeo_johnson', assets, 'level | "
      "log_offset auto', assets * 1.5 - 100, 'errors | option', 'hc3')";
  const auto groups =
      db_.Rows("SELECT nation, " + call + " FROM ornstein GROUP BY nation ORDER BY nation");
  ASSERT_EQ(groups.size(), 4u);
  std::set<std::string> transforms;
  for (const auto& group : groups) {
    EXPECT_EQ(group[1], db_.Rows("SELECT " + call + " FILTER (WHERE nation = '" + *group[0] +
                                 "') FROM ornstein")[0][0]);
    transforms.insert(json::parse(*group[1])["columns"][0]["transform"]);
  }
  EXPECT_EQ(transforms.size(), 4u);
  db_.Run("CREATE TABLE series AS SELECT rowid AS i, * FROM ornstein WHERE rowid <= 60");
  EXPECT_EQ(
      db_.Rows("SELECT " + call + " OVER (ORDER BY i ROWS 29 PRECEDING) FROM series ORDER BY i"),
      db_.Rows("SELECT (SELECT " + call +
               " FROM series AS f WHERE f.i BETWEEN s.i - 29 AND s.i) FROM series AS s ORDER BY "
               "s.i"));
}

// λ given predictors that are themselves estimated, as the profile alone has it.
TEST_F(Estimates, LabelledPairsOfTheProfilesAreEstimatedToo) {
  EXPECT_NEAR(
      db_.Number("SELECT box_cox_lambda('Volume', Volume, 'Girth | box_cox', Girth, 'Height "
                 "| z_score', Height) FROM trees"),
      ReadJson("estimates.json")["models"]["powers"]["arguments"][0][0].get<double>(), 1e-9);
  EXPECT_TRUE(db_.IsNull("SELECT box_cox_lambda('Volume', Volume, 'c | z_score', 5) FROM trees"));
  EXPECT_EQ(db_.ErrorOf("SELECT box_cox_lambda('Volume | box_cox', Volume, 'Girth', Girth) FROM "
                        "trees"),
            "box_cox_lambda: the response must be raw, got label 'Volume | box_cox'; the power is "
            "what is looked for");
}

// Whatever the weights, the columns count each row once; the response's λ is of the weighted fit.
TEST_F(Estimates, WeightsMoveOnlyTheResponsesLambda) {
  const std::string plain =
      "'Volume | box_cox', Volume, 'Girth | box_cox', Girth, 'Height | z_score', Height";
  const auto light = Specs("(SELECT ols_model(" + plain + ") FROM trees)");
  const auto heavy =
      Specs("(SELECT ols_model(" + plain + ", 'w | weight', Girth * Girth) FROM trees)");
  EXPECT_EQ(light[1], heavy[1]);
  EXPECT_EQ(light[2], heavy[2]);
  EXPECT_NE(light[0], heavy[0]);
}

}  // namespace
}  // namespace ladderline::testing
