#include "core/model/predictor_design.h"

#include <utility>

#include "core/model/column_summary.h"
#include "core/model/estimated_transforms.h"
#include "core/model/fit.h"

namespace ladderline {
namespace {

// As Summarise has it, but of a plain number only what a design needs.
ModelColumn Describe(const ColumnSet& set, std::size_t i) {
  const ColumnSet::Column& column = set.column(i);
  const bool number = set.wanted(i) == Wanted::kNumber || set.wanted(i) == Wanted::kDate;
  const Label::Word word = column.label.word;
  const bool plain =
      word == Label::Word::kNone || word == Label::Word::kNumber || word == Label::Word::kTransform;
  if (i > 0 && (!(number && plain) || column.label.estimated)) return Summarise(set, i);
  ModelColumn out;
  out.name = column.label.name;
  out.role = column.role;
  if (i > 0) out.transform = column.label.transform;
  out.missing = column.missing;
  out.outside = column.outside;
  return out;
}

}  // namespace

Result<PredictorDesign> PredictorDesign::Make(const ColumnSet& set) {
  PredictorDesign design;
  design.model_ = std::make_unique<Model>();
  Model& model = *design.model_;
  model.rows = set.rows();
  for (std::size_t i = 0; i < set.size(); ++i) model.columns.push_back(Describe(set, i));
  model.terms = MakeTerms(model.columns, true);
  const std::string reason = set.refusal().empty() ? Shortage(set, model) : set.refusal();
  if (!reason.empty()) return Error{reason};
  if (std::optional<Error> error = EstimatePredictors(set, model.columns))
    return Error{std::move(error->what)};
  design.source_ = std::make_unique<DesignSource>(set, model.columns, model.terms);
  return design;
}

PowerResponse PowerResponseOf(PowerFamily family, const ColumnSet& set) {
  return PowerResponse(family, set.column(0).numbers.Copy());
}

}  // namespace ladderline
