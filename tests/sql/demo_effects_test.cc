// Every sentence that model_effects gives on the demo, written anew from hand arithmetic: the
// coefficients and limits of model_terms (checked against R elsewhere) put through exponentials,
// with quartiles, medians, means and counts taken from the rows by SQLite itself.
#include <gmock/gmock.h>

#include <cmath>
#include <fstream>
#include <iterator>
#include <map>

#include "tests/sql/claims.h"
#include "tests/sql/database.h"

namespace ladderline::testing {
namespace {

std::string Statements(const std::string& path) {
  std::ifstream file(path);
  std::string sql;
  for (std::string line; std::getline(file, line);)
    if (line.empty() || line[0] != '.') sql += line + "\n";
  return sql;
}

// The decimal place of the second digit of a width; for 0 of the third of the size.
int Place(double width, double size) {
  return static_cast<int>(std::floor(std::log10(width > 0 ? width : std::abs(size)))) -
         (width > 0 ? 1 : 2);
}
std::string Shown(double number, int place) {
  char text[64];
  number = std::abs(number);
  if (place > 0) number = std::round(number / std::pow(10, place)) * std::pow(10, place);
  std::snprintf(text, sizeof text, "%.*f", std::max(0, -place), number);
  return std::stod(text) == 0 ? "0" : text;
}

struct Figures {
  double effect, low, high;
};

class DemoEffects : public ::testing::Test {
 protected:
  DemoEffects() {
    db.Run(Statements(SourceDirectory() + "examples/make_database.sql"));
    db.Run(Statements(SourceDirectory() + "examples/08_trust_and_tell.sql"));
    db.Run(
        "CREATE TABLE fitted AS SELECT * FROM repair WHERE cost IS NOT NULL AND building_age IS "
        "NOT "
        "NULL");
    rows = db.Text("SELECT count(*) FROM fitted");
    median_cost = db.Number("SELECT median(cost) FROM fitted");
  }

  Figures Term(const std::string& fit, const std::string& term) {
    const auto row = db.Rows(
                           "SELECT coefficient, low, high FROM cost_fit, model_terms(model) WHERE "
                           "name = '" +
                           fit + "' AND term = '" + term + "'")
                         .at(0);
    return {std::stod(*row[0]), std::stod(*row[1]), std::stod(*row[2])};
  }
  double Of(const std::string& figure) { return db.Number("SELECT " + figure + " FROM fitted"); }

  // ` (95% limits 1% to 2% more)`, ` (95% limits by hc3 errors 1 EUR less to 2 EUR more)`
  std::string Limits(const Figures& f, const std::string& errors, const std::string& unit) {
    const int place = Place(f.high - f.low, f.effect);
    const std::string by = errors == "classical" ? "" : "by " + errors + " errors ";
    const auto with = [&](double x) { return Shown(x, place) + unit; };
    const std::string sign = unit == "%" ? "%" : "";
    if (f.low < 0 && f.high > 0)
      return " (95% limits " + by + with(f.low) + " less to " + with(f.high) + " more)";
    if (f.effect < 0)
      return " (95% limits " + by + Shown(f.high, place) + sign + " to " + with(f.low) + " less)";
    return " (95% limits " + by + Shown(f.low, place) + sign + " to " + with(f.high) + " more)";
  }
  std::string Size(const Figures& f, const std::string& unit, const std::string& of) {
    const std::string size = Shown(f.effect, Place(f.high - f.low, f.effect));
    if (size == "0") return "much the same " + of;
    return size + unit + (f.effect < 0 ? " less in " : " more in ") + of;
  }
  static std::string Open(const Figures& f) {
    return f.low < 0 && f.high > 0 ? "; these rows do not settle in which direction" : "";
  }
  // `; at the median cost of 140.93 EUR that is 0.39 EUR more`
  std::string AtMedian(const Figures& percent) {
    char median[32];
    std::snprintf(median, sizeof median, "%.6g", median_cost);
    const double part = (median_cost + 20) / 100, amount = part * percent.effect;
    const std::string size = Shown(amount, Place(part * (percent.high - percent.low), amount));
    if (size == "0") return "";
    return std::string("; at the median cost of ") + median + " EUR that is " + size +
           (amount < 0 ? " EUR less" : " EUR more");
  }
  static Figures Percent(const Figures& b, double step) {
    const auto percent = [&](double x) { return 100 * (std::exp(step * x) - 1); };
    return {percent(b.effect), percent(b.low), percent(b.high)};
  }

