// What questions to a model have in common: its text, a level, a raw response and the inputs of a
// row, read from a call.
#ifndef LADDERLINE_EXT_MODEL_ARGUMENT_H_
#define LADDERLINE_EXT_MODEL_ARGUMENT_H_

#include <memory>
#include <optional>
#include <string>

#include "ext/call.h"
#include "ext/model_cache.h"
#include "ext/table.h"

namespace ladderline {

// The model in argument 0; null for NULL or blank text. Throws CallError for anything else that is
// no model. The pointer is good for the duration of the call.
ModelInHand* ModelArgument(const Call& call);
ModelInHand* TableModelArgument(const TableCall& call);

// The model in argument i, to be kept while others are looked up.
std::shared_ptr<ModelInHand> HoldModelArgument(const Arguments& arguments, int i);

// Why argument i cannot be read as a model, fitted or refused; nullopt when it can. Never throws
// CallError.
std::optional<std::string> ModelFlaw(const Arguments& arguments, int i);

// A level of limits, strictly between 0 and 1; nullopt when it is missing.
std::optional<double> LevelArgument(const Arguments& arguments, int i);
// The same before inputs: the error says so, for a call that forgot the level.
std::optional<double> LevelBeforeInputs(const Arguments& arguments, int i);

// A raw response, as a date where it is one; NaN when it is missing or no date.
double ResponseArgument(const Arguments& arguments, int i, const Model& model);

// Reads the inputs from argument `first` on, by position or as label–value pairs, into `model`:
// inputs, row and weight. Throws CallError for a wrong count, an unknown or repeated label, and a
// value that its column does not take. `model` is fitted.
void ReadInputs(const Arguments& arguments, int first, ModelInHand& model);

}  // namespace ladderline

#endif  // LADDERLINE_EXT_MODEL_ARGUMENT_H_
