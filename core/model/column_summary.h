// What a model remembers of its columns: range, quartiles, mean and spread of the raw values,
// levels and their reference.
#ifndef LADDERLINE_CORE_MODEL_COLUMN_SUMMARY_H_
#define LADDERLINE_CORE_MODEL_COLUMN_SUMMARY_H_

#include <string_view>

#include "core/model/columns.h"
#include "core/model/model.h"

namespace ladderline {

// Describes column i over the kept rows. Numbers: everything but levels; without a kept row all
// are NaN. Categories: levels in byte order with their rows (levels without a kept row left out,
// all when there are more than kMostLevels), the reference as given or the commonest (ties: first
// in byte order). A given reference that no kept row has leaves `reference` at −1.
ModelColumn Summarise(const ColumnSet& set, std::size_t i);

// The level of a category that differs from the text in case or blanks alone (the first in byte
// order); null where there is none.
const CategoryLevel* LevelAlike(const ModelColumn& column, std::string_view text);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_COLUMN_SUMMARY_H_
