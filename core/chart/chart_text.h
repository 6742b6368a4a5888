// Text in a chart: measured, and broken into lines that fit.
#ifndef LADDERLINE_CORE_CHART_CHART_TEXT_H_
#define LADDERLINE_CORE_CHART_CHART_TEXT_H_

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

namespace ladderline {

enum class Face { kPlain, kBold };

// About how wide a line of text is at a font size, in the same unit: an upper guess for the usual
// sans-serif fonts. From the widths of DejaVu Sans, the widest of them.
double TextWidth(std::string_view text, double size, Face face = Face::kPlain);

// At most `most` (1 or more) lines that are no wider than `width` (some ten times the size or
// more), broken at blanks where there are some. What does not fit ends in `…`.
//   empty  no lines for empty or blank text
std::vector<std::string> Wrapped(std::string_view text, double width, double size, std::size_t most,
                                 Face face = Face::kPlain);

// A number as a chart shows it: three significant digits, or more where it takes them to show the
// whole part. Not for NaN or infinities.
std::string ShownNumber(double number);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHART_CHART_TEXT_H_
