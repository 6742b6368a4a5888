// Numbers as sentences have them. Locale-free; not for NaN or infinities.
#ifndef LADDERLINE_CORE_SUPPORT_PROSE_H_
#define LADDERLINE_CORE_SUPPORT_PROSE_H_

#include <cstddef>
#include <cstdint>
#include <limits>
#include <span>
#include <string>
#include <string_view>

namespace ladderline {

// The shortest decimal text that reads back as the same double, without an exponent from 1e-4 to
// 1e15: `0.0125`, `1200000`, `1e-09`.
std::string PlainNumber(double number);

// The same of the number rounded to so many significant digits: of 1234.5 to 3 it is `1230`.
std::string Rounded(double number, int significant_digits);

// A share of a whole in whole percent: `under 1%`, `37%`, `over 99%`; 0 and 1 are `0%` and `100%`.
std::string Percent(double share);

// `1 row`, `12 rows`; the plural is the word and an s.
std::string Counted(std::int64_t count, std::string_view word);

// `a`, `a and b`, `a, b and c`; beyond `most` parts the rest is counted: `a, b and 3 more`.
std::string Listed(std::span<const std::string> parts,
                   std::size_t most = std::numeric_limits<std::size_t>::max());

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SUPPORT_PROSE_H_
