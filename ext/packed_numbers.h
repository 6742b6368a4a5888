// Doubles as base64 text: exact, and half as long as their decimals.
//
// Each double is its eight bytes (IEEE 754, least significant first, whatever the machine); the
// bytes of all are written in base64 with padding (RFC 4648, section 4).
#ifndef LADDERLINE_EXT_PACKED_NUMBERS_H_
#define LADDERLINE_EXT_PACKED_NUMBERS_H_

#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

namespace ladderline {

std::string PackNumbers(std::span<const double> numbers);

// nullopt for anything that PackNumbers does not write.
std::optional<std::vector<double>> UnpackNumbers(std::string_view text);

}  // namespace ladderline

#endif  // LADDERLINE_EXT_PACKED_NUMBERS_H_
