// The checks of a fit: what they need of the rows while it is made, and what they come to.
#ifndef LADDERLINE_CORE_MODEL_FIT_CHECKS_H_
#define LADDERLINE_CORE_MODEL_FIT_CHECKS_H_

#include <span>
#include <vector>

#include "core/checks/findings.h"
#include "core/model/columns.h"
#include "core/model/model.h"
#include "core/regression/raw_columns.h"
#include "core/regression/residual_pass.h"

namespace ladderline {

// In this order: See every block of the residual pass; Test; Findings, once the model is complete
// but for its checks.
//   cost  one reading of the rows and what residual_tests.h says; 16 bytes per row while Test works
//         when rows came in another order than that of an order column
class FitChecks {
 public:
  explicit FitChecks(const ColumnSet& set) : set_(set) {}

  void See(const ResidualBlock& block);
  // `residuals`: of rows scaled by √w, in the unit of the source's response.
  // `raw`: the columns whose condition is told.
  void Test(const RowSource& source, const LeastSquares& fit, const RawColumns& raw,
            const ResidualSummary& pass, std::span<const double> residuals);
  std::vector<Check> Findings(const Model& model) const;

 private:
  const ColumnSet& set_;
  std::int64_t furthest_row_ = 0;
  CheckFigures figures_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_FIT_CHECKS_H_
