// model_difference: what is written in the old fit's terms against real refits in these terms, what
// counts as moved against the limits that the old fit states, and what is named instead.
#include <gmock/gmock.h>

#include <cmath>
#include <map>

#include "tests/sql/claims.h"
#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

using ::testing::ElementsAre;
using ::testing::HasSubstr;

// 248 firms; the last 200 stand for the rows of last month.
class ModelDifference : public ::testing::Test {
 protected:
  ModelDifference() {
    db.LoadCsv("firms", "boxcox/ornstein.csv");
    db.Run("CREATE TABLE earlier AS SELECT * FROM firms WHERE rowid > 48");
  }

  struct Row {
    double before, after, change;
    std::string status, sentence;
  };
  static std::string Fit(const std::string& labels, const std::string& rows) {
    return "(SELECT ols_model(" + labels + ") FROM " + rows + ")";
  }
  // By term; settings, which have no figures, under `term:setting`.
  std::map<std::string, Row> Between(const std::string& old, const std::string& fresh) const {
    std::map<std::string, Row> found;
    const auto number = [](const std::optional<std::string>& text) {
      return text ? std::stod(*text) : std::nan("");
    };
    for (const auto& row : db.Rows("SELECT * FROM model_difference(" + old + ", " + fresh + ")")) {
      Row read = {number(row[1]), number(row[2]), number(row[3]), *row[4], *row[5]};
      EXPECT_THAT(ClaimsIn(read.sentence), ::testing::IsEmpty());
      const bool setting =
          std::isnan(read.before) && std::isnan(read.after) && read.status == "changed";
      const std::string term = row[0].value_or("") + (setting ? ":setting" : "");
      EXPECT_TRUE(found.emplace(term, std::move(read)).second) << term;
    }
    return found;
  }
  std::map<std::string, Row> Refitted(const std::string& labels,
                                      const std::string& other_labels = "") const {
    return Between(Fit(labels, "earlier"),
                   Fit(other_labels.empty() ? labels : other_labels, "firms"));
  }
  // The terms of `found` are those of `same_terms` fitted to all rows.
  void ExpectTerms(const std::map<std::string, Row>& found, const std::string& same_terms) const {
    int terms = 0;
    for (const auto& row : db.Rows("SELECT term, coefficient, standard_error FROM model_terms(" +
                                   Fit(same_terms, "firms") + ")")) {
      ++terms;
      ASSERT_TRUE(found.contains(*row[0])) << *row[0];
      EXPECT_NEAR(found.at(*row[0]).after, std::stod(*row[1]), 1e-9 * std::stod(*row[2]))
          << *row[0];
    }
    EXPECT_GT(terms, 2);
  }

  Database db;
};

TEST_F(ModelDifference, AModelAgainstItselfIsTheSame) {
  const std::string labels =
      "'interlocks | log_offset 1', interlocks, 'assets | log_offset', "
      "assets, 'sector', sector, 'b | product assets sector', NULL";
  for (const auto& [term, row] : Between(Fit(labels, "firms"), Fit(labels, "firms"))) {
    EXPECT_EQ(row.status, "same") << term;
    EXPECT_EQ(row.change, 0) << term;
  }
}

