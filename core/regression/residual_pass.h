// What needs a second look at the rows: residuals, leverage, influence, and the middle matrices of
// robust covariances.
//
// Rows are scaled by √w throughout: residual e = √w (y − fitted), leverage h = w ‖R^-T d‖².
// A row of leverage 1 (1 − h ≤ 1e-10) is fitted exactly whatever its response. It adds nothing to
// the HC2 and HC3 matrices and to PRESS, has neither a studentized residual nor a Cook's distance,
// and the direction it decides alone is listed.
//   cost    2 n rank² multiplications with the matrices, n rank²/2 without
//   source  MacKinnon & White 1985 (HC2, HC3); Cook 1977; Belsley, Kuh & Welsch 1980 (studentized)
#ifndef LADDERLINE_CORE_REGRESSION_RESIDUAL_PASS_H_
#define LADDERLINE_CORE_REGRESSION_RESIDUAL_PASS_H_

#include <cstdint>
#include <functional>
#include <vector>

#include "core/regression/least_squares.h"
#include "core/regression/row_source.h"

namespace ladderline {

struct InfluentialRow {
  std::int64_t row;  // counted from 0 in the source's order
  double cooks_distance;
  double leverage;
  double studentized_residual;  // external
};

// Handed to the caller block by block, in row order; the pointers die with the call.
struct ResidualBlock {
  std::int64_t first_row;
  Index rows;
  const double* residual;  // e
  const double* leverage;  // h
};

struct ResidualOptions {
  bool robust = true;                               // accumulate the HC matrices
  Index influential_rows = 20;                      // how many rows to list by Cook's distance
  std::function<void(const ResidualBlock&)> visit;  // may be empty
};

struct ResidualSummary {
  // Σ f q q', q = √w R^-T d, packed rank × rank; f = e², e²/(1−h), e²/(1−h)². Empty unless
  // `robust`.
  std::vector<double> hc0, hc2, hc3;
  // q of the rows of leverage 1: unit vectors, orthogonal to each other and to all other rows.
  std::vector<std::vector<double>> decided_alone;
  double press = 0;         // Σ (e/(1−h))²
  double max_leverage = 0;  // of rows as scaled by √w
  // max ‖R^-T d‖² over rows: what a new case of weight 1 is compared with. Equal without weights.
  double max_unit_leverage = 0;
  double residual_ss = 0;  // Σ e² as computed here
  // Largest Cook's distance first, equal ones in row order; rows without one are not listed. Empty
  // for a saturated or exact fit.
  std::vector<InfluentialRow> influential;
};

ResidualSummary PassResiduals(const RowSource& source, const LeastSquares& fit,
                              const ResidualOptions& options = {});

// e / (s_(i) √(1−h)), s_(i) without the row: t with residual_df − 1 degrees of freedom. NaN for a
// row of leverage 1 and when residual_df < 2.
double StudentizedResidual(double residual, double leverage, double residual_ss,
                           std::int64_t residual_df);

// e² h / ((1−h)² rank s²). NaN for a row of leverage 1 and when saturated.
double CooksDistance(double residual, double leverage, double residual_ss, std::int64_t residual_df,
                     Index rank);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_RESIDUAL_PASS_H_
