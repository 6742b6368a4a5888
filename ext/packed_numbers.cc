#include "ext/packed_numbers.h"

#include <array>
#include <bit>
#include <cstdint>

namespace ladderline {
namespace {

constexpr std::string_view kDigits =
    "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";

constexpr std::array<signed char, 256> kValues = [] {
  std::array<signed char, 256> values{};
  values.fill(-1);
  for (size_t i = 0; i < kDigits.size(); ++i)
    values[static_cast<unsigned char>(kDigits[i])] = static_cast<signed char>(i);
  return values;
}();

}  // namespace

std::string PackNumbers(std::span<const double> numbers) {
  std::string text;
  text.reserve((numbers.size() * 8 + 2) / 3 * 4);
  unsigned pending = 0;  // bits not written yet, at most 4 of the last byte
  int bits = 0;
  for (const double number : numbers) {
    auto bytes = std::bit_cast<std::uint64_t>(number);
    for (int i = 0; i < 8; ++i, bytes >>= 8) {
      pending = (pending & 0xFU) << 8 | static_cast<unsigned>(bytes & 0xFFU);
      for (bits += 8; bits >= 6; bits -= 6) text += kDigits[pending >> (bits - 6) & 0x3FU];
    }
  }
  if (bits > 0) text += kDigits[pending << (6 - bits) & 0x3FU];
  while (text.size() % 4 != 0) text += '=';
  return text;
}

std::optional<std::vector<double>> UnpackNumbers(std::string_view text) {
  std::vector<double> numbers;
  numbers.reserve(text.size() / 4 * 3 / 8);
  std::uint64_t bytes = 0;
  int count = 0;  // bytes of the number being read
  unsigned pending = 0;
  int bits = 0;
  for (const char c : text.substr(0, text.find('='))) {
    const int value = kValues[static_cast<unsigned char>(c)];
    if (value < 0) return std::nullopt;
    pending = (pending & 0xFFU) << 6 | static_cast<unsigned>(value);
    bits += 6;
    if (bits < 8) continue;
    bits -= 8;
    bytes |= static_cast<std::uint64_t>(pending >> bits & 0xFFU) << (8 * count);
    if (++count == 8) {
      numbers.push_back(std::bit_cast<double>(bytes));
      bytes = 0;
      count = 0;
    }
  }
  // Padding, cut numbers and stray bits show in what these numbers would be written as.
  if (PackNumbers(numbers) != text) return std::nullopt;
  return numbers;
}

}  // namespace ladderline
