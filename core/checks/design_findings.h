// What the columns and rows of a fit came to: dependence, influence, and rows enough.
#ifndef LADDERLINE_CORE_CHECKS_DESIGN_FINDINGS_H_
#define LADDERLINE_CORE_CHECKS_DESIGN_FINDINGS_H_

#include <vector>

#include "core/checks/findings.h"

namespace ladderline {

// condition_number to rows_left_out, in the order of kCheckNames.
std::vector<Check> DesignFindings(const Model& model, const CheckFigures& figures);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_DESIGN_FINDINGS_H_