TEST_F(ModelDifference, MovedIsWhatLeavesTheLimitsOfTheOldFit) {
  const std::string labels =
      "'interlocks', interlocks, 'assets | log_offset', assets, "
      "'nation | category CAN', nation, 'errors | option', 'hc3', "
      "'level | option', 0.5";
  const auto found = Refitted(labels);
  int moved = 0, steady = 0;
  for (const auto& row :
       db.Rows("SELECT o.term, o.coefficient, o.low, o.high, n.coefficient FROM model_terms(" +
               Fit(labels, "earlier") + ") AS o, model_terms(" + Fit(labels, "firms") +
               ") AS n USING (term)")) {
    const Row& told = found.at(*row[0]);
    const double old = std::stod(*row[1]), low = std::stod(*row[2]), high = std::stod(*row[3]),
                 fresh = std::stod(*row[4]);
    EXPECT_EQ(told.before, old);
    EXPECT_EQ(told.after, fresh);
    EXPECT_EQ(told.change, fresh - old);
    const bool inside = low <= fresh && fresh <= high;
    EXPECT_EQ(told.status, inside ? "steady" : "moved") << *row[0];
    ++(inside ? steady : moved);
    EXPECT_THAT(told.sentence, HasSubstr("50% limits of the old fit ("));
  }
  EXPECT_GT(moved, 0);
  EXPECT_GT(steady, 0);
  EXPECT_EQ(found.at("rows_fitted").before, 200);
  EXPECT_EQ(found.at("rows_fitted").after, 248);
  EXPECT_EQ(found.at("rows_fitted").status, "changed");
  EXPECT_EQ(found.at("rows_left_out").status, "same");
  EXPECT_EQ(found.at("residual_sd").after,
            db.Number("SELECT fact(" + Fit(labels, "firms") + ", 'residual_sd')"));
}

// ---- Written in the old fit's terms, exactly ----

TEST_F(ModelDifference, AnotherReferenceIsNamedAndTheRestCompared) {
  const std::string rest = ", 'assets | log_offset', assets, 'b | product sector assets', NULL";
  const std::string old = "'interlocks', interlocks, 'sector | category MAN', sector" + rest;
  const auto found =
      Refitted(old, "'interlocks', interlocks, 'sector | category WOD', sector" + rest);
  EXPECT_EQ(found.at("sector:setting").sentence,
            "sector is told against WOD now, against MAN before: the new coefficients are written "
            "against MAN.");
  ExpectTerms(found, old);
  const auto same = Between(Fit(old, "firms"), Fit("'interlocks', interlocks, 'sector | category "
                                                   "WOD', sector" +
                                                       rest,
                                                   "firms"));
  for (const auto& [term, row] : same)
    EXPECT_EQ(row.status, term == "sector:setting" ? "changed" : "same") << term;
}

// A constant that another reference brings belongs to all levels of the first category.
TEST_F(ModelDifference, WithoutAnInterceptAnotherReferenceIsWrittenToo) {
  for (const std::string product :
       {"", ", 'p | product nation sector', NULL", ", 'p | product sector assets', NULL"}) {
    SCOPED_TRACE(product);
    const auto labels = [&](const std::string& reference) {
      return "'interlocks', interlocks, 'nation', nation, 'assets | log_offset', assets, "
             "'sector | category " +
             reference + "', sector, 'intercept | option', 'none'" + product;
    };
    // Of rows in which every nation has every sector.
    const std::string rows =
        "(SELECT * FROM firms WHERE nation IN ('CAN', 'US') AND sector IN ('MAN', 'MIN', 'WOD'))";
    const auto same = Between(Fit(labels("MAN"), rows), Fit(labels("WOD"), rows));
    EXPECT_TRUE(same.contains("nation is CAN"));
    EXPECT_TRUE(same.contains("nation is US"));
    EXPECT_TRUE(same.contains("sector is WOD"));
    for (const auto& [term, row] : same) {
      EXPECT_FALSE(term.empty());
      EXPECT_EQ(row.status, term == "sector:setting" ? "changed" : "same") << term << row.sentence;
    }
    const auto found = Refitted(labels("MAN"), labels("WOD"));
    EXPECT_FALSE(found.contains(""));
    if (!product.starts_with(", 'p | product nation")) ExpectTerms(found, labels("MAN"));
  }
}

