#include "core/effects/wording.h"

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>

#include "core/support/prose.h"

namespace ladderline {
namespace {

bool EndsWith(std::string_view text, std::string_view end) { return text.ends_with(end); }

bool IsLowerWord(std::string_view word) {
  return word.size() > 3 &&
         std::all_of(word.begin(), word.end(), [](char c) { return 'a' <= c && c <= 'z'; });
}

std::string SingularWord(std::string_view word) {
  // Nouns whose singular is the same, or ends in s.
  static constexpr std::array<std::string_view, 6> kSame = {"series",  "species", "hertz",
                                                            "siemens", "means",   "lens"};
  if (word == "people") return "person";
  if (word == "feet") return "foot";
  if (!IsLowerWord(word) || std::find(kSame.begin(), kSame.end(), word) != kSame.end())
    return std::string(word);
  const auto without = [&](size_t n) { return std::string(word.substr(0, word.size() - n)); };
  if (EndsWith(word, "ies")) return without(3) + "y";
  for (const char* end : {"ches", "shes", "xes", "sses", "zzes"})
    if (EndsWith(word, end)) return without(2);
  const bool plural = EndsWith(word, "s") && !EndsWith(word, "ss") && !EndsWith(word, "us") &&
                      !EndsWith(word, "is");
  return plural ? without(1) : std::string(word);
}

}  // namespace

int RoundingPlace(double width, double size) {
  width = std::abs(width);
  size = std::abs(size);
  // Limits closer than a millionth of the figure are those of an exact fit.
  if (!(width > 1e-6 * size) || !std::isfinite(width))
    return size > 0 && std::isfinite(size) ? static_cast<int>(std::floor(std::log10(size))) - 2 : 0;
  return static_cast<int>(std::floor(std::log10(width))) - 1;
}

std::string RoundedTo(double number, int place) {
  constexpr int kLeastPlace = -9, kMostPlace = 12;
  if (number == 0) return "0";
  if (place < kLeastPlace || place > kMostPlace) {
    const int digits = static_cast<int>(std::floor(std::log10(std::abs(number)))) - place + 1;
    return digits < 1 ? "0" : Rounded(number, std::min(digits, 15));
  }
  char text[400];
  if (place > 0) {
    const double unit = std::pow(10, place);
    number = std::nearbyint(number / unit) * unit;
  }
  const auto end =
      std::to_chars(text, text + sizeof text, number, std::chars_format::fixed, std::max(0, -place))
          .ptr;
  std::string rounded(text, end);
  if (rounded.find_first_not_of("-0.") == std::string::npos) return "0";
  return rounded;
}

std::string Singular(std::string_view unit) {
  const size_t per = unit.find(" per ");
  const std::string_view head = unit.substr(0, per);
  const size_t blank = head.rfind(' ');
  const size_t last = blank == std::string_view::npos ? 0 : blank + 1;
  std::string singular = std::string(head.substr(0, last)) + SingularWord(head.substr(last));
  if (per != std::string_view::npos) singular += unit.substr(per);
  return singular;
}

bool IsPercent(std::string_view unit) { return unit == "%" || unit == "percent"; }

std::string Amount(const std::string& number, std::string_view unit) {
  if (unit.empty()) return number;
  if (IsPercent(unit)) return number + "%";
  return number + " " + (number == "1" ? Singular(unit) : std::string(unit));
}

std::string DifferenceAmount(const std::string& number, std::string_view unit) {
  return Amount(number, IsPercent(unit) ? "percentage points" : unit);
}

}  // namespace ladderline
