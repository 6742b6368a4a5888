// What a term multiplies, in names that mean the same in another model.
#ifndef LADDERLINE_CORE_REPORT_TERM_KEY_H_
#define LADDERLINE_CORE_REPORT_TERM_KEY_H_

#include <set>
#include <string>
#include <tuple>

#include "core/model/model.h"

namespace ladderline {

// A column with the power of its value, or with 0 and a level. Of the intercept the key is empty.
using FactorKey = std::tuple<std::string, int, std::string>;
using TermKey = std::set<FactorKey>;

TermKey KeyOf(const Model& model, const ModelTerm& term);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REPORT_TERM_KEY_H_