// Means, spreads and ranges that each month estimates anew leave slopes and contrasts comparable.
TEST_F(ModelDifference, NumbersEstimatedAnewAreUndoneWhereTheScaleIsStraight) {
  for (const std::string word : {"center", "z_score", "rescale"}) {
    SCOPED_TRACE(word);
    const auto labels = [](const std::string& response, const std::string& assets) {
      return "'interlocks | " + response + "', interlocks, 'assets | " + assets +
             "', assets, 'nation', nation, 'b | product assets nation', NULL";
    };
    const std::string estimated = labels(word, word);
    const auto spec = [&](const std::string& column) {
      return db.Text("SELECT transform FROM model_columns(" + Fit(estimated, "earlier") +
                     ") WHERE column_name = '" + column + "'");
    };
    const auto found = Refitted(estimated);
    ExpectTerms(found, labels(spec("interlocks"), spec("assets")));
    EXPECT_THAT(found.at("assets:setting").sentence, HasSubstr("assets enters by " + word));
    EXPECT_THAT(found.at("interlocks:setting").sentence, HasSubstr("written on the old scale"));
    EXPECT_NEAR(
        found.at("residual_sd").after,
        db.Number("SELECT fact(" + Fit(labels(spec("interlocks"), spec("assets")), "firms") +
                  ", 'residual_sd')"),
        1e-9);
  }
}

// ---- Named, where it is not exact ----

TEST_F(ModelDifference, AnEstimatedShapeIsNamedInOneSentence) {
  const auto found = Refitted("'assets | box_cox', assets, 'interlocks', interlocks");
  EXPECT_THAT(found.at("assets:setting").sentence,
              HasSubstr("on another scale and are not compared; to compare, write box_cox "));
  EXPECT_FALSE(found.contains("interlocks"));
  EXPECT_TRUE(found.contains("median_absolute_error"));
  EXPECT_FALSE(found.contains("residual_sd"));
  EXPECT_FALSE(found.contains("r_squared"));

  const auto predictor = Refitted(
      "'interlocks', interlocks, 'assets | log_offset auto', assets, "
      "'nation | category CAN', nation");
  EXPECT_THAT(predictor.at("assets:setting").sentence, HasSubstr("write log_offset "));
  EXPECT_FALSE(predictor.contains("assets"));
  EXPECT_EQ(predictor.at("intercept").status, "not comparable");
  EXPECT_TRUE(predictor.contains("nation is US"));
}

TEST_F(ModelDifference, OtherSettingsAreNamed) {
  const auto setting = [&](const std::string& old, const std::string& fresh,
                           const std::string& term) {
    const auto found = Between(Fit("'interlocks', interlocks" + old, "firms"),
                               Fit("'interlocks', interlocks" + fresh, "firms"));
    const auto row = found.find(term + ":setting");
    return row == found.end() ? "none" : row->second.sentence;
  };
  EXPECT_EQ(setting(", 'assets (EUR)', assets", ", 'assets (kEUR)', assets", "assets"),
            "assets is in kEUR now, in EUR before: its terms are not compared.");
  EXPECT_EQ(setting(", 'assets', assets", ", 'assets | category', assets > 1000", "assets"),
            "assets is a category now, a number before: its terms are not compared.");
  EXPECT_EQ(setting(", 'assets', assets", ", 'assets | log_offset', assets", "assets"),
            "assets enters by log_offset now, as it is before: its terms are not compared.");
  EXPECT_THAT(setting(", 'a | polynomial 2', assets", ", 'a | polynomial 3', assets", "a"),
              HasSubstr("powers up to 3 now, up to 2 before"));
  EXPECT_EQ(setting("", ", 'errors | option', 'hc3'", "errors"),
            "Limits are by hc3 errors now, by classical errors before; the coefficients do not "
            "depend on them.");
  EXPECT_EQ(setting("", ", 'level | option', 0.9", "level"),
            "Limits are at 90% now, at 95% before.");
  EXPECT_EQ(setting("", ", 'size | weight', assets", "weight"),
            "The columns for weight: size now, none before.");
  EXPECT_EQ(setting(", 'g | cluster', nation", "", "cluster"),
            "The columns for cluster: none now, g before.");
  EXPECT_EQ(setting(", 'assets', assets", ", 'assets', assets, 'intercept | option', 'none'",
                    "intercept"),
            "The new fit has no intercept: the coefficients are not compared.");
  const auto unit = Between(Fit("'interlocks (posts)', interlocks", "firms"),
                            Fit("'interlocks (seats)', interlocks", "firms"));
  EXPECT_EQ(unit.at("interlocks:setting").sentence,
            "interlocks is in seats now, in posts before: the coefficients are in another unit and "
            "are not compared.");
  EXPECT_FALSE(unit.contains("intercept"));
}

