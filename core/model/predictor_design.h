// The design of a set's predictors with an intercept, for questions about a response that stays
// raw: which power it asks for, and which re-expression.
#ifndef LADDERLINE_CORE_MODEL_PREDICTOR_DESIGN_H_
#define LADDERLINE_CORE_MODEL_PREDICTOR_DESIGN_H_

#include <memory>
#include <vector>

#include "core/model/columns.h"
#include "core/model/design.h"
#include "core/model/model.h"
#include "core/profile/power_response.h"
#include "core/support/result.h"

namespace ladderline {

class PredictorDesign {
 public:
  // The error is the reason for which FitOls (fit.h) would refuse a model of these rows. `set` must
  // outlive the result.
  static Result<PredictorDesign> Make(const ColumnSet& set);

  // Terms as FitOls has them, y the raw response whatever its label says.
  const RowSource& rows() const { return *source_; }

 private:
  PredictorDesign() = default;

  // On the heap: the source refers to them, and the design moves.
  std::unique_ptr<Model> model_;
  std::unique_ptr<DesignSource> source_;
};

// The raw response of the kept rows.
//   domain  for Box–Cox, a set that keeps no response of 0 or less
PowerResponse PowerResponseOf(PowerFamily family, const ColumnSet& set);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_PREDICTOR_DESIGN_H_
