#include "core/support/markup.h"

#include <gtest/gtest.h>

namespace ladderline {
namespace {

// Expected texts by hand.
TEST(Markup, WhatMarksUpIsEscaped) {
  EXPECT_EQ(MarkupText("<script>alert(\"1\" & '2')</script>"),
            "&lt;script&gt;alert(&quot;1&quot; &amp; &#39;2&#39;)&lt;/script&gt;");
  EXPECT_EQ(MarkupText("]]>"), "]]&gt;");
  EXPECT_EQ(MarkupText(""), "");
  EXPECT_EQ(MarkupText("𝄞 Größe 漢字 אב"), "𝄞 Größe 漢字 אב");
}

TEST(Markup, WhatXmlForbidsOrWhatTurnsTextAroundIsShownAsSuch) {
  EXPECT_EQ(MarkupText("a\tb\nc\rd"), "a b c d");
  const std::string nul("x\0y", 3);
  EXPECT_EQ(MarkupText(nul), "x\uFFFDy");
  EXPECT_EQ(MarkupText("\x01\x1F\x7F\u0085"), "\uFFFD\uFFFD\uFFFD\uFFFD");
  EXPECT_EQ(MarkupText("\xEF\xBF\xBE\xEF\xBF\xBF"), "\uFFFD\uFFFD");  // U+FFFE, U+FFFF
  EXPECT_EQ(MarkupText("\u202Eabc\u202C\u2067"), "\uFFFDabc\uFFFD\uFFFD");
  EXPECT_EQ(MarkupText("\u2028"), "\u2028");
  EXPECT_EQ(MarkupText("a\xFF\xC3"), "a\uFFFD\uFFFD");
}

}  // namespace
}  // namespace ladderline