TEST_F(ModelDifference, PowersOfAPolynomialOfAnotherDegreeAreNotCompared) {
  const auto found = Between(Fit("'interlocks', interlocks, 'a | polynomial 2', assets", "firms"),
                             Fit("'interlocks', interlocks, 'a | polynomial 3', assets", "firms"));
  EXPECT_EQ(found.at("a power 1").status, "not comparable");
  EXPECT_EQ(found.at("a power 2").sentence,
            "Not compared, a power 2: it allows for other powers than it did.");
  EXPECT_EQ(found.at("a power 3").status, "new");
}

// With weights w the residual variance is Σ w e² / df: times 100 for 100 w.
TEST_F(ModelDifference, WeightsInOtherUnitsAreTheSame) {
  const auto weighted = [&](const std::string& weight) {
    return Fit("'interlocks', interlocks, 'nation', nation, 'w | weight', " + weight, "firms");
  };
  const auto found = Between(weighted("assets"), weighted("100 * assets"));
  EXPECT_EQ(found.at("residual_sd").status, "same");
  EXPECT_NEAR(found.at("residual_sd").after,
              db.Number("SELECT fact(" + weighted("assets") +
                        ", 'residual_sd') / sqrt(avg(assets)) FROM firms"),
              1e-9);
  EXPECT_THAT(found.at("residual_sd").sentence, HasSubstr(" of a case of average weight: "));
  for (const auto& [term, row] : found) EXPECT_EQ(row.status, "same") << term;

  const auto released = Between("model_for_release(" + weighted("assets") + ", 3)",
                                "model_for_release(" + weighted("100 * assets") + ", 3)");
  EXPECT_EQ(released.at("residual_sd").status, "not comparable");
  EXPECT_TRUE(std::isnan(released.at("residual_sd").before));
}

TEST_F(ModelDifference, FiguresThatChangedReadDifferent) {
  const std::string labels = "'interlocks', interlocks, 'assets | log_offset', assets";
  const auto found = Between(Fit(labels, "firms"), Fit(labels,
                                                       "(SELECT interlocks + (rowid = 9) * "
                                                       "1e-4 AS interlocks, assets FROM "
                                                       "firms)"));
  for (const std::string figure : {"residual_sd", "r_squared"}) {
    const Row& row = found.at(figure);
    EXPECT_EQ(row.status, "changed");
    // The words before ` before` and ` now`, or of a share up to ` of the`.
    const std::string& text = row.sentence;
    std::vector<std::string> numbers;
    for (std::size_t at = 0; (at = text.find_first_of("0123456789", at)) != std::string::npos;) {
      const std::size_t end = std::min(text.find_first_not_of("0123456789.", at), text.size());
      numbers.push_back(text.substr(at, end - at));
      at = end;
    }
    ASSERT_EQ(numbers.size(), 2u) << text;
    EXPECT_NE(numbers[0], numbers[1]) << text;
  }
}

TEST_F(ModelDifference, TermsComeAndGo) {
  const auto found =
      Between(Fit("'interlocks', interlocks, 'assets', assets, 'nation | category CAN', nation",
                  "(SELECT * FROM firms WHERE nation <> 'UK')"),
              Fit("'interlocks', interlocks, 'sector | category MAN', sector, 'nation | category "
                  "CAN', nation",
                  "(SELECT * FROM firms WHERE nation <> 'OTH')"));
  EXPECT_EQ(found.at("assets").status, "gone");
  EXPECT_EQ(found.at("nation is OTH").status, "gone");
  EXPECT_EQ(found.at("nation is UK").status, "new");
  EXPECT_EQ(found.at("sector is BNK").status, "new");
  EXPECT_THAT(found.at("sector is BNK").sentence,
              ::testing::StartsWith("New term, sector is BNK: "));
  EXPECT_THAT(found.at("sector is BNK").sentence, HasSubstr("95% limits "));
  EXPECT_TRUE(std::isnan(found.at("sector is BNK").before));
  EXPECT_TRUE(std::isnan(found.at("assets").after));

  // The level against which the others were told has left.
  const auto without = Between(Fit("'interlocks', interlocks, 'nation', nation", "firms"),
                               Fit("'interlocks', interlocks, 'nation', nation",
                                   "(SELECT * FROM firms WHERE nation <> 'CAN')"));
  EXPECT_EQ(without.at("nation:setting").sentence,
            "no row has CAN in nation any more, against which it was told before: its terms are "
            "not compared.");

  // The new commonest level is one that the old fit did not have.
  const auto unseen = Between(Fit("'interlocks', interlocks, 'nation', nation",
                                  "(SELECT * FROM firms WHERE nation IN ('US', 'OTH'))"),
                              Fit("'interlocks', interlocks, 'nation', nation", "firms"));
  EXPECT_EQ(unseen.at("nation is CAN").status, "new");
  EXPECT_NEAR(unseen.at("nation is CAN").after,
              db.Number("SELECT coefficient(" +
                        Fit("'interlocks', interlocks, 'nation | category US', nation", "firms") +
                        ", 'nation is CAN')"),
              1e-12);
}

