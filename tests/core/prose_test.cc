#include "core/support/prose.h"

#include <gtest/gtest.h>

namespace ladderline {
namespace {

// Expected texts by hand.
TEST(Prose, PlainNumbersHaveNoExponentWhereThatStaysReadable) {
  EXPECT_EQ(PlainNumber(0), "0");
  EXPECT_EQ(PlainNumber(-0.0125), "-0.0125");
  EXPECT_EQ(PlainNumber(1200000), "1200000");
  EXPECT_EQ(PlainNumber(0.0001), "0.0001");
  EXPECT_EQ(PlainNumber(0.00001), "1e-05");
  EXPECT_EQ(PlainNumber(1e15), "1e+15");
}

TEST(Prose, RoundedKeepsSoManyDigits) {
  EXPECT_EQ(Rounded(1234.5, 3), "1230");
  EXPECT_EQ(Rounded(0.012345, 2), "0.012");
  EXPECT_EQ(Rounded(-9.996, 3), "-10");
  EXPECT_EQ(Rounded(0, 3), "0");
  EXPECT_EQ(Rounded(2.5e-7, 1), "2e-07");
}

TEST(Prose, PercentNeverRoundsToNoneOrAll) {
  EXPECT_EQ(Percent(0), "0%");
  EXPECT_EQ(Percent(0.0004), "under 1%");
  EXPECT_EQ(Percent(0.37), "37%");
  EXPECT_EQ(Percent(0.996), "over 99%");
  EXPECT_EQ(Percent(1), "100%");
}

TEST(Prose, CountedFollowsTheNumber) {
  EXPECT_EQ(Counted(0, "row"), "0 rows");
  EXPECT_EQ(Counted(1, "row"), "1 row");
  EXPECT_EQ(Counted(12, "row"), "12 rows");
}

}  // namespace
}  // namespace ladderline
