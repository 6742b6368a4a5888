// Reading reference data, and measuring agreement in digits.
#ifndef LADDERLINE_TESTS_REFERENCE_REFERENCE_H_
#define LADDERLINE_TESTS_REFERENCE_REFERENCE_H_

#include <gtest/gtest.h>

#include <map>
#include <nlohmann/json.hpp>
#include <string>
#include <vector>

namespace ladderline::testing {

// -log10 of the relative error of `value` against `truth` (of the absolute error where truth is 0),
// floored at 0 and capped at 15; a NaN has 0 digits.
double DigitsAgreed(double truth, double value);

// Succeeds when `value` agrees with `truth` to at least `digits` digits; prints both in full else.
::testing::AssertionResult Agrees(double truth, double value, double digits);

// A CSV file under tests/reference, header row first, no quoting: column name -> cells as text.
std::map<std::string, std::vector<std::string>> ReadCsvText(const std::string& path);
// The same, one column as numbers.
std::vector<double> ReadCsvColumn(const std::string& path, const std::string& column);
nlohmann::json ReadJson(const std::string& path);
// The same with members in the order of the file.
nlohmann::ordered_json ReadOrderedJson(const std::string& path);

}  // namespace ladderline::testing

#endif  // LADDERLINE_TESTS_REFERENCE_REFERENCE_H_
