// model_brief and model_cautions as users call them; what they say is tested in tests/core.
#include <gmock/gmock.h>

#include <regex>

#include "tests/sql/claims.h"
#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using ::testing::HasSubstr;
using ::testing::StartsWith;

class Report : public ::testing::Test {
 protected:
  Report() {
    for (const std::string name : {"trees", "ornstein"})
      db.LoadCsv(name, "boxcox/" + name + ".csv");
    db.Run(
        "CREATE TABLE fit AS SELECT ols_model('interlocks (boards) | log_offset 1', interlocks, "
        "'assets (million) | log_offset', assets, 'sector', sector, 'nation | category CAN', "
        "nation, "
        "'errors | option', 'hc3') AS model FROM ornstein;"
        "CREATE TABLE none AS SELECT ols_model('y', Volume, 'x', Girth) AS model FROM trees WHERE "
        "Girth < 8.4");
  }
  Database db;
};

TEST_F(Report, ABriefIsAPageWithoutClaims) {
  const std::string page = db.Text("SELECT model_brief(model) FROM fit");
  EXPECT_THAT(page, StartsWith("# Interlocks (boards): a fit to 248 cases\n"));
  EXPECT_THAT(page, HasSubstr("by hc3 errors"));
  // Cautions may say what the page does not claim.
  const std::string told = page.substr(0, page.find("## To be shown with it"));
  EXPECT_THAT(ClaimsIn(told), ::testing::IsEmpty());
  EXPECT_THAT(page, ::testing::Not(HasSubstr("significan")));
}

TEST_F(Report, ABriefHoldsTheSentencesOfItsNumbers) {
  const std::string page = db.Text("SELECT model_brief(model) FROM fit");
  for (const auto& row :
       db.Rows("SELECT sentence FROM fit, model_effects(model) WHERE column_name = "
               "'assets' AND kind <> 'rule_of_thumb'"))
    EXPECT_THAT(page, HasSubstr("- " + *row[0] + "\n"));
  for (const auto& row : db.Rows("SELECT caution FROM fit, model_cautions(model)"))
    EXPECT_THAT(page, HasSubstr("- " + *row[0] + "\n"));
}

// Of a re-expressed response the middle value and the mean are other figures: those of
// fitted_typical and fitted_mean, in whole boards.
TEST_F(Report, ABriefTellsTheTypicalAndTheMeanOfASingleCase) {
  db.Run(
      "CREATE TABLE simple AS SELECT ols_model('interlocks (boards) | log_offset 1', interlocks, "
      "'assets | log_offset', assets) AS model, avg(assets) AS assets FROM ornstein");
  const std::string page = db.Text("SELECT model_brief(model) FROM simple");
  std::smatch found;
  ASSERT_TRUE(std::regex_search(
      page, found,
      std::regex("the fit says a typical \\(middle\\) value of ([0-9]+) boards and a mean of "
                 "([0-9]+) boards, and 95% of such cases")))
      << page;
  const double typical = std::stod(found[1]), mean = std::stod(found[2]);
  EXPECT_NEAR(typical, db.Number("SELECT fitted_typical(model, 'assets', assets) FROM simple"),
              0.5);
  EXPECT_NEAR(mean, db.Number("SELECT fitted_mean(model, 'assets', assets) FROM simple"), 0.5);
  EXPECT_GT(mean, typical + 1);
}

TEST_F(Report, RefusedAndMissingModels) {
  EXPECT_EQ(db.Text("SELECT model_brief(model) FROM none"),
            "# Y\n\nNo fit was made: needs 2 rows, has 1.\n");
  EXPECT_EQ(db.Text("SELECT model_brief(model, 'html') FROM none"),
            "<h2>Y</h2>\n<p>No fit was made: needs 2 rows, has 1.</p>\n");
  EXPECT_TRUE(db.IsNull("SELECT model_brief(model, NULL) FROM none"));
  EXPECT_EQ(db.ErrorOf("SELECT model_brief(model, 'pdf') FROM none"),
            "model_brief: form must be markdown or html, got text 'pdf'");
  EXPECT_TRUE(db.IsNull("SELECT model_brief(NULL)"));
  EXPECT_TRUE(db.IsNull("SELECT model_brief(' ')"));
  EXPECT_EQ(db.Rows("SELECT * FROM none, model_cautions(model)").size(), 0U);
  EXPECT_EQ(db.Rows("SELECT * FROM model_cautions(NULL)").size(), 0U);
  EXPECT_THAT(
      db.ErrorOf("SELECT model_brief('n/a')"),
      StartsWith("model_brief: model must be a model made by this extension, got text 'n/a'"));
}

TEST_F(Report, TextAndNumbersForPages) {
  EXPECT_EQ(db.Text("SELECT html_text('<a href=\"x\">' || char(10) || '&')"),
            "&lt;a href=&quot;x&quot;&gt; &amp;");
  EXPECT_EQ(db.Text("SELECT html_text(12)"), "12");
  EXPECT_TRUE(db.IsNull("SELECT html_text(NULL)"));
  EXPECT_EQ(db.Text("SELECT html_number(-0.123456)"), "<data value=\"-0.123456\">-0.123</data>");
  EXPECT_EQ(db.Text("SELECT html_number('1234.5')"), "<data value=\"1234.5\">1234</data>");
  EXPECT_TRUE(db.IsNull("SELECT html_number('')"));
  EXPECT_EQ(db.ErrorOf("SELECT html_number('n/a')"),
            "html_number: x must be a number, got text 'n/a'");
}

}  // namespace
}  // namespace ladderline::testing
