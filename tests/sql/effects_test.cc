// model_effects against R 4.2 (effects.R: lm, vcov, sandwich's vcovHC and the delta method written
// out), and its sentences.
#include <gmock/gmock.h>

#include <cmath>

#include "tests/sql/claims.h"
#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using nlohmann::json;
using ::testing::HasSubstr;
using ::testing::StartsWith;

// jsonlite prints 15 digits; limits of small effects lose some to the difference of two numbers.
constexpr double kDigits = 10;

std::string Quoted(const std::string& text) {
  std::string out = "'";
  for (const char c : text) out += c == '\'' ? std::string("''") : std::string(1, c);
  return out + "'";
}

// The model of a case of effects.json, with the given errors option.
std::string ModelSql(const json& c, const std::string& errors) {
  std::string sql = "SELECT ols_model(";
  for (const json& label : c["labels"])
    sql += Quoted(label[0]) + ", " + label[1].get<std::string>() + ", ";
  return sql + "'errors | option', '" + errors + "') AS model FROM " + c["data"].get<std::string>();
}

bool SamePlace(const json& place, const std::string& got) {
  if (place.is_string()) return place.get<std::string>() == got;
  return DigitsAgreed(place.get<double>(), std::stod(got)) >= 13;
}

class ModelEffects : public ::testing::Test {
 protected:
  ModelEffects() {
    for (const std::string name : {"trees", "ornstein", "wool", "journals", "poisons"})
      db.LoadCsv(name, "boxcox/" + name + ".csv");
  }
  // Every figure of every case of a file, in order.
  void ExpectCases(const std::string& path, size_t count) {
    const json file = ReadJson(path);
    ASSERT_EQ(file["cases"].size(), count);
    for (const json& c : file["cases"]) {
      const std::string what = c["labels"].dump() + " " + c["errors"].get<std::string>();
      const auto rows = db.Rows(
          "SELECT column_name, kind, from_value, to_value, effect, low, high, errors, position "
          "FROM (" +
          ModelSql(c, c["errors"]) + "), model_effects(model, " + c["level"].dump() + ")");
      ASSERT_EQ(rows.size(), c["effects"].size()) << what;
      for (size_t i = 0; i < rows.size(); ++i) {
        const json& r = c["effects"][i];
        const std::string row = what + " row " + std::to_string(i);
        EXPECT_EQ(*rows[i][0], r["column"]) << row;
        EXPECT_EQ(*rows[i][1], r["kind"]) << row;
        EXPECT_TRUE(SamePlace(r["from"], *rows[i][2])) << row << " " << *rows[i][2];
        EXPECT_TRUE(SamePlace(r["to"], *rows[i][3])) << row << " " << *rows[i][3];
        const double width = r["high"].get<double>() - r["low"].get<double>();
        for (const auto& [k, name] :
             {std::pair(4, "effect"), std::pair(5, "low"), std::pair(6, "high")}) {
          const double truth = r[name].get<double>();
          const double got = std::stod(*rows[i][static_cast<size_t>(k)]);
          EXPECT_LE(std::abs(truth - got), std::pow(10, -kDigits) * (std::abs(truth) + width))
              << row << " " << name << " " << truth << " " << got;
        }
        EXPECT_EQ(*rows[i][7], c["errors"]) << row;
        EXPECT_EQ(*rows[i][8], std::to_string(i + 1)) << row;
      }
    }
  }
  // The sentences of `SELECT model …` joined by newlines.
  std::string Sentences(const std::string& model, const std::string& arguments = "") {
    std::string all;
    for (const auto& row :
         db.Rows("SELECT sentence FROM (" + model + "), model_effects(model" + arguments + ")"))
      all += row[0].value_or("NULL") + "\n";
    return all;
  }
  Database db;
};

TEST_F(ModelEffects, AgreeWithRForEveryPairOfReExpressions) { ExpectCases("effects.json", 13); }

// Polynomials and products, with contrasts of whole rows (effects_products.R).
TEST_F(ModelEffects, AgreeWithRForPolynomialsAndProducts) {
  ExpectCases("effects_products.json", 6);
}

