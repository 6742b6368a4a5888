#include "core/support/near_text.h"

#include <gtest/gtest.h>

#include <array>
#include <string>

namespace ladderline {
namespace {

constexpr std::array<std::string_view, 7> kKnown = {
    "log_offset", "log_reflected", "sqrt_offset", "logit", "number", "category", "polynomial"};

TEST(NearText, CaseAndBlanksDoNotCount) {
  EXPECT_TRUE(EqualButForCase("Damp", "damp"));
  EXPECT_TRUE(EqualButForCase(" Saltspur  Isle\t", "saltspur isle"));
  EXPECT_TRUE(EqualButForCase("", " "));
  EXPECT_FALSE(EqualButForCase("Saltspur Isle", "Saltspurisle"));
  EXPECT_FALSE(EqualButForCase("Damp", "Damps"));
  // The case of other letters is not known here; their bytes stay as they are.
  EXPECT_TRUE(EqualButForCase("ÄRGER", "Ärger"));
  EXPECT_FALSE(EqualButForCase("Ärger", "ärger"));
}

TEST(NearText, ABeginningThenFewEditsThenFirstLetters) {
  EXPECT_EQ(NearestWord("log", kKnown), "log_offset");
  EXPECT_EQ(NearestWord("SQRT", kKnown), "sqrt_offset");
  EXPECT_EQ(NearestWord("logti", kKnown), "log_offset");  // two edits from logit: one is the most
  EXPECT_EQ(NearestWord("logits", kKnown), "logit");
  EXPECT_EQ(NearestWord("catgeory", kKnown), "category");
  EXPECT_EQ(NearestWord("log10", kKnown), "log_offset");
  EXPECT_EQ(NearestWord("numeric", kKnown), "number");
}

TEST(NearText, NothingNearIsEmpty) {
  for (const std::string& word :
       {std::string(), std::string("lo"), std::string("hedgehog"), std::string("\xff\xff\xff"),
        std::string("   "), std::string(41, 'l')})
    EXPECT_EQ(NearestWord(word, kKnown), "") << word;
  EXPECT_EQ(NearestWord("log", {}), "");
}

}  // namespace
}  // namespace ladderline
