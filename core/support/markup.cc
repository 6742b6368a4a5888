#include "core/support/markup.h"

#include "core/support/text.h"

namespace ladderline {
namespace {

constexpr std::string_view kReplacement = "\xEF\xBF\xBD";  // U+FFFD

bool In(char32_t c, char32_t first, char32_t last) { return first <= c && c <= last; }

bool IsShownAsReplaced(char32_t c) {
  const bool turns_direction = In(c, 0x202A, 0x202E) || In(c, 0x2066, 0x2069);
  return c < 0x20 || In(c, 0x7F, 0x9F) || c == 0xFFFE || c == 0xFFFF || turns_direction;
}

}  // namespace

std::string MarkupText(std::string_view text) {
  std::string out;
  out.reserve(text.size());
  for (std::size_t at = 0; at < text.size();) {
    const std::size_t from = at;
    const char32_t c = NextCharacter(text, at);
    switch (c) {
      case '&':
        out += "&amp;";
        break;
      case '<':
        out += "&lt;";
        break;
      case '>':
        out += "&gt;";
        break;
      case '"':
        out += "&quot;";
        break;
      case '\'':
        out += "&#39;";
        break;
      case '\t':
      case '\n':
      case '\r':
        out += ' ';
        break;
      default:
        if (IsShownAsReplaced(c) || (c > 0x7F && at - from == 1)) {
          out += kReplacement;
        } else {
          out += text.substr(from, at - from);
        }
    }
  }
  return out;
}

}  // namespace ladderline
