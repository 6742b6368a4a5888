// What the writer and the reader of a model's text agree on: keys, and the figures that are left
// out of the text as they follow from others of it.
#ifndef LADDERLINE_EXT_MODEL_TEXT_RULES_H_
#define LADDERLINE_EXT_MODEL_TEXT_RULES_H_

#include <array>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "core/model/model.h"

namespace ladderline::model_text {

// A fact of ModelFacts and its key, in the order of writing; `derived` gives its value where it
// follows from others.
struct FactKey {
  const char* key;
  double ModelFacts::*fact;
  double (*derived)(const Model&) = nullptr;
};
std::span<const FactKey> FactKeys();

// Whether a figure need not be written: it is what others say, to rounding.
bool Follows(double figure, double derived);

// Whether a term is one of those that the fit kept.
bool IsKept(const Model& model, size_t term);

// The test of a column by the t of its only coefficient; NaN where it has none or several.
ColumnTest TestOfOne(const Model& model, int column, int parameters);

// Cook's distance by the studentized residual (external) t and the leverage h.
double CooksDistanceOf(const Model& model, double t, double h);

// The column of a term's factors where the text has none.
const ModelColumn* ColumnOfTerm(const std::vector<ModelColumn>& columns, const std::string& name);

bool HasPolynomial(const Model& model);

// Edge i of the bins of the fitted values: bins[i] ends at edge i + 1.
double BinEdge(double low, double high, size_t i, size_t bins);

// Keys of a term's standard errors, by ErrorKind.
inline constexpr std::array<const char*, kErrorKinds> kErrorKeys = {
    "standard_error", "hc0", "hc1", "hc2", "hc3", "cluster"};

inline constexpr std::array<std::string_view, 4> kCheckStatus = {"fine", "look", "problem",
                                                                 "not computed"};

inline constexpr int kMostExponent = 2200;  // between the ends of the range of a double

inline constexpr double kExactIntegers = 9007199254740992.0;  // 2^53

}  // namespace ladderline::model_text

#endif  // LADDERLINE_EXT_MODEL_TEXT_RULES_H_
