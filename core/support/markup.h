// Text in HTML and SVG.
#ifndef LADDERLINE_CORE_SUPPORT_MARKUP_H_
#define LADDERLINE_CORE_SUPPORT_MARKUP_H_

#include <string>
#include <string_view>

namespace ladderline {

// UTF-8 text as the content of an XML or HTML element or of an attribute in double quotes. What
// marks up is escaped; a line end or a tab is a blank; other control characters, also those that
// turn the direction of the text around them, what XML does not allow and malformed bytes show as
// U+FFFD.
std::string MarkupText(std::string_view text);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SUPPORT_MARKUP_H_
