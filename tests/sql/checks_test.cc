// model_checks against R 4.2 (lmtest, e1071, car, base), statsmodels and published figures on open
// data, through SQL alone; what the findings say; and what shortage and exactness give.
#include <gmock/gmock.h>

#include <cmath>
#include <regex>

#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using nlohmann::json;
using ::testing::AnyOf;
using ::testing::EndsWith;
using ::testing::HasSubstr;
using ::testing::Not;
using ::testing::StartsWith;

constexpr double kDigits = 9;

// Open data, and the made-up set of residual_tests.R.
class Checks : public ::testing::Test {
 protected:
  static void SetUpTestSuite() {
    db_ = new Database;
    for (const std::string name :
         {"journals", "currencysubstitution", "bondyield", "ornstein", "trees"})
      db_->LoadCsv(name, "boxcox/" + name + ".csv");
    // The generator of Park & Miller (1988).
    double state = 1, before = 0;
    const auto draw = [&] {
      state = std::fmod(16807 * state, 2147483647);
      return state / 2147483647;
    };
    std::string rows;
    for (int i = 0; i < 7000; ++i) {
      const double x = draw();
      const double first = draw(), second = draw(), third = draw();
      before = 0.5 * before + (first + second + third - 1.5);
      char row[96];
      std::snprintf(row, sizeof row, "%s(%.17g,%.17g)", i == 0 ? "" : ",", x,
                    2 * x + 1.5 * x * x + x * before);
      rows += row;
    }
    db_->Run("CREATE TABLE made_up(x, y); INSERT INTO made_up VALUES " + rows);
  }
  static void TearDownTestSuite() { delete db_; }

  // The call whose rows `from` has.
  static std::string Model(const std::string& call, const std::string& from) {
    return "(SELECT ols_model(" + call + ") FROM " + from + ")";
  }
  static double Figure(const std::string& model, const std::string& check,
                       const std::string& figure = "statistic") {
    return db_->Number("SELECT " + figure + " FROM model_checks(" + model +
                       ") WHERE check_name = '" + check + "'");
  }
  static std::string Word(const std::string& model, const std::string& check,
                          const std::string& column = "status") {
    return db_->Text("SELECT " + column + " FROM model_checks(" + model + ") WHERE check_name = '" +
                     check + "'");
  }

  static Database* db_;
};
Database* Checks::db_ = nullptr;

const std::string kJournals =
    "'subs | log_offset', subs, 'p | log_offset', 1.0 * price / citations";
const std::string kCurrency = "'y', logCUS, 'spread', Iu - Ic, 'Ic', Ic, 'logY', logY";
const std::string kBonds = "'y', RAARUS, 'MOOD', MOOD, 'EPI', EPI, 'EXP', EXP, 'RUS', RUS";
const std::string kTrees = "'v', Volume, 'g', Girth, 'h', Height";

struct Case {
  const char* name;
  std::string call, from;
};
std::vector<Case> Cases() {
  return {
      {"journals", kJournals, "journals"},
      {"currencysubstitution", kCurrency, "currencysubstitution"},
      {"bondyield", kBonds, "bondyield"},
      {"ornstein", "'y', interlocks, 'a', assets, 's', sector, 'n', nation", "ornstein"},
      {"ornstein_nation", "'y', interlocks, 'a | log_offset', assets, 'n', nation", "ornstein"},
      {"trees", kTrees, "trees"},
      {"trees_weighted",
       "'v | sqrt_offset', Volume, 'g', Girth, 'h', Height, 'w | weight', Height / 50.0", "trees"},
      {"trees_no_intercept", kTrees + ", 'intercept | option', 'none'", "trees"},
      {"trees_mean", "'v', Volume", "trees"},
      {"trees_one_alone", "'v', Volume, 'g', Girth, 'one', rowid = 7", "trees"},
      {"made_up", "'y', y, 'x', x", "made_up"},
  };
}

