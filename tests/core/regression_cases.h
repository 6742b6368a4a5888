// The fits of tests/reference/regression_checks.json, built on the same data.
#ifndef LADDERLINE_TESTS_CORE_REGRESSION_CASES_H_
#define LADDERLINE_TESTS_CORE_REGRESSION_CASES_H_

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <map>
#include <memory>
#include <string>
#include <vector>

#include "core/regression/row_source.h"
#include "tests/reference/reference.h"

namespace ladderline::testing {

using Column = std::vector<double>;

template <class Function>
Column Map(const Column& x, Function function) {
  Column out(x.size());
  std::transform(x.begin(), x.end(), out.begin(), function);
  return out;
}

inline double Ln(double x) { return std::log(x); }

// n numbers in −2..2 of a fixed stream, bell-shaped: the sum of three uniform ones from SplitMix64
// (Steele, Lea & Flood 2014), the same on every machine.
inline Column Noise(std::size_t n, std::uint64_t seed) {
  std::uint64_t state = seed << 32;
  const auto uniform = [&state] {
    std::uint64_t z = state += 0x9e3779b97f4a7c15u;
    z = (z ^ (z >> 30)) * 0xbf58476d1ce4e5b9u;
    z = (z ^ (z >> 27)) * 0x94d049bb133111ebu;
    return static_cast<double>((z ^ (z >> 31)) >> 11) * 0x1p-53;
  };
  Column noise(n);
  for (double& value : noise) value = 4.0 / 3 * (uniform() + uniform() + uniform()) - 2;
  return noise;
}

// A design that grows predictor by predictor and then serves as a source.
struct Case {
  explicit Case(bool intercept) {
    if (!intercept) return;
    columns.emplace_back().intercept = true;
    x.emplace_back();
  }

  void AddNumber(Column values) {
    predictors.push_back({static_cast<Index>(columns.size())});
    columns.emplace_back();
    x.push_back(std::move(values));
  }
  // Indicators of all levels but the first in byte order. As groups, the fit is told of their
  // zeros.
  void AddCategory(const std::vector<std::string>& values, bool as_groups = false) {
    std::map<std::string, std::uint16_t> codes;
    for (const std::string& value : values) codes[value] = 0;
    for (std::uint16_t next = 0; auto& [level, code] : codes) code = next++;
    predictors.emplace_back();
    for (std::size_t code = 1; code < codes.size(); ++code) {
      predictors.back().push_back(static_cast<Index>(columns.size()));
      if (as_groups) {
        columns.emplace_back().group = static_cast<int>(code);
      } else {
        columns.emplace_back();
      }
      Column& indicator = x.emplace_back();
      for (const std::string& value : values) indicator.push_back(codes[value] == code);
    }
    if (!as_groups) return;
    groups = static_cast<int>(codes.size());
    for (const std::string& value : values) group.push_back(codes[value]);
  }

  ColumnSource Source() const {
    ColumnSource source(columns, {x.begin(), x.end()}, y, w);
    if (groups > 0) source.SetGroups(groups, group);
    return source;
  }

  std::vector<DesignColumn> columns;
  std::vector<Column> x;
  Column y, w;
  int groups = 0;
  std::vector<std::uint16_t> group;
  std::vector<std::vector<Index>> predictors;  // the columns of each
};

// `name` is a key of regression_checks.json; "… grouped" hands the last category over as groups.
inline Case OpenCase(const std::string& name) {
  const auto starts = [&](const char* start) { return name.rfind(start, 0) == 0; };
  if (starts("trees")) {
    Case out(true);
    const Column girth = ReadCsvColumn("boxcox/trees.csv", "Girth");
    out.AddNumber(girth);
    out.AddNumber(ReadCsvColumn("boxcox/trees.csv", "Height"));
    out.y = ReadCsvColumn("boxcox/trees.csv", "Volume");
    if (starts("trees_weighted")) out.w = Map(girth, [](double v) { return 1 / (v * v); });
    return out;
  }
  if (starts("journals")) {
    Case out(true);
    out.AddNumber(Map(ReadCsvColumn("boxcox/journals.csv", "price"), Ln));
    out.AddNumber(Map(ReadCsvColumn("boxcox/journals.csv", "citations"), Ln));
    out.AddNumber(ReadCsvColumn("boxcox/journals.csv", "foundingyear"));
    out.y = Map(ReadCsvColumn("boxcox/journals.csv", "subs"), Ln);
    return out;
  }
  if (starts("wool")) {
    Case out(false);
    for (const char* column : {"len", "amp", "load"})
      out.AddNumber(ReadCsvColumn("boxcox/wool.csv", column));
    out.y = Map(ReadCsvColumn("boxcox/wool.csv", "cycles"), Ln);
    return out;
  }
  if (starts("longley")) {
    Case out(true);
    for (const char* column : {"x1", "x2", "x3", "x4", "x5", "x6"})
      out.AddNumber(ReadCsvColumn("nist/Longley.csv", column));
    out.y = ReadCsvColumn("nist/Longley.csv", "y");
    return out;
  }
  Case out(true);
  const auto text = ReadCsvText("boxcox/ornstein.csv");
  const Column assets = ReadCsvColumn("boxcox/ornstein.csv", "assets");
  out.AddNumber(Map(assets, Ln));
  out.AddCategory(text.at("nation"));
  out.AddCategory(text.at("sector"), name.find("grouped") != std::string::npos);
  out.y = Map(ReadCsvColumn("boxcox/ornstein.csv", "interlocks"),
              [](double v) { return std::log(v + 1); });
  if (starts("ornstein_weighted")) out.w = Map(assets, [](double v) { return std::sqrt(v); });
  return out;
}

inline const std::vector<std::string>& CaseNames() {
  static const std::vector<std::string> names = {
      "trees",    "trees_weighted",   "journals",          "wool_no_intercept",        "longley",
      "ornstein", "ornstein grouped", "ornstein_weighted", "ornstein_weighted grouped"};
  return names;
}

// R's figures for a case: see tests/reference/regression_checks.R.
inline nlohmann::json CaseTruth(const std::string& name) {
  static const nlohmann::json truth = ReadJson("regression_checks.json");
  return truth.at(name.substr(0, name.find(' ')));
}

// A number, or text that holds more digits than a double.
inline double ToNumber(const nlohmann::json& json) {
  return json.is_string() ? std::stod(json.get<std::string>()) : json.get<double>();
}

// Every number of `values` agrees with that of `truth`.
inline ::testing::AssertionResult AllAgree(const nlohmann::json& truth, const Column& values,
                                           double digits) {
  if (truth.size() != values.size())
    return ::testing::AssertionFailure() << values.size() << " numbers, not " << truth.size();
  for (std::size_t i = 0; i < values.size(); ++i) {
    const ::testing::AssertionResult agrees = Agrees(ToNumber(truth[i]), values[i], digits);
    if (!agrees) return ::testing::AssertionFailure() << "number " << i << ": " << agrees.message();
  }
  return ::testing::AssertionSuccess();
}

}  // namespace ladderline::testing

#endif  // LADDERLINE_TESTS_CORE_REGRESSION_CASES_H_
