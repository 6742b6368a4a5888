// The terms of a model with other columns (levels put together, polynomials over another range) as
// combinations of the terms of the model it comes from.
#ifndef LADDERLINE_CORE_RELEASE_TERM_MAP_H_
#define LADDERLINE_CORE_RELEASE_TERM_MAP_H_

#include <span>
#include <vector>

#include "core/model/model.h"
#include "core/regression/raw_columns.h"
#include "core/support/result.h"

namespace ladderline {

// By new term, in the columns that `old`'s basis keeps; empty for a term of which nothing is left.
//   columns  as in `old`, but for the levels of categories and the ranges of polynomials
//   places   by column: the new level of each old one; empty where nothing was merged
//   terms    of MakeTerms for `columns`
//   errors   a clause: a product whose parts are no terms, where these are needed; a collinear term
//            of which `old` does not say what it repeats
using TermMap = std::vector<std::vector<RawColumn::Part>>;
Result<TermMap> MapTerms(const Model& old, std::span<const ModelColumn> columns,
                         std::span<const std::vector<int>> places,
                         std::span<const ModelTerm> terms);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_RELEASE_TERM_MAP_H_
