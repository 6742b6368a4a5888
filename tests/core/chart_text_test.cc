#include "core/chart/chart_text.h"

#include <gtest/gtest.h>

#include "core/support/text.h"

namespace ladderline {
namespace {

// Expected texts by hand.
TEST(ChartText, WidthsGrowWithTextAndSize) {
  EXPECT_EQ(TextWidth("", 12), 0);
  EXPECT_DOUBLE_EQ(TextWidth("m", 10), 9.8);  // 1,995 of 2,048 units in DejaVu Sans
  EXPECT_DOUBLE_EQ(TextWidth("12.5", 12), 12 * (3 * 0.64 + 0.32));
  EXPECT_GT(TextWidth("漢字", 12), TextWidth("il", 12));
  EXPECT_GT(TextWidth("a", 12, Face::kBold), TextWidth("a", 12));
}

TEST(ChartText, LinesFitAndHoldTheWholeTextWhereTheyCan) {
  const std::vector<std::string> lines = Wrapped("  roofs and damp walls  ", 80, 12, 3);
  EXPECT_EQ(lines, (std::vector<std::string>{"roofs and", "damp walls"}));
  EXPECT_TRUE(Wrapped("", 80, 12, 2).empty());
  EXPECT_TRUE(Wrapped(" \n\t", 80, 12, 2).empty());
}

TEST(ChartText, LongTextIsCutBetweenCharacters) {
  std::string emoji, words;
  for (int i = 0; i < 500; ++i) emoji += "🏚️";
  for (int i = 0; i < 400; ++i) words += "repair ";
  for (const std::string& text :
       {std::string(2000, 'W'), std::string(2000, 'i'), emoji, words, std::string("\u0301")}) {
    for (const std::size_t most : {1u, 2u, 3u}) {
      const std::vector<std::string> lines = Wrapped(text, 120, 12, most);
      EXPECT_LE(lines.size(), most);
      EXPECT_GE(lines.size(), 1u);
      for (const std::string& line : lines) {
        EXPECT_TRUE(IsUtf8(line));
        EXPECT_LE(TextWidth(line, 12), 120);
      }
      EXPECT_EQ(lines.back().ends_with("…"), text.size() > 100);
    }
  }
}

TEST(ChartText, NumbersAreShownWithThreeDigitsOrWhole) {
  EXPECT_EQ(ShownNumber(0), "0");
  EXPECT_EQ(ShownNumber(12.345), "12.3");
  EXPECT_EQ(ShownNumber(-0.00123456), "-0.00123");
  EXPECT_EQ(ShownNumber(1234567.8), "1234568");
  EXPECT_EQ(ShownNumber(99.96), "100");
  EXPECT_EQ(ShownNumber(1.5e300), "1.5e+300");
}

}  // namespace
}  // namespace ladderline
