#include "tests/reference/reference.h"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <fstream>
#include <sstream>
#include <stdexcept>

namespace ladderline::testing {
namespace {

std::ifstream Open(const std::string& path) {
  std::ifstream in(std::string(LADDERLINE_REFERENCE_DIR) + "/" + path);
  if (!in) throw std::runtime_error("no reference file " + path);
  return in;
}

}  // namespace

double DigitsAgreed(double truth, double value) {
  if (std::isnan(value)) return 0;
  const double error = truth == 0 ? std::abs(value) : std::abs(value - truth) / std::abs(truth);
  if (error == 0) return 15;
  return std::clamp(-std::log10(error), 0.0, 15.0);
}

::testing::AssertionResult Agrees(double truth, double value, double digits) {
  const double agreed = DigitsAgreed(truth, value);
  if (agreed >= digits) return ::testing::AssertionSuccess();
  char text[256];
  std::snprintf(text, sizeof text, "%.2f digits, wanted %.2f: expected %.17g (%a), got %.17g (%a)",
                agreed, digits, truth, truth, value, value);
  return ::testing::AssertionFailure() << text;
}

std::map<std::string, std::vector<std::string>> ReadCsvText(const std::string& path) {
  std::ifstream in = Open(path);
  std::string line, cell;
  std::vector<std::string> names;
  std::map<std::string, std::vector<std::string>> columns;
  while (std::getline(in, line)) {
    if (!line.empty() && line.back() == '\r') line.pop_back();
    if (line.empty()) continue;
    std::stringstream cells(line);
    for (size_t i = 0; std::getline(cells, cell, ','); ++i) {
      if (columns.size() <= i && names.size() <= i)
        names.push_back(cell);
      else
        columns[names.at(i)].push_back(cell);
    }
    if (columns.empty())
      for (const std::string& name : names) columns[name];
  }
  return columns;
}

std::vector<double> ReadCsvColumn(const std::string& path, const std::string& column) {
  std::vector<double> numbers;
  const auto columns = ReadCsvText(path);
  for (const std::string& cell : columns.at(column)) numbers.push_back(std::stod(cell));
  return numbers;
}

nlohmann::json ReadJson(const std::string& path) { return nlohmann::json::parse(Open(path)); }
nlohmann::ordered_json ReadOrderedJson(const std::string& path) {
  return nlohmann::ordered_json::parse(Open(path));
}

}  // namespace ladderline::testing
