// The facts of a model, in the order in which they are shown.
#ifndef LADDERLINE_EXT_MODEL_FACTS_H_
#define LADDERLINE_EXT_MODEL_FACTS_H_

#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "core/model/model.h"
#include "ext/table.h"

namespace ladderline {

// Every fact a model can have, as name and value; NULL where this one lacks it.
std::vector<std::pair<std::string_view, Cell>> FactsOf(const Model& model);

// Why a model cannot be used: `no model` for null, the reason of a refused one, else empty.
std::string ProblemOf(const Model* model);

}  // namespace ladderline

#endif  // LADDERLINE_EXT_MODEL_FACTS_H_