// residual_tests_r.json: R 4.2.2, lmtest 0.9-40, e1071 1.7-13.
TEST_F(Checks, ResidualTestsAgreeWithR) {
  const json truth = ReadJson("residual_tests_r.json")["models"];
  double least_p = 1;
  for (const Case& c : Cases()) {
    SCOPED_TRACE(c.name);
    const json& r = truth[c.name];
    const std::string model = Model(c.call, c.from);
    for (const std::string check :
         {"breusch_pagan", "white", "reset", "breusch_godfrey", "jarque_bera", "shapiro_wilk"}) {
      SCOPED_TRACE(check);
      if (!r.contains(check)) {
        EXPECT_EQ(Word(model, check), "not computed");
        EXPECT_THAT(Word(model, check, "finding"), HasSubstr("Not computed: "));
        continue;
      }
      const json& test = r[check];
      EXPECT_TRUE(Agrees(test.front(), Figure(model, check), kDigits));
      EXPECT_TRUE(Agrees(test.back(), Figure(model, check, "p_value"), kDigits));
      if (test.size() > 2) {
        EXPECT_EQ(test[1].get<double>(), Figure(model, check, "df"));
      }
      least_p = std::min(least_p, test.back().get<double>());
    }
    EXPECT_TRUE(Agrees(r["durbin_watson"], Figure(model, "durbin_watson"), kDigits));
    EXPECT_TRUE(Agrees(r["skewness"], Figure(model, "residual_skewness"), kDigits));
  }
  EXPECT_LT(least_p, 1e-280);
}

// residual_tests_statsmodels.json: statsmodels 0.13.5.
TEST_F(Checks, ResidualTestsAgreeWithStatsmodels) {
  const json truth = ReadJson("residual_tests_statsmodels.json")["models"];
  for (const Case& c : Cases()) {
    if (!truth.contains(c.name)) continue;
    SCOPED_TRACE(c.name);
    const std::string model = Model(c.call, c.from);
    for (const std::string check : {"breusch_pagan", "white", "jarque_bera"}) {
      const json& test = truth[c.name][check];
      EXPECT_TRUE(Agrees(test.front(), Figure(model, check), kDigits)) << check;
      EXPECT_TRUE(Agrees(test.back(), Figure(model, check, "p_value"), kDigits)) << check;
    }
    EXPECT_TRUE(Agrees(truth[c.name]["durbin_watson"], Figure(model, "durbin_watson"), kDigits));
  }
}

// boxcox/published.json: printed outputs of worked examples of Kleiber & Zeileis (2008) and Krämer
// & Sonnberger (1986), half a unit in the last digit printed.
TEST_F(Checks, PublishedFiguresAreMetToTheirDigits) {
  std::map<std::string, json> published;
  const json file = ReadJson("boxcox/published.json");
  for (const json& example : file["examples"]) published[example["id"]] = example["published"];
  const auto expect = [](const json& printed, double value) {
    const std::string text = printed;
    const std::size_t point = text.find('.');
    const int decimals = point == std::string::npos ? 0 : static_cast<int>(text.size() - point - 1);
    EXPECT_NEAR(std::stod(text), value, 0.5 * std::pow(10.0, -decimals)) << "printed " << text;
  };
  const auto expect_test = [&](const json& printed, const std::string& model,
                               const std::string& check) {
    expect(printed["BP"], Figure(model, check));
    expect(printed["df"], Figure(model, check, "df"));
    expect(printed["p"], Figure(model, check, "p_value"));
  };
  const std::string journals = Model(kJournals, "journals");
  const std::string currency = Model(kCurrency, "currencysubstitution");
  expect_test(published["journals"]["bp_studentized"], journals, "breusch_pagan");
  expect_test(published["journals"]["bp_studentized_x_and_x2"], journals, "white");
  expect_test(published["currencysubstitution"]["bp_studentized"], currency, "breusch_pagan");
  expect(published["currencysubstitution"]["durbin_watson"], Figure(currency, "durbin_watson"));
  expect_test(published["bondyield"]["bp_studentized"], Model(kBonds, "bondyield"),
              "breusch_pagan");
}

