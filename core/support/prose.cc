#include "core/support/prose.h"

#include <algorithm>
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

std::string Listed(std::span<const std::string> parts, std::size_t most) {
  std::string list;
  const std::size_t shown = std::min(parts.size(), most);
  for (std::size_t i = 0; i < shown; ++i)
    list += (i == 0 ? "" : i + 1 == parts.size() ? " and " : ", ") + parts[i];
  if (shown < parts.size()) list += " and " + std::to_string(parts.size() - shown) + " more";
  return list;
}

}  // namespace ladderline
