// The JSON results of this extension other than models: which kinds there are, and how one figure
// is taken out of one.
#ifndef LADDERLINE_EXT_RESULTS_H_
#define LADDERLINE_EXT_RESULTS_H_

#include <optional>
#include <span>
#include <string>
#include <string_view>

#include "ext/json.h"
#include "ext/table.h"

namespace ladderline {

// A single value of JSON; NULL for null and for what has parts.
Cell CellOf(const Json& value);

// The keys that a kind of result can have. A text is of the kind whose first key it has, if it has
// no key that is not the kind's.
using ResultKeys = std::span<const std::string_view>;

struct ResultFact {
  ResultKeys keys;     // of the text's kind
  bool known = false;  // the name is one of them
  Cell value;          // NULL where this result lacks it
};

// The figure `name` of a result: a number or text, a list as JSON. nullopt for a text that is of no
// kind.
std::optional<ResultFact> FactOfResult(std::string_view text, std::string_view name);

}  // namespace ladderline

#endif  // LADDERLINE_EXT_RESULTS_H_