TEST_F(ModelDifference, LevelsMergedForReleaseMayBeOthersEachTime) {
  const std::string labels = "'interlocks', interlocks, 'assets', assets, 'sector', sector";
  const auto found = Between("model_for_release(" + Fit(labels, "earlier") + ", 8)",
                             "model_for_release(" + Fit(labels, "firms") + ", 8)");
  EXPECT_EQ(
      found.at("sector is other levels").sentence,
      "Not compared, sector is other levels: it stands for levels of few rows, which may be others "
      "now.");
  EXPECT_NE(found.at("sector is MAN").status, "not comparable");
}

TEST_F(ModelDifference, CollinearTermsSaySo) {
  const std::string twice = "'interlocks', interlocks, 'assets', assets, 'again', 2 * assets";
  EXPECT_EQ(Refitted(twice).at("again").status, "same");
  EXPECT_EQ(Refitted("'interlocks', interlocks, 'assets', assets, 'again', assets * assets", twice)
                .at("again")
                .sentence,
            "No longer in the fit, again (left out: repeats assets): the other terms allow for it "
            "no more.");
}

TEST_F(ModelDifference, WhatCannotBeComparedIsOneRowInWords) {
  const auto only = [&](const std::string& old, const std::string& fresh) {
    return db.Rows("SELECT term, before, after, change, status, sentence FROM model_difference(" +
                   old + ", " + fresh + ")");
  };
  const std::string model = Fit("'assets', assets", "firms"),
                    refused = Fit("'assets', assets", "(SELECT * FROM firms WHERE false)");
  using Rows = std::vector<Database::Row>;
  const auto none = std::nullopt;
  EXPECT_EQ(only(model, refused), (Rows{{none, none, none, none, "refused",
                                         "Not compared: the new model was refused (no rows)."}}));
  EXPECT_EQ(only(refused, model), (Rows{{none, none, none, none, "refused",
                                         "Not compared: the old model was refused (no rows)."}}));
  EXPECT_EQ(only(model, Fit("'interlocks', interlocks", "firms")),
            (Rows{{none, none, none, none, "not comparable",
                   "Not compared: the old model speaks of assets, the new one of interlocks."}}));
  EXPECT_TRUE(only("NULL", model).empty());
  EXPECT_TRUE(only(model, "NULL").empty());
  EXPECT_THAT(db.ErrorOf("SELECT * FROM model_difference(" + model + ", 'x')"),
              ::testing::StartsWith("model_difference: new must be a model"));
}

TEST_F(ModelDifference, ASaturatedOldFitGivesNoYardstick) {
  const auto found =
      Between(Fit("'assets', assets, 'i', interlocks", "(SELECT * FROM firms LIMIT 2)"),
              Fit("'assets', assets, 'i', interlocks", "firms"));
  EXPECT_EQ(found.at("i").status, "not comparable");
  EXPECT_THAT(found.at("i").sentence, HasSubstr("the old fit gave it no limits"));
}

}  // namespace
}  // namespace ladderline::testing
