// What the tests of residuals found: spread, bend, shape, and rows that go together.
#ifndef LADDERLINE_CORE_CHECKS_RESIDUAL_FINDINGS_H_
#define LADDERLINE_CORE_CHECKS_RESIDUAL_FINDINGS_H_

#include <vector>

#include "core/checks/findings.h"

namespace ladderline {

// breusch_pagan to breusch_godfrey, in the order of kCheckNames.
std::vector<Check> ResidualFindings(const Model& model, const CheckFigures& figures);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_RESIDUAL_FINDINGS_H_
