#include "core/support/text.h"

#include <algorithm>
#include <charconv>
#include <cmath>

namespace ladderline {
namespace {

// Length of the UTF-8 sequence at text[i], or 0 where it is malformed (overlong, surrogate, cut).
size_t SequenceLength(std::string_view text, size_t i) {
  const auto byte = [&](size_t k) {
    return k < text.size() ? static_cast<unsigned char>(text[k]) : 0U;
  };
  const auto tail = [&](size_t k) { return (byte(k) & 0xC0U) == 0x80U; };
  const unsigned lead = byte(i), second = byte(i + 1);
  if (lead < 0x80) return 1;
  if (lead >= 0xC2 && lead <= 0xDF) return tail(i + 1) ? 2 : 0;
  if (lead >= 0xE0 && lead <= 0xEF) {
    if (!tail(i + 1) || !tail(i + 2)) return 0;
    if ((lead == 0xE0 && second < 0xA0) || (lead == 0xED && second > 0x9F)) return 0;
    return 3;
  }
  if (lead >= 0xF0 && lead <= 0xF4) {
    if (!tail(i + 1) || !tail(i + 2) || !tail(i + 3)) return 0;
    if ((lead == 0xF0 && second < 0x90) || (lead == 0xF4 && second > 0x8F)) return 0;
    return 4;
  }
  return 0;
}

}  // namespace

char32_t NextCharacter(std::string_view text, size_t& at) {
  const auto byte = [&](size_t i) { return static_cast<unsigned char>(text[i]); };
  const size_t length = std::max<size_t>(SequenceLength(text, at), 1);
  char32_t c = length == 1 ? byte(at) : byte(at) & (0x7FU >> length);
  for (size_t i = 1; i < length; ++i) c = c << 6 | (byte(at + i) & 0x3FU);
  at += length;
  return c;
}

bool IsBlank(std::string_view text) {
  return text.find_first_not_of(" \t\n\r\f\v") == std::string_view::npos;
}

bool IsUtf8(std::string_view text) {
  for (size_t i = 0; i < text.size();) {
    const size_t length = SequenceLength(text, i);
    if (length == 0) return false;
    i += length;
  }
  return true;
}

std::string Excerpt(std::string_view text, size_t limit) {
  std::string out;
  for (size_t i = 0; i < text.size();) {
    if (out.size() >= limit) return out + "…";
    const size_t length = SequenceLength(text, i);
    if (length == 0) {
      out += '?';
      ++i;
    } else {
      out.append(text.substr(i, length));
      i += length;
    }
  }
  return out;
}

std::string NumberText(double number) {
  char text[32];
  const auto end = std::to_chars(text, text + sizeof text, number).ptr;
  return {text, end};
}

std::optional<double> ParseNumber(std::string_view text) {
  double number = 0;
  const char* end = text.data() + text.size();
  const auto [stop, code] = std::from_chars(text.data(), end, number);
  if (code != std::errc() || stop != end || !std::isfinite(number)) return std::nullopt;
  return number;
}

}  // namespace ladderline