// regression_checks.json: R 4.2, base and car.
TEST_F(Checks, DependenceInfluenceAndLeverageAgreeWithR) {
  const json truth = ReadJson("regression_checks.json");
  const std::vector<Case> cases = {
      {"trees", kTrees, "trees"},
      {"trees_weighted", kTrees + ", 'w | weight', 1.0 / (Girth * Girth)", "trees"},
      {"journals",
       "'s | log_offset', subs, 'p | log_offset', price, 'c | log_offset', citations, 'y', "
       "foundingyear",
       "journals"},
      {"ornstein",
       "'i | log_offset 1', interlocks, 'a | log_offset', assets, 'n | category CAN', nation, "
       "'s | category AGR', sector",
       "ornstein"},
  };
  const auto largest = [](const json& values) {
    double most = 0;
    for (const json& value : values) most = std::max(most, value.get<double>());
    return most;
  };
  for (const Case& c : cases) {
    SCOPED_TRACE(c.name);
    const std::string model = Model(c.call, c.from);
    const json& r = truth[c.name];
    EXPECT_TRUE(Agrees(largest(r["leverage"]), Figure(model, "leverage"), kDigits));
    EXPECT_TRUE(Agrees(largest(r["cooks_distance"]), Figure(model, "cooks_distance"), kDigits));
    EXPECT_TRUE(Agrees(largest(r["inflation"]), Figure(model, "variance_inflation"), kDigits));
    // R's reference levels are the first, so that the condition number is theirs.
    if (std::string(c.name) != "ornstein") {
      EXPECT_TRUE(Agrees(r["condition_number"], Figure(model, "condition_number"), kDigits));
    }
  }
}

// residual_tests_r.json, lmtest's order.by.
TEST_F(Checks, SerialCorrelationFollowsTheOrderColumn) {
  const json truth = ReadJson("residual_tests_r.json")["models"];
  for (const Case& c : {Case{"journals", kJournals + ", 'o | order', foundingyear", "journals"},
                        Case{"trees", kTrees + ", 'o | order', -Height", "trees"},
                        // Text of one length sorts as the numbers do.
                        Case{"trees", kTrees + ", 'o | order', 'no. ' || (1000 - Height)", "trees"},
                        Case{"trees", kTrees + ", 'o | order', CAST(-Height AS TEXT)", "trees"}}) {
    SCOPED_TRACE(c.call);
    const std::string model = Model(c.call, c.from);
    const json& test = truth[c.name]["ordered_breusch_godfrey"];
    EXPECT_TRUE(Agrees(test.front(), Figure(model, "breusch_godfrey"), kDigits));
    EXPECT_TRUE(Agrees(test.back(), Figure(model, "breusch_godfrey", "p_value"), kDigits));
    EXPECT_TRUE(
        Agrees(truth[c.name]["ordered_durbin_watson"], Figure(model, "durbin_watson"), kDigits));
    EXPECT_THAT(Word(model, "durbin_watson", "finding"), HasSubstr("in the order of o"));
  }
  EXPECT_THAT(Word(Model(kTrees, "trees"), "durbin_watson", "finding"),
              HasSubstr("in the order the rows came"));
}

// Rows of a fixed stream (the generator of Park & Miller): x even between 0 and 1, e the sum of
// three uniform numbers about 0.
std::string Stream(int rows) {
  return "(WITH RECURSIVE s(i, a, b, c, d) AS (SELECT 1, 7, 49, 343, 2401 UNION ALL SELECT i + 1, "
         "a * 48271 % 2147483647, b * 16807 % 2147483647, c * 69621 % 2147483647, "
         "d * 40692 % 2147483647 FROM s WHERE i < " +
         std::to_string(rows) +
         ") SELECT i, a / 2147483647.0 AS x, (b + c + d) / 2147483647.0 - 1.5 AS e FROM s WHERE i "
         "> 20)";
}