// A model fitted with classical errors and asked for others: what rests on one coefficient is as R
// has it, what would need a covariance that the model does not keep says so.
TEST_F(ModelEffects, OtherErrorsGovernWhatOneCoefficientTells) {
  const json file = ReadJson("effects.json");
  for (const json& c : file["cases"]) {
    if (c["errors"] == "classical" || c["errors"] == "cluster") continue;
    const auto rows =
        db.Rows("SELECT low, high, sentence FROM (" + ModelSql(c, "classical") +
                "), model_effects(model, " + c["level"].dump() + ", " + Quoted(c["errors"]) + ")");
    ASSERT_EQ(rows.size(), c["effects"].size());
    for (size_t i = 0; i < rows.size(); ++i) {
      const json& r = c["effects"][i];
      if (!rows[i][0]) {
        EXPECT_THAT(*rows[i][2], HasSubstr("need a fit with that option"));
        EXPECT_FALSE(rows[i][1]);
        EXPECT_TRUE(r["kind"] == "quartiles" || r["kind"] == "level");
        continue;
      }
      const double width = r["high"].get<double>() - r["low"].get<double>();
      EXPECT_NEAR(std::stod(*rows[i][0]), r["low"].get<double>(), 1e-10 * width);
      EXPECT_NEAR(std::stod(*rows[i][1]), r["high"].get<double>(), 1e-10 * width);
    }
  }
}

TEST_F(ModelEffects, SentencesClaimNothing) {
  EXPECT_THAT(ClaimsIn("Age leads to more, significantly."),
              ::testing::ElementsAre("leads", "significantly"));
  const json file = ReadJson("effects.json");
  std::string all;
  for (const json& c : file["cases"]) {
    all += Sentences(ModelSql(c, c["errors"]));
    all += Sentences(ModelSql(c, "classical"), ", 0.5, 'hc3'");
  }
  EXPECT_GT(all.size(), 10000U);
  EXPECT_THAT(ClaimsIn(all), ::testing::IsEmpty());
}

TEST_F(ModelEffects, EverySentenceStatesRowsLimitsAndTheOtherColumns) {
  const json file = ReadJson("effects.json");
  for (const json& c : file["cases"]) {
    for (const auto& row :
         db.Rows("SELECT sentence FROM (" + ModelSql(c, "hc3") + "), model_effects(model, 0.9)")) {
      EXPECT_THAT(*row[0], HasSubstr(" goes with "));
      EXPECT_THAT(*row[0], HasSubstr(" (90% limits by hc3 errors "));
      EXPECT_THAT(*row[0], HasSubstr(", other columns held fixed"));
      EXPECT_THAT(*row[0], HasSubstr(" rows fitted"));
      EXPECT_EQ(row[0]->back(), '.');
    }
  }
}

// A date is moved by days, and is shown as a date; a date as a response is moved by days too.
TEST_F(ModelEffects, DatesAreDates) {
  db.Run(
      "CREATE TABLE visit(day TEXT, closed TEXT, n REAL);"
      "INSERT INTO visit VALUES ('2024-01-01', '2024-01-04', 1), ('2024-01-03', '2024-01-05', 3),"
      "('2024-01-05', '2024-01-10', 2), ('2024-01-07', '2024-01-09', 5),"
      "('2024-01-09', '2024-01-12', 4)");
  const std::string by_day = "SELECT ols_model('n', n, 'day | date_days', day) AS model FROM visit";
  EXPECT_EQ(db.Rows("SELECT from_value, to_value FROM (" + by_day + "), model_effects(model)"),
            (std::vector<Database::Row>{{"2024-01-03", "2024-01-07"}}));
  EXPECT_THAT(Sentences(by_day),
              StartsWith("2024-01-07 rather than 2024-01-03 in day (its upper and lower quartile) "
                         "goes with "));
  const std::string closed =
      "SELECT ols_model('closed | date_days', closed, 'n | log_offset', n) AS model FROM visit";
  EXPECT_EQ(db.Text("SELECT unit FROM (" + closed + "), model_effects(model)"), "days");
  EXPECT_THAT(Sentences(closed), HasSubstr(" days later in average closed ("));
}

