// Amounts, units and limits as sentences about effects have them. Locale-free English.
#ifndef LADDERLINE_CORE_EFFECTS_WORDING_H_
#define LADDERLINE_CORE_EFFECTS_WORDING_H_

#include <string>
#include <string_view>

namespace ladderline {

// The decimal place to which figures with limits so far apart are rounded: 10^place is the second
// significant digit of `width`. For a width of 0, or one not known, it is that of the third
// significant digit of `size`.
int RoundingPlace(double width, double size);

// A number rounded to 10^place: with so many decimals below 0 (`0.60` for −2), with zeros above
// (`1230` for 1). Very large and very small ones have an exponent.
std::string RoundedTo(double number, int place);

// What a unit is called after `1`: `year` for `years`, `day per case` for `days per case`.
// Abbreviations and what does not look like an English plural stay as they are (`EUR`, `m²`,
// `celsius`).
std::string Singular(std::string_view unit);

// `%` and `percent`.
bool IsPercent(std::string_view unit);

// `12.3 EUR`, `1 year`, `45` without a unit, `12.3%` of a percent.
std::string Amount(const std::string& number, std::string_view unit);

// The same of how far two amounts are apart: `12.3 percentage points` where the unit is a percent,
// since 12.3% would be read as a share of one of the two.
std::string DifferenceAmount(const std::string& number, std::string_view unit);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_EFFECTS_WORDING_H_
