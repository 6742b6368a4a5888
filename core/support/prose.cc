#include "core/support/prose.h"

#include <charconv>
#include <cmath>

#include "core/support/text.h"

namespace ladderline {

std::string PlainNumber(double number) {
  if (number != 0 && !(1e-4 <= std::abs(number) && std::abs(number) < 1e15))
    return NumberText(number);
  char text[64];
  const auto end = std::to_chars(text, text + sizeof text, number, std::chars_format::fixed).ptr;
  return {text, end};
}

std::string Rounded(double number, int significant_digits) {
  char text[64];
  const auto end = std::to_chars(text, text + sizeof text, number, std::chars_format::general,
                                 significant_digits)
                       .ptr;
  return PlainNumber(ParseNumber(std::string_view(text, end)).value_or(number));
}

std::string Percent(double share) {
  const double percent = 100 * share;
  if (percent > 0 && percent < 1) return "under 1%";
  if (percent > 99 && percent < 100) return "over 99%";
  return std::to_string(std::lround(percent)) + "%";
}

std::string Counted(std::int64_t count, std::string_view word) {
  return std::to_string(count) + " " + std::string(word) + (count == 1 ? "" : "s");
}

}  // namespace ladderline
