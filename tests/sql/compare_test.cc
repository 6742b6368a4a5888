// model_compare against R 4.2's anova, AIC and BIC (compare.R), and what it refuses.
#include <gmock/gmock.h>

#include <cmath>

#include "tests/sql/claims.h"
#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using nlohmann::json;
using ::testing::HasSubstr;
using ::testing::StartsWith;

class ModelCompare : public ::testing::Test {
 protected:
  ModelCompare() {
    for (const std::string name : {"trees", "ornstein", "wool"})
      db.LoadCsv(name, "boxcox/" + name + ".csv");
  }
  json Compared(const std::string& first, const std::string& second, const std::string& data,
                const std::string& other_data = "") {
    return json::parse(db.Text("SELECT model_compare((SELECT ols_model(" + first + ") FROM " +
                               data + "), (SELECT ols_model(" + second + ") FROM " +
                               (other_data.empty() ? data : other_data) + "))"));
  }
  Database db;
};

void ExpectRefused(const json& comparison, const std::string& why) {
  for (const auto& [key, value] : comparison.items())
    EXPECT_EQ(value.is_null(), key != "reading") << key;
  EXPECT_EQ(comparison["reading"], "Not compared: " + why + ".");
}

TEST_F(ModelCompare, AgreesWithR) {
  const json file = ReadJson("compare.json");
  ASSERT_EQ(file["cases"].size(), 12U);
  for (const json& c : file["cases"]) {
    const std::string data = c["data"],
                      what = c["first"].get<std::string>() + " / " + c["second"].get<std::string>();
    const json got = Compared(c["first"], c["second"], data),
               back = Compared(c["second"], c["first"], data);
    for (const char* key :
         {"statistic", "df1", "df2", "p_value", "aic_difference", "bic_difference"}) {
      EXPECT_EQ(c.contains(key), !got[key].is_null()) << what << " " << key;
      if (!c.contains(key) || got[key].is_null()) continue;
      EXPECT_TRUE(Agrees(c[key], got[key], 9.5)) << what << " " << key;
      const double sign = std::string(key).find("difference") == std::string::npos ? 1 : -1;
      EXPECT_TRUE(Agrees(sign * c[key].get<double>(), back[key], 9.5)) << what << " " << key;
    }
    EXPECT_EQ(got["test"], c.contains("statistic") ? json("partial F") : json()) << what;
    const double aic = c["aic_difference"], bic = c["bic_difference"];
    const char* preferred = aic < -2 && bic < -2 ? "second"
                            : aic > 2 && bic > 2 ? "first"
                                                 : "neither";
    EXPECT_EQ(got["preferred"], preferred) << what;
    EXPECT_THAT(got["reading"], HasSubstr("(without a key nothing else is compared)"));
    EXPECT_THAT(ClaimsIn(got["reading"]), ::testing::IsEmpty());
  }
}

TEST_F(ModelCompare, ReadsAsSentences) {
  db.Run("ALTER TABLE trees ADD COLUMN id; UPDATE trees SET id = rowid");
  const std::string girth = "'Volume (ft³)', Volume, 'Girth (in)', Girth, 'id | key', id";
  const json got = Compared(girth, girth + ", 'Height', Height", "trees");
  // F, p and the differences of AIC and BIC as in compare.json; median(abs(resid)) by R
  // is 3.241956 and 2.399329.
  EXPECT_EQ(got["reading"],
            "Both were fitted to the same 31 rows. The second has all that the first has, and 1 "
            "term more. Test that these add nothing: F = 6.79 on 1 and 28 degrees of freedom, p = "
            "0.014. AIC is lower for the second by 4.73, BIC by 3.3. Half of the rows lie within "
            "3.24 ft³ of what the first says, and within 2.4 ft³ of what the second says.");
  EXPECT_THAT(Compared(girth + ", 'errors | option', 'hc3'", girth + ", 'Height', Height",
                       "trees")["reading"],
              HasSubstr("p = 0.014 (classical: it takes residuals of even spread for granted)."));
  const json same = Compared(girth, girth, "trees");
  EXPECT_EQ(same["reading"],
            "Both were fitted to the same 31 rows. They are one and the same fit, in the same "
            "columns.");
  EXPECT_EQ(same["preferred"], "neither");
  EXPECT_EQ(same["aic_difference"], 0);
  EXPECT_TRUE(same["test"].is_null());
}

