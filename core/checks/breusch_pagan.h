// Whether the spread of the residuals changes along the design columns: the studentized test.
//
// n R² of the regression of the squared residuals on the design columns and an intercept, against
// χ² with as many degrees of freedom as there are columns that carry something beside the
// intercept. With weights the residuals are those of rows scaled by √w, the columns are unscaled
// and the regression is unweighted.
//   source  Breusch & Pagan, Econometrica 47 (1979); Koenker, J. Econometrics 17 (1981)
#ifndef LADDERLINE_CORE_CHECKS_BREUSCH_PAGAN_H_
#define LADDERLINE_CORE_CHECKS_BREUSCH_PAGAN_H_

#include <cstdint>

#include "core/checks/projection_sums.h"
#include "core/checks/test_figures.h"

namespace ladderline {

class BreuschPagan {
 public:
  // `auxiliary` (auxiliary_basis.h) must outlive this.
  explicit BreuschPagan(const CentredBasis& auxiliary);
  void Add(const CheckBlock& block);
  // Not computed without a column beside the intercept, with as many columns as rows, and when all
  // residuals are equally large.
  TestFigures Finish(std::int64_t rows) const;

 private:
  const CentredBasis& auxiliary_;
  ProjectionSums explained_;
  DoubleDouble total_;
};

// Why n R² of an auxiliary regression of the squared residuals says nothing; empty if it does.
//   total  the sum of squares of residual² − 1
std::string_view SpreadObstacle(std::int64_t rows, Index rank, double total);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_BREUSCH_PAGAN_H_
