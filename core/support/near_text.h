// What a text that is not known may have been meant for.
#ifndef LADDERLINE_CORE_SUPPORT_NEAR_TEXT_H_
#define LADDERLINE_CORE_SUPPORT_NEAR_TEXT_H_

#include <span>
#include <string_view>

namespace ladderline {

// Whether two texts are equal but for the case of their ASCII letters and for blanks: those at
// either end do not count, several in a row count as one.
bool EqualButForCase(std::string_view a, std::string_view b);

// The known word (in small letters) that a mistyped one most likely means, case aside: one that
// begins with it, else the one fewest edits away (one, from six letters on two), else the one with
// the most first letters in common (three at least); of equals the first. Empty where none is near,
// and for words of fewer than 3 or more than 40 bytes.
std::string_view NearestWord(std::string_view word, std::span<const std::string_view> known);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SUPPORT_NEAR_TEXT_H_