TEST_F(ModelCompare, RefusesInWords) {
  const std::string girth = "'y', Volume, 'x', Girth";
  ExpectRefused(
      Compared(girth, girth, "trees", "trees WHERE Girth < 15"),
      "the two were fitted to different rows, the first to 31 and the second to 23; to use "
      "the same, mark the columns that only one uses as present in the other");
  ExpectRefused(Compared(girth, "'y', Volume, 'x', Girth, 'w | weight', Height", "trees"),
                "the two were fitted to different rows, or rows with other keys or weights");
  ExpectRefused(Compared(girth, "'z', Volume, 'x', Girth", "trees"),
                "the first speaks of y, the second of z");
  ExpectRefused(Compared(girth, girth, "trees", "trees WHERE 0"),
                "the second model was refused (no rows)");
  ExpectRefused(Compared(girth, girth, "trees WHERE 0", "trees"),
                "the first model was refused (no rows)");
}

TEST_F(ModelCompare, TheSameNameWithOtherValuesIsNoNesting) {
  EXPECT_TRUE(
      Compared("'y', Volume, 'x', Girth", "'y', Volume, 'x', Height, 'z', Girth", "trees")["test"]
          .is_null());
}

// All indicators of a category hold the intercept.
TEST_F(ModelCompare, AnInterceptHidesInAllLevelsOfACategory) {
  const json got = Compared(
      "'y', interlocks, 'x', assets",
      "'y', interlocks, 'x', assets, 'sector', sector, 'intercept | option', 'none'", "ornstein");
  EXPECT_EQ(got["df1"], 9);
  const json none =
      Compared("'y', interlocks, 'x', assets",
               "'y', interlocks, 'x', assets, 'z', assets * assets, 'intercept | option', 'none'",
               "ornstein");
  EXPECT_TRUE(none["test"].is_null());
}

TEST_F(ModelCompare, ExactAndSaturatedFits) {
  // Only the larger is exact: beyond all bounds.
  const json one = Compared("'y', 2 * Girth + Height, 'x', Girth",
                            "'y', 2 * Girth + Height, 'x', Girth, 'z', Height", "trees");
  EXPECT_EQ(one["test"], "partial F");
  EXPECT_TRUE(one["statistic"].is_null());
  EXPECT_EQ(one["p_value"], 0);
  EXPECT_EQ(one["preferred"], "neither");
  EXPECT_THAT(one["reading"],
              HasSubstr("The second fit is exact, so that likelihoods do not compare."));
  const json both =
      Compared("'y', 2 * Girth, 'x', Girth", "'y', 2 * Girth, 'x', Girth, 'z', Height", "trees");
  EXPECT_TRUE(both["p_value"].is_null());
  EXPECT_THAT(both["reading"], HasSubstr("The fits of both are exact"));
  const json saturated = Compared("'y', Volume, 'x', Girth", "'y', Volume, 'x', Girth, 'z', Height",
                                  "trees WHERE Girth < 9");
  EXPECT_TRUE(saturated["test"].is_null());
}

TEST_F(ModelCompare, NullsAndWhatIsNoModel) {
  db.Run("CREATE TABLE fit AS SELECT ols_model_plain(Volume, Girth) AS model FROM trees");
  EXPECT_TRUE(db.IsNull("SELECT model_compare(NULL, model) FROM fit"));
  EXPECT_TRUE(db.IsNull("SELECT model_compare(model, ' ') FROM fit"));
  EXPECT_THAT(db.ErrorOf("SELECT model_compare(model, 'n/a') FROM fit"),
              StartsWith("model_compare: second must be a model made by this extension, got text "
                         "'n/a'"));
  EXPECT_EQ(db.Text("SELECT fact(model_compare(model, model), 'preferred') FROM fit"), "neither");
}

}  // namespace
}  // namespace ladderline::testing
