#include "core/effects/wording.h"

#include <gtest/gtest.h>

#include <cmath>

namespace ladderline::testing {
namespace {

TEST(Wording, FiguresKeepTwoDigitsOfTheWidthOfTheirLimits) {
  // Limits 0.551 to 0.673 are 0.122 apart: hundredths are its second digit.
  EXPECT_EQ(RoundingPlace(0.122, 0.612), -2);
  EXPECT_EQ(RoundedTo(0.612, -2), "0.61");
  EXPECT_EQ(RoundedTo(0.5996, -2), "0.60");
  EXPECT_EQ(RoundingPlace(660, 1234.5), 1);
  EXPECT_EQ(RoundedTo(1234.5, 1), "1230");
  EXPECT_EQ(RoundedTo(-1236, 1), "-1240");
  EXPECT_EQ(RoundedTo(0.004, -2), "0");
  EXPECT_EQ(RoundedTo(-0.004, -2), "0");
  EXPECT_EQ(RoundedTo(0, 3), "0");
}

TEST(Wording, WithoutAWidthThreeDigitsOfTheFigureItself) {
  EXPECT_EQ(RoundingPlace(std::nan(""), 0.01234), -4);
  EXPECT_EQ(RoundedTo(0.01234, -4), "0.0123");
  EXPECT_EQ(RoundingPlace(0, 45.678), -1);
  // An exact fit: limits that differ by rounding are not a width.
  EXPECT_EQ(RoundingPlace(1e-15, 2), -2);
  EXPECT_EQ(RoundingPlace(INFINITY, 2), -2);
  EXPECT_EQ(RoundingPlace(0, 0), 0);
}

TEST(Wording, NumbersFarFromOneHaveAnExponent) {
  EXPECT_EQ(RoundedTo(1.2345e-12, -14), "1.23e-12");
  EXPECT_EQ(RoundedTo(1.2345e-12, -11), "0");
  EXPECT_EQ(RoundedTo(1.2345e20, 18), "1.23e+20");
}

TEST(Wording, OneOfAUnitIsSingular) {
  for (const auto& [unit, one] : {std::pair("years", "year"),
                                  {"days per case", "day per case"},
                                  {"square metres", "square metre"},
                                  {"inches", "inch"},
                                  {"boxes", "box"},
                                  {"enquiries", "enquiry"},
                                  {"people", "person"},
                                  {"feet", "foot"},
                                  {"EUR", "EUR"},
                                  {"km", "km"},
                                  {"m²", "m²"},
                                  {"mass", "mass"},
                                  {"celsius", "celsius"},
                                  {"hertz", "hertz"},
                                  {"", ""}})
    EXPECT_EQ(Singular(unit), one);
  EXPECT_EQ(Amount("1", "years"), "1 year");
  EXPECT_EQ(Amount("1.0", "years"), "1.0 years");
  EXPECT_EQ(Amount("45", "EUR"), "45 EUR");
  EXPECT_EQ(Amount("12", "%"), "12%");
  EXPECT_EQ(DifferenceAmount("12", "%"), "12 percentage points");
  EXPECT_EQ(DifferenceAmount("1", "percent"), "1 percentage point");
  EXPECT_EQ(DifferenceAmount("12", "EUR"), "12 EUR");
  EXPECT_EQ(Amount("12", ""), "12");
}

}  // namespace
}  // namespace ladderline::testing
