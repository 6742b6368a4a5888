// The four tests of normality against R, SciPy, and their formulas at 60 digits.
#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <string>
#include <vector>

#include "core/normality/anderson_darling.h"
#include "core/normality/dagostino.h"
#include "core/normality/jarque_bera.h"
#include "core/normality/shapiro_wilk.h"
#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::Agrees;
using testing::ReadCsvColumn;
using testing::ReadJson;

// The column that a case of the reference files speaks of: its values, or a column of a file, of
// which the first rows or a power may be meant.
std::vector<double> ValuesOf(const nlohmann::json& c) {
  if (c.contains("values")) return c["values"];
  std::vector<double> x = ReadCsvColumn(c["file"], c["column"]);
  if (c.contains("first")) x.resize(c["first"]);
  for (double& value : x) {
    const double factor = value;
    for (int i = 1; i < c.value("power", 1); ++i) value *= factor;
  }
  return x;
}

CentralSums SumsOf(const std::vector<double>& x) {
  PowerSums<4> sums;
  for (const double value : x) sums.Add(value);
  return sums.Summarise();
}

NormalityTest Tested(const std::string& test, std::vector<double> x) {
  if (test == "jarque_bera") return JarqueBera(SumsOf(x));
  if (test == "dagostino_k2") return DagostinoK2(SumsOf(x));
  std::sort(x.begin(), x.end());
  return test == "shapiro_wilk" ? ShapiroWilk(x) : AndersonDarling(x);
}

// Figures are numbers, or text where a double cannot hold them; stod turns 1e-1119 into an error.
double Figure(const nlohmann::json& figure) {
  return figure.is_number() ? figure.get<double>()
                            : std::strtod(figure.get<std::string>().c_str(), nullptr);
}

std::string NameOf(const nlohmann::json& c, const std::string& test) {
  nlohmann::json name = c;
  name.erase("values");
  return test + " of " + name.dump();
}

const char* const kTests[] = {"jarque_bera", "shapiro_wilk", "anderson_darling", "dagostino_k2"};

void ExpectFigures(const nlohmann::json& c, const nlohmann::json& figures, double statistic_digits,
                   double p_digits) {
  for (const char* test : kTests) {
    if (!figures.contains(test)) continue;
    const NormalityTest result = Tested(test, ValuesOf(c));
    EXPECT_TRUE(Agrees(Figure(figures[test][0]), result.statistic, statistic_digits))
        << NameOf(c, test);
    EXPECT_TRUE(Agrees(Figure(figures[test][1]), result.p_value, p_digits)) << NameOf(c, test);
  }
}

// tests/reference/normality_r.json: R 4.2.2, shapiro.test and nortest 1.0.4 ad.test, on open data,
// on 3 to 13 rows, and on powers that put p-values down to 1e-77. R multiplies out (1 - r)(1 + r),
// which costs it digits of 1 - W that the 60-digit figures below have.
TEST(Normality, AgreesWithR) {
  const nlohmann::json reference = ReadJson("normality_r.json");
  for (const auto& c : reference["cases"]) ExpectFigures(c, c, 12, 9.5);
}

// normality_exact.json, under scipy: SciPy 1.10.1 jarque_bera and normaltest.
TEST(Normality, AgreesWithSciPy) {
  const nlohmann::json reference = ReadJson("normality_exact.json");
  for (const auto& c : reference["cases"])
    if (c.contains("scipy")) ExpectFigures(c, c["scipy"], 12, 9);
}

// normality_exact.json: mpmath 1.2.1 at 60 digits, on open data and on hard columns: W to 1e-10 and
// everything else to 1e-9 is wanted.
TEST(Normality, AgreesWithItsFormulasAt60Digits) {
  const nlohmann::json reference = ReadJson("normality_exact.json");
  for (const auto& c : reference["cases"]) ExpectFigures(c, c, 12, 9.5);
}

TEST(Normality, MomentTestsKeepTheirDigitsForABillionRows) {
  const nlohmann::json reference = ReadJson("normality_exact.json");
  for (const auto& c : reference["by_moments"]) {
    CentralSums sums;
    sums.n = c["n"];
    const double n = c["n"], g1 = c["g1"], g2 = c["g2"];
    sums.m2 = n;
    sums.m3 = g1 * n;
    sums.m4 = TwoProduct(g2 + 3, n);
    for (const char* test : {"jarque_bera", "dagostino_k2"}) {
      const NormalityTest result = test[0] == 'j' ? JarqueBera(sums) : DagostinoK2(sums);
      EXPECT_TRUE(Agrees(Figure(c[test][0]), result.statistic, 11)) << c;
      EXPECT_TRUE(Agrees(Figure(c[test][1]), result.p_value, 10)) << c;
    }
  }
}

TEST(Normality, EqualValuesGiveANoteAndNoFigures) {
  for (const char* test : kTests) {
    for (const double value : {0.0, 7.5, -1e300}) {
      const NormalityTest result = Tested(test, std::vector<double>(20, value));
      EXPECT_TRUE(std::isnan(result.statistic) && std::isnan(result.p_value)) << test;
      EXPECT_STREQ(result.note, "all values are equal") << test;
    }
  }
}

TEST(Normality, TooFewOrTooManyRowsGiveANoteAndNoFigures) {
  std::vector<double> x;
  const auto expect_none = [&](const char* test, const std::string& note) {
    const NormalityTest result = Tested(test, x);
    EXPECT_TRUE(std::isnan(result.statistic) && std::isnan(result.p_value)) << test;
    EXPECT_EQ(result.note, note) << test;
  };
  for (int n = 0; n < 8; ++n) {
    if (n < 3) expect_none("shapiro_wilk", "needs 3 rows");
    expect_none("anderson_darling", "needs 8 rows");
    if (n > 1) expect_none("dagostino_k2", "needs 8 rows");
    x.push_back(n * n);
  }
  while (x.size() <= kShapiroWilkMostRows) x.push_back(static_cast<double>(x.size() % 97));
  expect_none("shapiro_wilk", "takes up to 5000 rows; anderson_darling takes any number");
  x.pop_back();
  EXPECT_FALSE(std::isnan(Tested("shapiro_wilk", x).p_value));
}

// D'Agostino & Stephens (1986), table 4.9, ends there.
TEST(Normality, AndersonDarlingSaysWhereItsFormulaEnds) {
  const std::vector<double> price = ReadCsvColumn("boxcox/journals.csv", "price");
  EXPECT_EQ(Tested("anderson_darling", price).note, nullptr);  // adjusted A² 9.86
  const NormalityTest beyond =
      Tested("anderson_darling", ReadCsvColumn("boxcox/journals.csv", "citations"));
  EXPECT_EQ(beyond.p_value, 3.7e-24);
  EXPECT_STREQ(beyond.note, "p_value is at most this: the formula ends here");
}

TEST(Normality, FiguresDoNotDependOnShiftScaleOrSign) {
  const std::vector<double> x = ReadCsvColumn("boxcox/ornstein.csv", "interlocks");
  for (const char* test : kTests) {
    const NormalityTest plain = Tested(test, x);
    for (const double scale : {1024.0, -3.0, 1e-200}) {
      std::vector<double> moved = x;
      for (double& value : moved) value = (value + 1000) * scale;
      const NormalityTest result = Tested(test, moved);
      EXPECT_TRUE(Agrees(plain.statistic, result.statistic, 12)) << test << " " << scale;
      EXPECT_TRUE(Agrees(plain.p_value, result.p_value, 10)) << test << " " << scale;
    }
  }
}

}  // namespace
}  // namespace ladderline