  Database db;
  std::string rows;
  double median_cost = 0;
};

TEST_F(DemoEffects, EverySentenceIsHandArithmetic) {
  struct Fit {
    std::string name, errors;
    bool log, districts;
  };
  const Fit fits[] = {{"as it is", "classical", false, false},
                      {"logarithms", "hc3", true, false},
                      {"by week", "cluster", true, false},
                      {"with districts", "cluster", true, true}};
  size_t checked = 0;
  std::string all;
  for (const Fit& fit : fits) {
    const std::string held = ", other columns held fixed", in = ", in the " + rows + " rows fitted";
    const std::string means = " at their means and reference levels";
    // The typical cost of a case of so many dwellings and years, at the reference of all levels.
    const auto typical = [&](double dwellings, double age) {
      return std::exp(Term(fit.name, "intercept").effect +
                      Term(fit.name, "dwellings").effect * std::log(dwellings) +
                      Term(fit.name, "building age").effect * age) -
             20;
    };
    for (const auto& row :
         db.Rows("SELECT e.column_name, e.kind, e.to_value, e.effect, e.low, e.high, e.sentence, "
                 "e.unit, e.errors FROM cost_fit, model_effects(model) AS e WHERE name = '" +
                 fit.name + "'")) {
      const std::string column = *row[0], kind = *row[1], to = *row[2];
      Figures f = {std::stod(*row[3]), std::stod(*row[4]), std::stod(*row[5])};
      std::string expected;
      EXPECT_EQ(*row[8], fit.errors);
      const bool dwellings = column == "dwellings";
      if (kind == "quartiles") {
        const std::string value = dwellings ? "dwellings" : "building_age";
        const double low = Of("percentile_cont(" + value + ", 0.25)"),
                     high = Of("percentile_cont(" + value + ", 0.75)");
        const double other = Of(dwellings ? "avg(building_age)" : "avg(dwellings)");
        // The table's limits are those of a curve (the delta method, against R elsewhere); of a
        // straight fit they follow from the term.
        const double truth = !fit.log    ? (high - low) * Term(fit.name, column).effect
                             : dwellings ? typical(high, other) - typical(low, other)
                                         : typical(other, high) - typical(other, low);
        EXPECT_TRUE(Agrees(truth, f.effect, 9));
        if (!fit.log) {
          EXPECT_TRUE(Agrees((high - low) * Term(fit.name, column).low, f.low, 9));
          EXPECT_TRUE(Agrees((high - low) * Term(fit.name, column).high, f.high, 9));
        }
        expected = Shown(high, 0) + " rather than " + Shown(low, 0) +
                   (dwellings ? " in dwellings" : " years of building age") +
                   " (its upper and lower quartile) goes with " +
                   Size(f, " EUR", fit.log ? "typical cost" : "average cost") +
                   Limits(f, fit.errors, " EUR") + held + (fit.log ? means : "") + in + Open(f) +
                   ".";
      } else if (kind == "level") {
        const std::string reference = column == "trade" ? "Plumbing" : "Ashquill";
        const auto count = [&](const std::string& level) {
          return db.Text("SELECT count(*) FROM fitted WHERE " + column + " = '" + level + "'");
        };
        const Figures b = Term(fit.name, column + " is " + to);
        const Figures truth = fit.log ? Percent(b, 1) : b;
        EXPECT_TRUE(Agrees(truth.effect, f.effect, 9)) << to;
        EXPECT_TRUE(Agrees(truth.low, f.low, 9)) << to;
        EXPECT_TRUE(Agrees(truth.high, f.high, 9)) << to;
        const std::string unit = fit.log ? "%" : " EUR";
        expected = to + " rather than " + reference + " in " + column + " goes with " +
                   Size(truth, unit, fit.log ? "cost + 20 EUR" : "average cost") +
                   Limits(truth, fit.errors, unit) + held + ", in " + count(to) + " and " +
                   count(reference) + " of the " + rows + " rows fitted" +
                   (fit.log ? AtMedian(truth) : "") + Open(truth) + ".";
        if (std::stoi(count(to)) < 5) {
          expected = "Only " + count(to) + " rows of the " + rows + " fitted have " + to + " in " +
                     column + ": too few for a figure that could be quoted.";
        }
      } else {
        ASSERT_TRUE(fit.log);
        const Figures b = Term(fit.name, column);
        const Figures exact = Percent(b, dwellings ? std::log(1.01) : 1);
        const double rough = dwellings ? 1 : 100;
        const Figures rule = {rough * b.effect, rough * b.low, rough * b.high};
        const Figures& truth = kind == "percent" ? exact : rule;
        EXPECT_TRUE(Agrees(truth.effect, f.effect, 9));
        EXPECT_TRUE(Agrees(truth.low, f.low, 9));
        EXPECT_TRUE(Agrees(truth.high, f.high, 9));
        const std::string step = dwellings ? "1% more in dwellings" : "1 more year of building age";
        expected = (kind == "percent" ? "" : "As a rule of thumb, ") + step + " goes with " +
                   (kind == "percent" ? "" : "about ") + Size(truth, "%", "cost + 20 EUR") +
                   Limits(truth, fit.errors, "%") + held + in;
        expected += kind == "percent" ? AtMedian(exact)
                                      : "; the exact figure is " +
                                            Shown(exact.effect, Place(0, exact.effect)) + "% more";
        expected += ".";
      }
      EXPECT_EQ(*row[6], expected);
      EXPECT_EQ(*row[7], kind != "quartiles" && fit.log ? "percent" : "EUR");
      all += *row[6] + "\n";
      ++checked;
    }
  }
  // 2 numbers and 7 trades as they are; with logarithms 3 for each number; 7 other districts.
  EXPECT_EQ(checked, 9u + 13u + 13u + 20u);
  EXPECT_THAT(ClaimsIn(all), ::testing::IsEmpty());
  std::printf("%zu sentences of the demo written anew\n", checked);
}

// What the demo's page tells, cautions apart, claims nothing, nor do its comparisons and checks.
TEST_F(DemoEffects, NothingTheDemoTellsIsAClaim) {
  const std::string page =
      db.Text("SELECT model_brief(model) FROM cost_fit WHERE name = 'with districts'");
  EXPECT_THAT(ClaimsIn(page.substr(0, page.find("## To be shown with it"))), ::testing::IsEmpty());
  EXPECT_LT(page.size(), 9000u);  // a page
  for (const auto& row : db.Rows("SELECT fact(model_compare(a.model, b.model), 'reading') FROM "
                                 "cost_fit AS a, cost_fit AS b"))
    EXPECT_THAT(ClaimsIn(*row[0]), ::testing::IsEmpty()) << *row[0];
  for (const auto& row :
       db.Rows("SELECT finding || ' ' || coalesce(remedy, '') FROM cost_fit, model_checks(model)"))
    EXPECT_THAT(ClaimsIn(*row[0]), ::testing::IsEmpty()) << *row[0];
}

}  // namespace
}  // namespace ladderline::testing
