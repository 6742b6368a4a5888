#include "core/chart/chart_text.h"

#include <array>
#include <cmath>

#include "core/support/prose.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

constexpr std::string_view kEllipsis = "\xE2\x80\xA6";  // U+2026

bool In(char32_t c, char32_t first, char32_t last) { return first <= c && c <= last; }

// Widths in hundredths of the font size, from blank to `~`: those of DejaVu Sans 2.37, rounded up.
constexpr std::array<unsigned char, 95> kAsciiWidths = {
    32, 41, 46, 84, 64, 96, 78, 28, 40,  40, 50, 84, 32, 37, 32, 34, 64, 64, 64, 64, 64, 64, 64, 64,
    64, 64, 34, 34, 84, 84, 84, 54, 100, 69, 69, 70, 78, 64, 58, 78, 76, 30, 30, 66, 56, 87, 75, 79,
    61, 79, 70, 64, 62, 74, 69, 99, 69,  62, 69, 40, 34, 40, 84, 50, 50, 62, 64, 55, 64, 62, 36, 64,
    64, 28, 28, 58, 28, 98, 64, 62, 64,  64, 42, 53, 40, 64, 60, 82, 60, 60, 53, 64, 34, 64, 84};

// In the same unit; of other scripts what most of their characters stay within.
int WidthOf(char32_t c) {
  if (In(c, 0x20, 0x7E)) return kAsciiWidths[c - 0x20];
  if (In(c, 0x300, 0x36F) || In(c, 0x200B, 0x200F) || In(c, 0xFE00, 0xFE0F)) return 0;
  if (In(c, 0xFDF0, 0xFDFF)) return 1200;  // whole phrases as one character
  if (In(c, 0x590, 0x6FF) || In(c, 0xFB1D, 0xFEFC)) return 75;
  if (c < 0x590 || In(c, 0x1E00, 0x206F)) return 90;
  if (In(c, 0x12000, 0x1254F)) return 400;  // cuneiform
  return 130;
}

double BoldFactor(Face face) { return face == Face::kBold ? 1.15 : 1; }

// The bytes of the longest start of the text that is no wider than `width`; one character or more.
std::size_t LengthWithin(std::string_view text, double width, double size, Face face) {
  const double per_hundredth = size / 100 * BoldFactor(face);
  double used = 0;
  std::size_t at = 0;
  while (at < text.size()) {
    std::size_t next = at;
    used += WidthOf(NextCharacter(text, next)) * per_hundredth;
    if (used > width && at > 0) break;
    at = next;
  }
  return at;
}

std::string_view WithoutBlanks(std::string_view text) {
  constexpr std::string_view kBlanks = " \t\r\n\v\f";
  const std::size_t first = text.find_first_not_of(kBlanks);
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(kBlanks) - first + 1);
}

}  // namespace

double TextWidth(std::string_view text, double size, Face face) {
  double width = 0;
  for (std::size_t at = 0; at < text.size();) width += WidthOf(NextCharacter(text, at));
  return width * size / 100 * BoldFactor(face);
}

std::vector<std::string> Wrapped(std::string_view text, double width, double size, std::size_t most,
                                 Face face) {
  std::vector<std::string> lines;
  text = WithoutBlanks(text);
  while (!text.empty()) {
    std::size_t length = LengthWithin(text, width, size, face);
    if (length < text.size() && lines.size() + 1 == most) {
      const double room = width - TextWidth(kEllipsis, size, face);
      length = LengthWithin(text, room, size, face);
      lines.push_back(std::string(WithoutBlanks(text.substr(0, length))) + std::string(kEllipsis));
      return lines;
    }
    if (length < text.size()) {
      // A blank right behind what fits ends the line too.
      const std::size_t blank = text.substr(0, length + 1).find_last_of(" \t\r\n");
      if (blank != std::string_view::npos && blank > 0) length = blank;
    }
    lines.emplace_back(WithoutBlanks(text.substr(0, length)));
    text = WithoutBlanks(text.substr(length));
  }
  return lines;
}

std::string ShownNumber(double number) {
  constexpr double kWhole = 100, kMost = 1e15;
  if (std::abs(number) >= kWhole && std::abs(number) < kMost)
    return PlainNumber(std::nearbyint(number));
  return Rounded(number, 3);
}

}  // namespace ladderline