TEST_F(ModelEffects, FewRowsAndNoRowsNeverFail) {
  const std::string effects = "SELECT count(effect), count(low), count(*) FROM (";
  // Saturated: figures without limits. A column that repeats another: neither.
  EXPECT_EQ(db.Rows(effects +
                    "SELECT ols_model('y', Volume, 'x', Girth) AS model FROM trees WHERE Girth < "
                    "8.7), model_effects(model)"),
            (std::vector<Database::Row>{{"1", "0", "1"}}));
  EXPECT_EQ(db.Rows(effects +
                    "SELECT ols_model('y', Volume, 'x', Girth, 'again', 2 * Girth) AS model FROM "
                    "trees), model_effects(model)"),
            (std::vector<Database::Row>{{"1", "1", "2"}}));
  // An exact fit; a refused model; no model.
  EXPECT_EQ(
      db.Rows(effects + "SELECT ols_model('y', 2 * Girth + 1, 'x', Girth) AS model FROM trees), "
                        "model_effects(model)"),
      (std::vector<Database::Row>{{"1", "1", "1"}}));
  EXPECT_EQ(
      db.Rows(effects + "SELECT ols_model('y', Volume, 'x', Girth) AS model FROM trees WHERE 0), "
                        "model_effects(model)"),
      (std::vector<Database::Row>{{"0", "0", "0"}}));
  EXPECT_EQ(db.Rows("SELECT * FROM model_effects(NULL)").size(), 0U);
}

// Near the largest double effects are those of the volumes as they are, times a power of 2.
TEST_F(ModelEffects, KeepTheirDigitsInHugeUnits) {
  const auto effects = [&](const std::string& volume) {
    return db.Rows("SELECT effect, low, high FROM (SELECT ols_model('y', " + volume +
                   ", 'x', Girth, 'late', Height > 80) AS model FROM trees), model_effects(model)");
  };
  const double scale = std::ldexp(1, 1000);
  const auto plain = effects("Volume"), huge = effects("Volume * 1.0715086071862673e301");
  ASSERT_EQ(plain.size(), 2U);
  ASSERT_EQ(huge.size(), 2U);
  for (size_t i = 0; i < 2; ++i) {
    for (size_t k = 0; k < 3; ++k) {
      ASSERT_TRUE(huge[i][k]) << i << k;
      EXPECT_TRUE(Agrees(std::stod(*plain[i][k]), std::stod(*huge[i][k]) / scale, 12));
    }
  }
}

// A column of 0 and 1 that is mostly 0: from 0 to 1 a straight response changes by the coefficient.
TEST_F(ModelEffects, OfZeroAndOneTheStepIsTheWholeOne) {
  db.Run(
      "CREATE TABLE tall AS SELECT ols_model('y', Volume, 'x', Girth, 'tall', Height > 82) AS "
      "model FROM trees");
  EXPECT_EQ(db.Rows("SELECT kind, from_value, to_value FROM tall, model_effects(model) WHERE "
                    "column_name = 'tall'"),
            (std::vector<Database::Row>{{"quartiles", "0", "1"}}));
  EXPECT_EQ(db.Rows("SELECT effect = coefficient FROM tall, model_effects(model) AS e, "
                    "model_terms(model) AS t WHERE e.column_name = 'tall' AND term = 'tall'"),
            (std::vector<Database::Row>{{"1"}}));
  EXPECT_THAT(db.Text("SELECT model_brief(model) FROM tall"),
              HasSubstr("\n- 1 rather than 0 in tall (its largest and least value) goes with "));
}

TEST_F(ModelEffects, ABadArgumentIsNamed) {
  db.Run("CREATE TABLE fit AS SELECT ols_model_plain(Volume, Girth) AS model FROM trees");
  EXPECT_EQ(db.ErrorOf("SELECT * FROM fit, model_effects(model, 1.5)"),
            "model_effects: level must lie between 0 and 1, got 1.5");
  EXPECT_EQ(db.ErrorOf("SELECT * FROM fit, model_effects(model, 0.9, 'robust')"),
            "model_effects: errors must be one of classical, hc0, hc1, hc2, hc3, got text "
            "'robust'");
  EXPECT_EQ(db.Rows("SELECT * FROM fit, model_effects(model, NULL, NULL)").size(), 1U);
}

}  // namespace
}  // namespace ladderline::testing
