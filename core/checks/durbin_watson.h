// How alike the residuals of neighbouring rows are: Σ (e_t − e_(t−1))² / Σ e².
//
// Near 2 when neighbours have nothing in common, towards 0 when they go together, towards 4 when
// they alternate.
//   residuals  of rows scaled by √w
//   order      order[t] is the row that comes t-th; empty: the order of the rows
//   specials   NaN without rows or when all residuals are 0; one row gives 0
//   source     Durbin & Watson, Biometrika 37 (1950)
#ifndef LADDERLINE_CORE_CHECKS_DURBIN_WATSON_H_
#define LADDERLINE_CORE_CHECKS_DURBIN_WATSON_H_

#include <span>

#include "core/regression/row_source.h"

namespace ladderline {

double DurbinWatson(std::span<const double> residuals, std::span<const Index> order = {});

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_DURBIN_WATSON_H_
