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
  EXPECT_EQ(Compared(girth, girth + ", 'errors | option', 'hc3'", "trees")["reading"],
            "Both were fitted to the same 31 rows. They are one and the same fit, in the same "
            "columns; only their errors differ, and so do limits (classical in the first, hc3 in "
            "the second).");
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
  ExpectRefused(Compared(girth, girth + ", 'id | key', rowid", "trees"),
                "the second has a key, the other not; give both the same key");
  ExpectRefused(Compared(girth + ", 'id | key', rowid", girth, "trees"),
                "the first has a key, the other not; give both the same key");
  ExpectRefused(Compared(girth + ", 'id | key', rowid", girth + ", 'id | key', rowid + 1", "trees"),
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

// The order of the rows gives two rankings the same range, quartiles, mean and sd.
TEST_F(ModelCompare, RankingsInOtherOrdersAreOtherValues) {
  db.Run(
      "CREATE TABLE ranked AS SELECT *, row_number() OVER (ORDER BY Girth) AS by_girth, "
      "row_number() OVER (ORDER BY Height) AS by_height, rowid AS id FROM trees");
  const std::string y = "'y', Volume, 'id | key', id, ", girth = y + "'rank', by_girth",
                    height = y + "'rank', by_height";
  // Nested by name; the larger one fits worse, or better than the smaller one could with it.
  for (const auto& [first, second] : {std::pair(girth, height),
                                      {height, girth},
                                      {girth, height + ", 'z', Height"},
                                      {height, girth + ", 'z', Height"},
                                      {height + ", 'z', Height", girth}}) {
    const json got = Compared(first, second, "ranked");
    for (const char* key : {"test", "statistic", "df1", "df2", "p_value"})
      EXPECT_TRUE(got[key].is_null()) << first << second << key;
    EXPECT_TRUE(got["aic_difference"].is_number());
    EXPECT_THAT(got["reading"],
                HasSubstr("Both were fitted to the same 31 rows. Columns of one name hold "
                          "different values in the two, so that no test of one against the other "
                          "applies. AIC "));
  }
  const json nested = Compared(girth, girth + ", 'z', Height", "ranked");
  EXPECT_EQ(nested["test"], "partial F");
  EXPECT_THAT(Compared(girth, girth, "ranked")["reading"], HasSubstr("one and the same fit"));
}

// Rounding is no other value: a mean far from 0, columns nearly repeated, another order, a flat
// response.
TEST_F(ModelCompare, HardFitsOfTheSameColumnsAreTheSame) {
  for (const std::string y : {"Volume", "1e9 + Volume", "1e12 + Volume", "7", "0.1", "3 * Girth"}) {
    const std::string x = "'x', 1e9 + Girth, 'z', 1e9 + Girth + Height * 1e-2, 'h', Height",
                      turned = "'h', Height, 'z', 1e9 + Girth + Height * 1e-2, 'x', 1e9 + Girth",
                      label = "'y', " + y + ", ";
    EXPECT_THAT(Compared(label + x, label + turned, "trees")["reading"],
                HasSubstr("one and the same fit"))
        << y;
    EXPECT_THAT(Compared(label + "'h', Height", label + turned, "trees")["reading"],
                HasSubstr("The second has all that the first has"))
        << y;
  }
}

// F has no unit: that of R for the volumes as they are (compare.json, case 1).
TEST_F(ModelCompare, HugeAndTinyResponsesKeepTheirDigits) {
  const json r = ReadJson("compare.json")["cases"][0];
  for (const std::string scale : {"1e160", "1e-160", "1e306", "1e-300"}) {
    const std::string first = "'y', Volume * " + scale + ", 'x', Girth";
    const json got = Compared(first, first + ", 'z', Height", "trees");
    EXPECT_TRUE(Agrees(r["statistic"], got["statistic"], 9.5)) << scale;
    EXPECT_TRUE(Agrees(r["p_value"], got["p_value"], 9.5)) << scale;
    const std::string reading = got["reading"];
    EXPECT_EQ(reading.find("nan"), std::string::npos) << reading;
    EXPECT_EQ(reading.find("inf"), std::string::npos) << reading;
  }
}

TEST_F(ModelCompare, ClustersAreNotIndependentRows) {
  const std::string x = "'y', interlocks, 'sector | cluster', sector, 'x', assets";
  EXPECT_THAT(Compared(x, x + ", 'z', assets * assets", "ornstein")["reading"],
              HasSubstr(" All of this takes rows as independent of each other, which rows of one "
                        "cluster may not be."));
}

TEST_F(ModelCompare, PercentsAreMissedByPercentagePoints) {
  EXPECT_THAT(
      Compared("'share (%)', Volume, 'x', Girth", "'share (%)', Volume, 'x', Height",
               "trees")["reading"],
      HasSubstr("lie within 3.24 percentage points of what the first says"));  // as above, by R
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
