// What the checks of a fit found, in plain words, and what an analyst would do next.
//
// The status weighs the size of the trouble (trouble.h); a p-value only says whether chance would
// make as much. Every threshold is a constant in residual_findings.cc or design_findings.cc that
// says where it comes from.
#ifndef LADDERLINE_CORE_CHECKS_FINDINGS_H_
#define LADDERLINE_CORE_CHECKS_FINDINGS_H_

#include <array>
#include <string>
#include <string_view>
#include <vector>

#include "core/checks/residual_tests.h"
#include "core/model/model.h"

namespace ladderline {

// In the order in which they are shown.
inline constexpr std::array<std::string_view, 14> kCheckNames = {
    "breusch_pagan",      "white",           "reset",
    "jarque_bera",        "shapiro_wilk",    "residual_skewness",
    "durbin_watson",      "breusch_godfrey", "condition_number",
    "variance_inflation", "cooks_distance",  "leverage",
    "rows_per_term",      "rows_left_out"};

// What the model itself does not hold.
struct CheckFigures {
  ResidualTests tests;
  std::string order;   // the name of the order column; empty: the rows are in the order they came
  bool exact = false;  // the fit is
  double condition_number = kNaN;
  double largest_leverage = -1;  // of a row as scaled by √w
  KeyValue largest_leverage_key = {};
  // The category in which that row has the level of fewest rows, and the level; −1: no category.
  int furthest_column = -1, furthest_level = -1;
  std::int64_t rows_decided_alone = 0;        // rows of leverage 1
  std::vector<NumbersLeftOut> left_out = {};  // by column of the model
};

// All checks of a fitted model, whose other parts are complete.
std::vector<Check> Findings(const Model& model, const CheckFigures& figures);

// The checks of a fitted model as they are shown: its own, or all of them as not computed, with the
// reason.
std::vector<Check> ShownChecks(const Model& model);

// What a check found, without the key of a single row: for pages that go further than the records.
std::string FindingWithoutKey(const Check& check);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_FINDINGS_H_