// What nearly every large table shows: a p-value beyond doubt about very little.
TEST_F(Checks, SmallTroubleInManyRowsIsFineWhateverItsP) {
  const std::string model =
      Model("'y', 3 + x + 0.15 * x * x + (1 + 0.25 * x) * e, 'x', x", Stream(60'000));
  EXPECT_LT(Figure(model, "breusch_pagan", "p_value"), 1e-100);
  EXPECT_EQ(Word(model, "breusch_pagan"), "fine");
  EXPECT_LT(Figure(model, "white", "p_value"), 1e-100);
  EXPECT_EQ(Word(model, "white"), "fine");
  EXPECT_LT(Figure(model, "jarque_bera", "p_value"), 1e-50);
  EXPECT_EQ(Word(model, "jarque_bera"), "fine");
  EXPECT_LT(Figure(model, "reset", "p_value"), 1e-3);
  EXPECT_EQ(Word(model, "reset"), "fine");
}

TEST_F(Checks, FunnelIsAProblemAndItsRemedyMendsIt) {
  const std::string from = Stream(4000), inputs = ", exp(1 + 2 * x + 0.5 * e), 'x', x";
  const std::string model = Model("'cost of work (EUR)'" + inputs, from);
  EXPECT_EQ(Word(model, "breusch_pagan"), "problem");
  EXPECT_EQ(Word(model, "white"), "look");
  EXPECT_THAT(Word(model, "breusch_pagan", "finding"),
              HasSubstr("times as widely around a fitted value of"));
  const std::string remedy = Word(model, "breusch_pagan", "remedy");
  EXPECT_THAT(remedy, HasSubstr("'\"cost of work\" | log_offset'"));
  EXPECT_THAT(remedy, HasSubstr("'errors | option', 'hc3'"));
  const std::string mended = Model("'\"cost of work\" | log_offset'" + inputs, from);
  EXPECT_EQ(Word(mended, "breusch_pagan"), "fine");
  EXPECT_EQ(Word(mended, "white"), "fine");
  EXPECT_EQ(Word(mended, "reset"), "fine");
  const std::string robust =
      Model("'cost of work (EUR)'" + inputs + ", 'errors | option', 'hc3'", from);
  EXPECT_EQ(Word(robust, "breusch_pagan"), "look");
  EXPECT_EQ(Word(robust, "white"), "fine");
  EXPECT_THAT(Word(robust, "white", "finding"), HasSubstr("(hc3) allow for that"));
}

// What chance makes is said of the same rows without contradiction.
TEST_F(Checks, WideSpreadThatChanceMakesIsSaidInOneSentence) {
  const std::regex contradiction("times as widely[^.]*\\. Chance|Too few[^.]*\\. Chance");
  for (int rows = 40; rows <= 80; ++rows) {
    const std::string model = Model("'y', 3 + x + e, 'x', x", Stream(rows));
    const std::string finding = Word(model, "breusch_pagan", "finding");
    EXPECT_FALSE(std::regex_search(finding, contradiction)) << finding;
    if (Figure(model, "breusch_pagan", "p_value") < 0.05) continue;
    EXPECT_THAT(finding, HasSubstr("chance")) << rows;
  }
  // Of 319 rows 4 have another fitted value: rows enough, and one stretch.
  EXPECT_THAT(Word(Model("'y', 3 + e, 'x', i % 80 = 0", Stream(339)), "breusch_pagan", "finding"),
              StartsWith("Fitted values lie too close together to see how widely"));
  EXPECT_THAT(Word(Model("'y', 3 + e, 'x', x", Stream(35)), "breusch_pagan", "finding"),
              StartsWith("Too few rows to see how widely"));
}

TEST_F(Checks, ScalesAreLookedForByTheScanAndZerosAreKept) {
  const std::string from = Stream(4000), rest = " THEN 0 ELSE exp(1 + 2 * x + 0.9 * e) END, 'x', x";
  const std::string scan =
      "Let re_expression_scan('cost', …), with the model's other labels and values after it, look "
      "for a scale";
  const std::string zeros = Model("'cost', CASE WHEN i % 20 = 0" + rest, from);
  const std::string keeps = scan + "; 'cost | log_offset auto' keeps zeros";
  EXPECT_THAT(Word(zeros, "breusch_pagan", "remedy"), StartsWith(keeps + "; or keep the scale"));
  EXPECT_EQ(Word(zeros, "residual_skewness", "remedy"), keeps + ".");
  // Where most are zeros there is no such offset.
  const std::string mostly = Model("'cost', CASE WHEN i % 3 > 0" + rest, from);
  EXPECT_EQ(Word(mostly, "residual_skewness", "remedy"), scan + ".");
  EXPECT_EQ(
      Word(Model("'cost', exp(1 + 2 * x + 0.9 * e), 'x', x", from), "residual_skewness", "remedy"),
      scan + "; 'cost | log_offset' is the first to try.");
  // The label that is named is one that fits, and the fit's own words have few digits.
  const std::string mended = Model("'cost | log_offset auto', CASE WHEN i % 20 = 0" + rest, from);
  EXPECT_EQ(Figure(mended, "rows_left_out"), 0);
  const std::string spread = Word(mended, "breusch_pagan", "finding");
  EXPECT_TRUE(std::regex_search(spread, std::regex("^Residuals of log_offset [0-9.]{1,8} are")))
      << spread;
}

TEST_F(Checks, BendIsAProblemAndItsRemedyMendsIt) {
  const std::string model = Model("'y', 5 + log(x + 0.01) + 0.3 * e, 'x', x + 0.01", Stream(3000));
  EXPECT_EQ(Word(model, "reset"), "problem");
  EXPECT_THAT(Word(model, "reset", "finding"), HasSubstr("low, middling and high"));
  EXPECT_THAT(Word(model, "reset", "remedy"), HasSubstr("'x | polynomial 2'"));
  EXPECT_EQ(
      Word(Model("'y', 5 + log(x + 0.01) + 0.3 * e, 'x | log_offset', x + 0.01", Stream(3000)),
           "reset"),
      "fine");
}

// Correlations of neighbours of 0.5 in the model; as they came no more than a look is asked for.
TEST_F(Checks, NeighboursAreAProblemOnlyInAGivenOrder) {
  EXPECT_EQ(Word(Model("'y', y, 'x', x", "made_up"), "durbin_watson"), "look");
  EXPECT_THAT(Word(Model("'y', y, 'x', x, 'o | order', rowid", "made_up"), "breusch_godfrey"),
              AnyOf("look", "problem"));
  EXPECT_EQ(Word(Model("'y', y, 'x', x, 'o | order', x", "made_up"), "breusch_godfrey"), "fine");
}

TEST_F(Checks, CloseColumnsAreNamedWithTheirCompanion) {
  const std::string model =
      Model("'y', 1 + x + e, 'x', x, 'twin', x + 0.01 * e, 'far', 2000 + i % 7", Stream(500));
  EXPECT_EQ(Word(model, "variance_inflation"), "problem");
  EXPECT_THAT(Word(model, "variance_inflation", "finding"),
              AnyOf(HasSubstr("It goes most closely with twin (correlation 1)"),
                    HasSubstr("It goes most closely with x (correlation 1)")));
  EXPECT_EQ(Word(model, "condition_number"), "problem");
  // A year beside an intercept harms nobody.
  const std::string year = Model("'y', 1 + x + e, 'x', x, 'year', 2000 + i % 7", Stream(500));
  EXPECT_GT(Figure(year, "condition_number"), 1000);
  EXPECT_EQ(Word(year, "condition_number"), "fine");
}

TEST_F(Checks, ColumnsLeftOutAreNamedWithWhatTheyRepeat) {
  const std::string repeats = "age2 repeats age and was left out";
  const std::string model = Model("'y', 1 + x + e, 'age', x, 'age2', 2 * x", Stream(500));
  EXPECT_THAT(Word(model, "condition_number", "finding"), EndsWith(" " + repeats + "."));
  EXPECT_THAT(Word(model, "variance_inflation", "finding"), EndsWith(" " + repeats + "."));
  const std::string more = Model("'y', 1 + x + e, 'age', x, 'age2', 2 * x, 'one', 1", Stream(500));
  EXPECT_THAT(Word(more, "condition_number", "finding"),
              EndsWith(" " + repeats + ", and so was 1 more term."));
  EXPECT_THAT(Word(Model("'y', 1 + x + e, 'age', x, 'one', 1", Stream(500)), "variance_inflation",
                   "finding"),
              EndsWith(" one is always the same value and was left out."));
}

// One row of 480 far from all others by its response, and its predictor: D > 1 by its making.
TEST_F(Checks, ARowThatPullsHardIsSaidToMoveTerms) {
  const std::string pulls =
      Model("'y', CASE i WHEN 30 THEN 100 ELSE e END, 'x', CASE i WHEN 30 THEN 9 ELSE x END",
            Stream(500));
  EXPECT_EQ(Word(pulls, "cooks_distance"), "problem");
  EXPECT_THAT(Word(pulls, "cooks_distance", "finding"),
              HasSubstr("; without it a term would move by up to "));
  const std::string page = db_->Text("SELECT model_brief(" + pulls + ")");
  EXPECT_THAT(page, HasSubstr("One row pulls hardest, which model_influence names; without it a "));
  EXPECT_THAT(page, HasSubstr("One row is furthest out by its predictors: leverage "));
  EXPECT_THAT(page, Not(HasSubstr("row 30")));
  EXPECT_THAT(Word(Model("'y', e, 'x', x", Stream(500)), "cooks_distance", "finding"),
              HasSubstr("; without it no term would move by more than "));
}

// A row of a level that 4 rows have has leverage of about 1/4.
TEST_F(Checks, ARareLevelThatStandsOutIsNamed) {
  const std::string rare = Model(
      "'y', e, 'x', x, 'trade', CASE WHEN i % 120 = 0 THEN 'Damp' WHEN i % 2 THEN 'Roof' ELSE "
      "'Wall' END",
      Stream(500));
  EXPECT_EQ(Word(rare, "leverage"), "look");
  EXPECT_EQ(Word(rare, "leverage", "remedy"),
            "Only 4 rows have Damp in trade: merge it with another level, or leave it out; another "
            "scale would not help.");
  const std::string far = Model(
      "'y', e, 'x', CASE i WHEN 30 THEN 90 ELSE x END, 'trade', CASE WHEN i % 2 THEN 'Roof' ELSE "
      "'Wall' END",
      Stream(500));
  EXPECT_THAT(Word(far, "leverage", "remedy"), StartsWith("Check the record;"));
}

// Costs 1..10 are used: mean 5.5, sd 3.03. Five rows of 20 without an age are not: a third of all,
// and the mean of all is off by a third of 14.5 / 3.03.
TEST_F(Checks, RowsLeftOutAreComparedWithRowsUsed) {
  db_->Run(
      "CREATE TABLE left_out AS WITH RECURSIVE s(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM s "
      "WHERE i < 15) SELECT i, CASE WHEN i <= 10 THEN i ELSE 20 END AS cost, CASE WHEN i <= 10 "
      "THEN (i * 7) % 10 END AS age FROM s");
  const std::string model = Model("'cost (EUR)', cost, 'age', age", "left_out");
  EXPECT_DOUBLE_EQ(Figure(model, "rows_left_out"), 1.0 / 3);
  EXPECT_EQ(Word(model, "rows_left_out"), "problem");
  EXPECT_EQ(Word(model, "rows_left_out", "finding"),
            "5 of 15 rows (33%) were left out: age is missing in 5. Where known, their mean of "
            "cost is 20 EUR, that of the rows used 5.5 EUR.");
  const std::string logged = Model("'cost | log_offset', cost - 1, 'i', i", "left_out");
  EXPECT_THAT(Word(logged, "rows_left_out", "finding"),
              HasSubstr("1 of 15 rows (7%) was left out: cost lies outside log_offset in 1."));
  EXPECT_THAT(Word(logged, "rows_left_out", "remedy"),
              HasSubstr("'cost | log_offset 1' takes zeros in"));
  EXPECT_EQ(Word(Model("'i', i, 'cost', cost", "left_out"), "rows_left_out", "finding"),
            "Every row was used.");
  // A moving frame forgets what has left it, a spike included.
  EXPECT_EQ(db_->Text("SELECT group_concat(finding, '; ') FROM (SELECT ols_model('c', CASE i WHEN "
                      "1 THEN 1e300 ELSE i END, 'a', CASE WHEN i % 2 THEN NULL ELSE i * i % 5 END) "
                      "OVER (ORDER BY i ROWS 11 PRECEDING) AS m, i FROM left_out) f, "
                      "model_checks(f.m) c WHERE i = 15 AND check_name = 'rows_left_out'"),
            "6 of 12 rows (50%) were left out: a is missing in 6. Where known, their mean of c is "
            "10, that of the rows used 9.");
}

TEST_F(Checks, LevelOfOneRowIsNamed) {
  db_->Run(
      "CREATE TABLE single AS SELECT rowid AS id, Volume, Girth, CASE WHEN rowid = 7 THEN "
      "'it''s' WHEN rowid % 2 THEN 'a' ELSE 'b' END AS kind FROM trees");
  const std::string model =
      Model("'v', Volume, 'g', Girth, 'kind', kind, 'id | key', 'T' || id", "single");
  EXPECT_EQ(Word(model, "leverage"), "problem");
  EXPECT_EQ(Word(model, "leverage", "finding"),
            "1 row decides its own fitted value, 'T7': a term rests on it alone.");
  EXPECT_THAT(Word(model, "leverage", "remedy"), HasSubstr("IN ('it''s')"));
  // The page for others does not name it.
  const std::string page = db_->Text("SELECT model_brief(" + model + ")");
  EXPECT_THAT(page, HasSubstr("1 row decides its own fitted value: a term rests on it alone."));
  EXPECT_THAT(page, Not(HasSubstr("T7")));
}

TEST_F(Checks, ExactAndSaturatedFitsSayWhatTheyCan) {
  const std::string exact = Model("'v', Volume, 'g', Volume", "trees");
  for (const std::string check :
       {"breusch_pagan", "white", "reset", "jarque_bera", "shapiro_wilk", "residual_skewness",
        "durbin_watson", "breusch_godfrey", "cooks_distance"}) {
    EXPECT_EQ(Word(exact, check), "not computed") << check;
    EXPECT_THAT(Word(exact, check, "finding"), HasSubstr("the fit is exact")) << check;
  }
  EXPECT_THAT(Word(exact, "breusch_pagan", "remedy"), HasSubstr("the response itself"));
  EXPECT_EQ(Word(exact, "rows_per_term"), "fine");
  const std::string saturated = Model(kTrees, "trees WHERE rowid <= 3");
  EXPECT_THAT(Word(saturated, "white", "finding"), HasSubstr("as many terms as rows"));
  EXPECT_EQ(Word(saturated, "leverage"), "problem");
  EXPECT_EQ(Word(saturated, "rows_per_term"), "problem");
}

// Few rows, flat columns, repeats and extreme sizes: fourteen checks, no infinity, no silence.
TEST_F(Checks, ShortageOfAnyKindIsPutInWords) {
  const std::regex number_gone("\\b(inf|nan)\\b");
  int models = 0;
  for (int rows = 1; rows <= 9; ++rows) {
    for (const std::string y : {"i", "1", "i * i % 7", "i % 2", "i * 1e150", "i * 1e-150"}) {
      for (const std::string call :
           {"", ", 'x', i * 3 % 5", ", 'x', 1", ", 'x', i % 2, 'z', i % 3, 'o | order', -i",
            ", 'c | category', i % 4, 'w | weight', 1 + i % 3",
            ", 'x', i * 1e100, 'intercept | option', 'none'", ", 'x', i, 'c | cluster', i % 2"}) {
        const std::string from = Stream(20 + rows);
        const auto checks = db_->Rows("SELECT status, statistic, p_value, finding, remedy FROM " +
                                      std::string("(SELECT ols_model('y', ") + y + call +
                                      ") AS m FROM " + from + ") f, model_checks(f.m)");
        if (checks.empty()) continue;
        ++models;
        ASSERT_EQ(checks.size(), 14u);
        for (const auto& check : checks) {
          ASSERT_TRUE(check[3].has_value());
          EXPECT_FALSE(std::regex_search(*check[3], number_gone)) << *check[3];
          EXPECT_EQ(*check[0] == "look" || *check[0] == "problem",
                    check[4].has_value() && *check[0] != "not computed")
              << *check[0] << *check[3];
          if (*check[0] != "not computed" &&
              check[3]->find("would be exact") == std::string::npos) {
            EXPECT_TRUE(check[1].has_value()) << *check[3];
          }
        }
      }
    }
  }
  EXPECT_GT(models, 200);
}

TEST_F(Checks, ChecksThatWereNotWantedCostNothingAndSaySo) {
  const std::string model = Model(kTrees + ", 'checks | option', 'none'", "trees");
  EXPECT_EQ(db_->Text("SELECT group_concat(DISTINCT status || finding) || count(*) FROM "
                      "model_checks(" +
                      model + ")"),
            "not computedNot computed: option checks is 'none'.14");
  EXPECT_TRUE(db_->IsNull("SELECT json_extract(" + model + ", '$.checks')"));
  EXPECT_EQ(db_->Number("SELECT count(*) FROM model_checks(NULL)"), 0);
  EXPECT_EQ(db_->Number("SELECT count(*) FROM (SELECT ols_model(" + kTrees +
                        ") AS m FROM trees WHERE 0) f, model_checks(f.m)"),
            0);
}

// Nothing causal, and nothing "significant".
TEST_F(Checks, FindingsKeepToPlainWords) {
  const std::regex unwanted(
      "signific|caus|leads? to|because of|effect|hypothes|null |reject|due to|impact|driv",
      std::regex::icase);
  for (const Case& c : Cases()) {
    for (const auto& row : db_->Rows("SELECT finding, coalesce(remedy, '') FROM model_checks(" +
                                     Model(c.call, c.from) + ")")) {
      EXPECT_FALSE(std::regex_search(*row[0], unwanted)) << *row[0];
      EXPECT_FALSE(std::regex_search(*row[1], unwanted)) << *row[1];
      EXPECT_EQ(row[0]->back(), '.');
    }
  }
}

// The text of a model holds 11 digits of these figures.
TEST_F(Checks, InfluenceByKeyAgreesWithTheScalars) {
  db_->Run(
      "CREATE TABLE kept AS SELECT 'T-' || rowid AS id, Girth, Height, Volume, Height / 50.0 AS w "
      "FROM trees");
  db_->Run(
      "CREATE TABLE fits AS SELECT 'plain' AS name, ols_model('Volume | log_offset', Volume, "
      "'Girth | log_offset', Girth, 'Height', Height, 'id | key', id) AS m FROM kept UNION ALL "
      "SELECT 'weighted', ols_model('Volume | sqrt_offset', Volume, 'Girth', Girth, 'Height', "
      "Height, 'w | weight', w, 'id | key', id) FROM kept");
  for (const std::string weight : {"", ", 'w', w"}) {
    const std::string inputs = "'Girth', Girth, 'Height', Height" + weight;
    const auto rows = db_->Rows(
        "SELECT i.cooks_distance, cooks_distance(m, Volume, " + inputs +
        "), i.leverage, leverage(m, " + inputs +
        "), i.studentized_residual, studentized_residual(m, Volume, " + inputs +
        ") FROM fits, model_influence(fits.m) AS i JOIN kept ON kept.id = i.key WHERE name = '" +
        (weight.empty() ? "plain" : "weighted") + "'");
    ASSERT_EQ(rows.size(), 20u);
    for (const auto& row : rows) {
      for (const size_t pair : {0, 2, 4})
        EXPECT_TRUE(Agrees(std::stod(*row[pair + 1]), std::stod(*row[pair]), kDigits));
    }
  }
}

}  // namespace
}  // namespace ladderline::testing
