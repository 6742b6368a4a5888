#include "core/report/brief.h"

#include <gmock/gmock.h>

#include "tests/core/effects_cases.h"

namespace ladderline::testing {
namespace {

using ::testing::HasSubstr;
using ::testing::Not;

std::string Of(const Model& model) { return BriefMarkdown(BriefOf(Predictor(model))); }

TEST(Brief, HasItsPartsInOrder) {
  const std::string page = Of(CurveByGroup("log_offset 20"));
  size_t at = 0;
  for (const char* heading :
       {"# Cost (EUR): a fit to 30 cases\n", "\nA line was fitted to ", "\nLeft out: 2 cases",
        "\n## What goes with cost\n", "\n## How close the fit comes\n",
        "\n## What the checks found\n", "\n## To be shown with it\n"}) {
    const size_t found = ("\n" + page).find(heading, at);
    EXPECT_NE(found, std::string::npos) << heading << "\nin\n" << page;
    at = found;
  }
}

TEST(Brief, SaysWhatWasFittedInWords) {
  Model model = CurveByGroup("log_offset 20");
  model.columns[1].missing = 2;
  EXPECT_THAT(Of(model),
              HasSubstr("A line was fitted to the logarithm of cost + 20 EUR in 30 cases of 32 "
                        "offered, on age (years) as a polynomial of degree 2 and trade (2 levels, "
                        "against A, the commonest). Limits are at 95%.\n\nLeft out: 2 cases, since "
                        "age is missing in 2.\n"));
  model.errors = ErrorKind::kHc3;
  model.level = 0.9;
  EXPECT_THAT(Of(model), HasSubstr("Limits are at 90%, by hc3 errors."));
}

TEST(Brief, NamesProductsAmongWhatWasFitted) {
  Model model = CurveByGroup();
  ModelColumn product;
  product.name = "slope";
  product.role = ColumnRole::kProduct;
  product.parts = {1, 2};
  model.columns.push_back(product);
  EXPECT_THAT(Of(model), HasSubstr("on age (years) as a polynomial of degree 2, trade (2 levels, "
                                   "against A, the commonest) and the product of age and trade."));
}

TEST(Brief, TellsEffectsAsSentencesAndLeavesOutRulesOfThumb) {
  Model bare;
  bare.columns = {NumberColumn("cost", "EUR", "log_offset"), NumberColumn("age", "years")};
  bare.terms = {{.name = "intercept"}, {.name = "age", .factors = {{.column = 1}}}};
  const Model model = WithCoefficients(bare, {1, 0.5});
  const std::string page = Of(model);
  EXPECT_THAT(page, HasSubstr("\n- 1 more year of age goes with "));
  EXPECT_THAT(page, HasSubstr("\n- 6 rather than 2 years of age "));
  EXPECT_THAT(page, Not(HasSubstr("rule of thumb")));
}

// b = (0, 3, 1) against A with errors of 1: t(0.975, 20) = 2.086, so 3 ± 2.1 and 1 ± 2.1.
TEST(Brief, PutsManyLevelsIntoOneSentence) {
  Model bare;
  bare.columns = {NumberColumn("cost"),
                  CategoryColumn("trade", {{"A", 12}, {"B", 8}, {"C", 8}, {"D", 2}})};
  bare.terms = {{.name = "intercept"},
                {.name = "trade is B", .factors = {{.column = 1, .level = 1}}},
                {.name = "trade is C", .factors = {{.column = 1, .level = 2}}},
                {.name = "trade is D", .factors = {{.column = 1, .level = 3}}}};
  EXPECT_THAT(
      Of(WithCoefficients(bare, {1, 1, 3, 9})),
      HasSubstr("\n- Against A in trade, C goes with 3.0 more in average cost (95% limits "
                "0.9 to 5.1 more) and B with 1.0 more (1.1 less to 3.1 more), in the 30 "
                "rows fitted; these rows do not settle in which direction for B; for D there is "
                "no figure to quote.\n"));
}

// b = (0.08, 0.01) with errors of 0.01: exp(0.08 ± 0.02086) − 1 is 8.33% between 6.09% and 10.61%,
// exp(0.01 ± 0.02086) − 1 is 1.01% between −1.08% and 3.13%. Of 4 + 20 EUR that is 2.00 and 0.24
// EUR.
Model TwoLevels(const ModelColumn& response, double b, double c) {
  Model bare;
  bare.columns = {response, CategoryColumn("trade", {{"A", 12}, {"B", 9}, {"C", 9}})};
  bare.terms = {{.name = "intercept"},
                {.name = "trade is B", .factors = {{.column = 1, .level = 1}}},
                {.name = "trade is C", .factors = {{.column = 1, .level = 2}}}};
  bare = WithCoefficients(bare, {1, b, c});
  bare.facts.residual_sd = 0.01;
  return bare;
}

TEST(Brief, TellsAmountsOfLevelsWhereAPercentIsOfASum) {
  EXPECT_THAT(
      Of(TwoLevels(NumberColumn("cost", "EUR", "log_offset 20"), 0.08, 0.01)),
      HasSubstr("\n- Against A in trade, B goes with 2.0 EUR more at the median cost of 4 EUR "
                "(8.3% more in cost + 20 EUR, 95% limits 6.1% to 10.6% more) and C with 0.2 "
                "EUR more (1.0% more, 1.1% less to 3.1% more), in the 30 rows fitted; these "
                "rows do not settle in which direction for C.\n"));
}

TEST(Brief, SaysOfLevelsThatNoneIsSettled) {
  EXPECT_THAT(Of(TwoLevels(NumberColumn("cost", "EUR", "log_offset"), 0.005, 0.01)),
              HasSubstr("; these rows do not settle in which direction for any of these.\n"));
}

// −ln(101 − y): a rise of 101 − y is a fall of y, at a median of 93 of 8 points by 0.67 and 0.08.
TEST(Brief, TellsWhatAReflectedScaleMeansForTheResponse) {
  ModelColumn satisfaction = NumberColumn("satisfaction", "points", "log_reflected 101");
  satisfaction.median = 93;
  EXPECT_THAT(
      Of(TwoLevels(satisfaction, -0.08, -0.01)),
      HasSubstr("B goes with 0.67 points less at the median satisfaction of 93 points (8.3% "
                "more in 101 points − satisfaction, 95% limits 6.1% to 10.6% more) and C "
                "with 0.08 points less (1.0% more, "));
}

TEST(Brief, NamesNoSingleCase) {
  Model model = CurveByGroup();
  model.checks = {Found("cooks_distance", "problem",
                        "The row that pulls hardest is 'Jo; without it 7'; without it a term would "
                        "move by up to 3 times its standard error."),
                  Found("leverage", "problem",
                        "The row furthest out by its predictors is 'Jo: leverage 2': leverage 0.6, "
                        "where 0.02 is average.")};
  const std::string page = Of(model);
  EXPECT_THAT(page, Not(HasSubstr("Jo")));
  EXPECT_THAT(page, HasSubstr("One row pulls hardest, which model_influence names; without it a "
                              "term would move by up to 3 times its standard error."));
  EXPECT_THAT(page, HasSubstr("One row is furthest out by its predictors: leverage 0.6, where 0.02 "
                              "is average."));
  model.checks = {Found("leverage", "problem",
                        "2 rows decide their own fitted value, for example 'Jo': a term rests on "
                        "it alone.")};
  EXPECT_THAT(Of(model), Not(HasSubstr("Jo")));
}

TEST(Brief, TellsHowCloseInOriginalUnits) {
  Model model = CurveByGroup();
  model.facts.median_absolute_error = 0.6789;
  model.facts.r_squared = 0.874;
  EXPECT_THAT(Of(model), HasSubstr("Half of the cases lie within 0.679 EUR of their fitted value; "
                                   "the median cost is 4 EUR."));
  EXPECT_THAT(Of(model), HasSubstr("The columns go with 87% of the variation of cost."));
  // The fit at age 4 in trade A is 1 + 8 − 8 = 1, its variance 1 + 16 + 256 and 1 for the case:
  // 1 ± 2.086 √274 = 1 ± 34.5.
  EXPECT_THAT(Of(model), HasSubstr("the fit says 1 EUR, and 95% of such cases should lie between "
                                   "-34 and 36 EUR. No cost was below 0: for single cases the "
                                   "straight-line scale is wrong."));
  model.columns[0].observed_low = -1;
  EXPECT_THAT(Of(model), Not(HasSubstr("was below 0")));
  model.facts.residual_df = 0;
  EXPECT_THAT(Of(model), HasSubstr("as many terms as cases"));
}

TEST(Brief, TellsClosenessOfPercentsInPercentagePoints) {
  Model model = CurveByGroup();
  model.columns[0].unit = "%";
  model.facts.median_absolute_error = 10.5;
  EXPECT_THAT(Of(model), HasSubstr("Half of the cases lie within 10.5 percentage points of their "
                                   "fitted value; the median cost is 4%."));
}

TEST(Brief, WithoutAnInterceptTellsNoShareOfTheVariation) {
  Model model = CurveByGroup();
  model.facts.r_squared = 0.874;
  EXPECT_THAT(Of(model),
              HasSubstr("For a single case at the means and reference levels of all columns the"));
  model.intercept = false;
  model.columns[2].reference = -1;
  const std::string page = Of(model);
  EXPECT_THAT(page, Not(HasSubstr("87%")));
  EXPECT_THAT(page, HasSubstr("Without an intercept there is no share of the variation"));
  EXPECT_THAT(page, HasSubstr("at the means and commonest levels of all columns the fit says"));
}

TEST(Brief, ListsWhatTheChecksFound) {
  Model model = CurveByGroup();
  model.checks_wanted = false;
  EXPECT_THAT(Of(model), HasSubstr("\n- Not computed: breusch_pagan, white, reset, "));
  model.checks_wanted = true;
  model.checks = {Found("white", "fine", "Even."), Found("reset", "look", "Bent.", "Take logs."),
                  Found("durbin_watson", "not computed", "No order."),
                  Found("leverage", "problem", "One row decides.")};
  EXPECT_THAT(Of(model), HasSubstr("- Problem (leverage): One row decides.\n"
                                   "- To look at (reset): Bent. What to try: Take logs.\n"
                                   "- Nothing found by white.\n"
                                   "- Not computed: durbin_watson.\n"));
}

TEST(Brief, ShowsNamesAsTheyAre) {
  Model model = CurveByGroup();
  model.columns[0].name = "_cost_ of *all* <b>";
  model.columns[2].levels[1].text = "a|b\n# c";
  const std::string page = Of(model);
  EXPECT_THAT(page, HasSubstr("\\_cost\\_ of \\*all\\* \\<b\\>"));
  EXPECT_THAT(page, HasSubstr("a|b \\# c rather than A"));
  EXPECT_THAT(page, HasSubstr("model_columns lists them"));
  model.columns[0].name = "a&amp;b ~~c~~ https://d www.e WWW.f w.g h: i";
  EXPECT_THAT(Of(model), HasSubstr("a\\&amp;b \\~\\~c\\~\\~ https\\://d www\\.e WWW\\.f w.g h: i"));
}

TEST(Brief, HtmlHasTheSameTextInElements) {
  Model model = CurveByGroup("log_offset 20");
  model.columns[0].name = "cost <b>&";
  const Predictor predictor(model);
  const std::vector<BriefBlock> blocks = BriefOf(predictor);
  const std::string html = BriefHtml(blocks), markdown = BriefMarkdown(blocks);
  EXPECT_THAT(html, HasSubstr("<h2>Cost &lt;b&gt;&amp; (EUR): a fit to 30 cases</h2>\n<p>"));
  EXPECT_THAT(html, HasSubstr("<h3>How close the fit comes</h3>\n<p>"));
  EXPECT_THAT(html, HasSubstr("</li>\n</ul>\n<h3>"));
  EXPECT_THAT(html, Not(HasSubstr("<b>")));
  const auto count = [](const std::string& text, const std::string& part) {
    size_t found = 0;
    for (size_t at = text.find(part); at != std::string::npos; at = text.find(part, at + 1))
      ++found;
    return found;
  };
  EXPECT_EQ(count(html, "<li>"), count("\n" + markdown, "\n- "));
  EXPECT_EQ(count(html, "<h3>"), count("\n" + markdown, "\n## "));
  EXPECT_EQ(count(html, "<ul>"), count(html, "</ul>"));
  EXPECT_TRUE(html.ends_with("</ul>\n"));
}

TEST(Brief, OfARefusedModelSaysWhy) {
  Model model;
  model.columns = {NumberColumn("cost", "EUR")};
  model.reason = "needs 5 rows, has 3";
  EXPECT_EQ(BriefMarkdown(BriefOfRefused(model)),
            "# Cost (EUR)\n\nNo fit was made: needs 5 rows, has 3.\n");
}

}  // namespace
}  // namespace ladderline::testing
