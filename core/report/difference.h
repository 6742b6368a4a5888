// What changed between two fits of the same thing: before and after a month of cases, a cleaned
// column, a refit.
//
//   scale      the new coefficients are first written in the terms of the old fit, where that is
//              exact: against the old reference level; in the old straight-line arguments (center,
//              z_score, rescale), which are estimated anew from every month's rows; on the old
//              straight-line scale of the response. The change of setting is one row, and
//              everything else stays comparable
//   settings   where it is not exact (another re-expression or another estimate of its shape, unit,
//              kind, a reference that is gone) the setting is one row and the terms it touches are
//              not compared one by one, nor are the powers of a polynomial of another degree. Other
//              weights, errors, level, clusters are rows too. A level that merging for release made
//              (release.h) may stand for others each time
//   judged     a coefficient has moved when the new value lies outside the limits that the old fit
//              gave, with the old fit's errors and level. That is a yardstick and no test: the two
//              fits usually share most of their rows, so that they are not independent, and no
//              p-value is given. Of fits of the same law to shared rows the difference has at most
//              the old variance (of a fit to old rows and more it is old less new variance), so
//              that leaving the limits is rarer than it is for fresh rows
//   same       agrees to 1e-9, as sums in another order do
//   refused    a refused model, and models of different responses or families: one row that says so
//
// The statuses: `same`; `steady`, other but inside the old limits; `moved`, outside; `new`; `gone`;
// `changed`, a setting or a figure of the whole; `not comparable`; `refused`.
#ifndef LADDERLINE_CORE_REPORT_DIFFERENCE_H_
#define LADDERLINE_CORE_REPORT_DIFFERENCE_H_

#include <string>
#include <vector>

#include "core/model/model.h"

namespace ladderline {

struct Difference {
  std::string term = {};  // of the old fit, a column, an option or a fact; empty: the whole
  double before = kNaN, after = kNaN;
  double change = kNaN;  // after less before
  std::string status = {}, sentence = {};
};

// First what keeps the two apart and what changed in the settings, then figures of the whole
// (rows_fitted, rows_left_out, residual_sd on the old scale and under weights of a case of average
// weight, median_absolute_error, r_squared where the scale of the response is the same), then the
// terms of the old fit in their order, then new ones.
std::vector<Difference> DifferencesOf(const Model& before, const Model& after);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REPORT_DIFFERENCE_H_
