#include "core/report/term_key.h"

namespace ladderline {

TermKey KeyOf(const Model& model, const ModelTerm& term) {
  TermKey key;
  for (const Factor& factor : term.factors) {
    const ModelColumn& column = model.columns[static_cast<size_t>(factor.column)];
    key.insert({column.name, factor.level < 0 ? factor.power : 0,
                factor.level < 0 ? "" : column.levels[static_cast<size_t>(factor.level)].text});
  }
  return key;
}

}  // namespace ladderline
