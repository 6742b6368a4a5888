#include "core/checks/finding.h"

#include <algorithm>

#include "core/model/label.h"
#include "core/model/predict.h"
#include "core/support/prose.h"

namespace ladderline {

Trouble TroubleOf(double size, Bounds bounds) {
  return size >= bounds.problem ? Trouble::kProblem
         : size >= bounds.look  ? Trouble::kLook
                                : Trouble::kNone;
}

Check CheckNamed(std::string_view name) { return {.name = std::string(name), .status = "fine"}; }

Check CheckNamed(std::string_view name, const TestFigures& test) {
  Check check = CheckNamed(name);
  check.statistic = test.statistic;
  check.df = test.df;
  check.p_value = test.p_value;
  if (!test.computed()) SetNotComputed(test.obstacle, check);
  return check;
}

void SetTrouble(Trouble trouble, Check& check) {
  constexpr const char* kStatus[] = {"fine", "look", "problem"};
  check.status = kStatus[static_cast<int>(trouble)];
}

void SetNotComputed(std::string_view why, Check& check) {
  check.status = "not computed";
  check.finding = "Not computed: " + std::string(why) + ".";
}

std::string SqlText(const std::string& text) {
  std::string quoted = "'";
  for (const char c : text) {
    if (c == '\'') quoted += '\'';
    quoted += c;
  }
  return quoted + "'";
}

std::string LabelOf(const ModelColumn& column, const std::string& word) {
  return SqlText(QuotedName(column.name) + " | " + word);
}

std::string KeyText(const KeyValue& key, const Model& model) {
  if (const auto* text = std::get_if<std::string>(&key)) return SqlText(*text);
  std::string number;
  if (const auto* integer = std::get_if<std::int64_t>(&key)) number = std::to_string(*integer);
  if (const auto* real = std::get_if<double>(&key)) number = PlainNumber(*real);
  if (number.empty()) return "a row without a key";
  const bool has_key =
      std::any_of(model.columns.begin(), model.columns.end(),
                  [](const ModelColumn& column) { return column.role == ColumnRole::kKey; });
  return (has_key ? "" : "row ") + number;
}

std::string ValueText(const ModelColumn& column, double value) {
  if (column.IsDate()) return RawValueText(column, value);
  return Rounded(value, 3) + (column.unit.empty() ? "" : " " + column.unit);
}

}  // namespace ladderline
