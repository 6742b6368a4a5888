// Small text matters that several rooms share: UTF-8, blanks, numbers as text.
#ifndef LADDERLINE_CORE_SUPPORT_TEXT_H_
#define LADDERLINE_CORE_SUPPORT_TEXT_H_

#include <optional>
#include <string>
#include <string_view>

namespace ladderline {

// Well-formed UTF-8: no overlong form, surrogate or cut sequence. Empty text is.
bool IsUtf8(std::string_view text);

// The character at byte `at`, which moves behind it. Of text that is UTF-8; a byte that begins no
// character stands for itself.
char32_t NextCharacter(std::string_view text, size_t& at);

// Empty, or only space, tab, newline, return, form feed, vertical tab.
bool IsBlank(std::string_view text);

// At most about `limit` bytes for a message, cut between characters; malformed bytes as `?`.
std::string Excerpt(std::string_view text, size_t limit);

// The shortest decimal text that reads back as the same double: `0.1`, `12`, `1e-300`.
// Locale-free. Not for NaN or infinities.
std::string NumberText(double number);

// A whole text as a finite decimal number (`12`, `-0.5`, `1e3`); nullopt for anything else,
// blanks around it included.
std::optional<double> ParseNumber(std::string_view text);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SUPPORT_TEXT_H_
