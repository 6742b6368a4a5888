#include "core/model/label.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

namespace ladderline {
namespace {

using ::testing::HasSubstr;
using ::testing::StartsWith;
using Word = Label::Word;

Label Read(std::string_view text) {
  Result<Label> label = ReadLabel(text);
  if (!label.ok()) {
    ADD_FAILURE() << label.error();
    return {};
  }
  return std::move(label).value();
}

std::string ErrorOf(std::string_view text) {
  const Result<Label> label = ReadLabel(text);
  return label.ok() ? "(no error)" : label.error();
}

TEST(Label, NameMayHoldBlanksAndStandAlone) {
  const Label label = Read("  days open ");
  EXPECT_EQ(label.name, "days open");
  EXPECT_EQ(label.unit, "");
  EXPECT_EQ(label.word, Word::kNone);
}

TEST(Label, UnitStandsInParentheses) {
  const Label label = Read("cost (EUR per dwelling) | log_offset 1");
  EXPECT_EQ(label.name, "cost");
  EXPECT_EQ(label.unit, "EUR per dwelling");
  EXPECT_EQ(label.word, Word::kTransform);
  EXPECT_EQ(label.transform.spec(), "log_offset 1");
}

TEST(Label, QuotedTextMayHoldAnyCharacter) {
  const Label label = Read(R"x("roof | ""flat"" (old)" | category "Roof (flat)")x");
  EXPECT_EQ(label.name, "roof | \"flat\" (old)");
  EXPECT_EQ(label.word, Word::kCategory);
  EXPECT_TRUE(label.has_reference);
  EXPECT_EQ(label.reference, "Roof (flat)");
}

TEST(Label, QuotedNameReadsBack) {
  for (const std::string name : {"age", "days open", "a|b", "a \"b\"", "(x)", "ſtraße 🏠"}) {
    EXPECT_EQ(Read(QuotedName(name)).name, name);
    EXPECT_EQ(Read(QuotedName(name) + " | number").name, name);
  }
}

TEST(Label, RolesAreRead) {
  EXPECT_EQ(Read("w | weight").word, Word::kWeight);
  EXPECT_EQ(Read("case | key").word, Word::kKey);
  EXPECT_EQ(Read("x | present").word, Word::kPresent);
  EXPECT_EQ(Read("x | number").word, Word::kNumber);
  EXPECT_EQ(Read("intercept | option").word, Word::kOption);
  EXPECT_EQ(Read("x | polynomial 3").degree, 3);
  const Label product = Read("p | product age \"days open\"");
  EXPECT_EQ(product.part_a, "age");
  EXPECT_EQ(product.part_b, "days open");
  EXPECT_FALSE(Read("trade | category").has_reference);
}

TEST(Label, MistakesAreNamed) {
  EXPECT_EQ(ErrorOf(""), "label is empty");
  EXPECT_EQ(ErrorOf("   "), "label is empty");
  EXPECT_THAT(ErrorOf("| weight"), HasSubstr("has no name"));
  EXPECT_THAT(ErrorOf("age |"), HasSubstr("nothing after the bar"));
  EXPECT_THAT(ErrorOf("age (years"), HasSubstr("closing parenthesis"));
  EXPECT_THAT(ErrorOf("age (years) old"), HasSubstr("goes on after its name"));
  EXPECT_THAT(ErrorOf("\"age"), HasSubstr("never closed"));
  EXPECT_THAT(ErrorOf("age | weight 3"), HasSubstr("1 argument to weight, which takes none"));
  EXPECT_THAT(ErrorOf("t | category Old Town"), HasSubstr("double quotes if it holds blanks"));
  EXPECT_THAT(ErrorOf("x | polynomial 0"), HasSubstr("whole number from 1 to 20: 0"));
  EXPECT_THAT(ErrorOf("x | polynomial 21"), HasSubstr("whole number from 1 to 20: 21"));
  EXPECT_THAT(ErrorOf("x | polynomial 2.5"), HasSubstr("2.5"));
  EXPECT_THAT(ErrorOf("x | product a"), HasSubstr("names of two other labels"));
  EXPECT_THAT(ErrorOf("x | log_offset one"), HasSubstr("one"));
  EXPECT_THAT(ErrorOf("x | | y"), HasSubstr("double quotes after the bar"));
  EXPECT_THAT(ErrorOf("age\xff"), HasSubstr("not UTF-8"));
}

TEST(Label, ArgumentsMayBeLeftToBeEstimated) {
  for (const auto& [word, kind] : {std::pair{"z_score", TransformKind::kZScore},
                                   {"rescale", TransformKind::kRescale},
                                   {"center", TransformKind::kCenter},
                                   {"box_cox", TransformKind::kBoxCox},
                                   {"yeo_johnson", TransformKind::kYeoJohnson},
                                   {"log_offset auto", TransformKind::kLogOffset}}) {
    const Label label = Read(std::string("x | ") + word);
    EXPECT_EQ(label.word, Word::kTransform);
    EXPECT_EQ(label.estimated, kind) << word;
    EXPECT_EQ(label.transform, Transform());
  }
  // All or none: a part of the arguments is no estimate.
  EXPECT_THAT(ErrorOf("x | z_score 100"), HasSubstr("z_score takes mean sd, got 1 argument"));
  EXPECT_THAT(ErrorOf("x | rescale auto"), HasSubstr("takes old_low old_high"));
  EXPECT_THAT(ErrorOf("x | sqrt_offset auto"), HasSubstr("offset must be a number, got 'auto'"));
  EXPECT_FALSE(Read("x | log_offset").estimated);
  EXPECT_EQ(Read("x | z_score 100 15").transform.spec(), "z_score 100 15");
  EXPECT_FALSE(Read("x | z_score 100 15").estimated);
}

TEST(Label, UnknownWordListsTheKnownOnes) {
  const std::string error = ErrorOf("age | lg 1");
  EXPECT_THAT(error, HasSubstr("'age | lg 1'"));
  for (const char* word : {"log_offset", "sqrt_offset", "category", "weight", "key", "option"})
    EXPECT_THAT(error, HasSubstr(word));
}

TEST(Label, UnknownWordIsToldTheNearest) {
  EXPECT_THAT(ErrorOf("age | log"),
              StartsWith("label 'age | log' has an unknown word 'log' (did you mean log_offset?); "
                         "known are identity, log_offset, "));
  EXPECT_THAT(ErrorOf("age | log"), HasSubstr("date_days; roles are number, category, weight"));
  EXPECT_THAT(ErrorOf("age | wieght"), HasSubstr("'wieght' (did you mean weight?)"));
  EXPECT_THAT(ErrorOf("age | Category Damp"), HasSubstr("(did you mean category?)"));
  EXPECT_THAT(ErrorOf("age | hedgehog"), HasSubstr("has an unknown word 'hedgehog'; known are"));
}

}  // namespace
}  // namespace ladderline
