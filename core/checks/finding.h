// What the findings of all checks have in common: degrees of trouble, and words.
#ifndef LADDERLINE_CORE_CHECKS_FINDING_H_
#define LADDERLINE_CORE_CHECKS_FINDING_H_

#include <string>
#include <string_view>

#include "core/checks/test_figures.h"
#include "core/model/model.h"

namespace ladderline {

enum class Trouble { kNone, kLook, kProblem };

// From `look` on a check asks to be looked at, from `problem` on what it is about should be mended.
struct Bounds {
  double look, problem;
};
Trouble TroubleOf(double size, Bounds bounds);  // none for NaN

// A check of that name, as fine; of a test, with its figures, or as not computed.
Check CheckNamed(std::string_view name);
Check CheckNamed(std::string_view name, const TestFigures& test);
void SetTrouble(Trouble trouble, Check& check);
void SetNotComputed(std::string_view why, Check& check);  // `why` is a clause

// A text as SQL writes it, a single quote in it doubled.
std::string SqlText(const std::string& text);
// A column's name with a word after the bar, as SQL writes the label: `'cost | log_offset'`.
std::string LabelOf(const ModelColumn& column, const std::string& word);
// The key of a row, or `row 12` where the model has no keys.
std::string KeyText(const KeyValue& key, const Model& model);
// A raw value of a column with its unit, or as a date: `900 EUR`.
std::string ValueText(const ModelColumn& column, double value);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_FINDING_H_
