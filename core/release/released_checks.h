// The checks of a model for release.
#ifndef LADDERLINE_CORE_RELEASE_RELEASED_CHECKS_H_
#define LADDERLINE_CORE_RELEASE_RELEASED_CHECKS_H_

#include <vector>

#include "core/model/model.h"

namespace ladderline {

// `fresh` is complete but for its checks. What follows from its triangle and counts is found anew.
// The others are those of `old` without single rows (their keys, the furthest residuals, levels
// they have); where levels were merged those of single rows are not computed, with the reason.
std::vector<Check> ReleasedChecks(const Model& old, const Model& fresh, bool merged);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_RELEASE_RELEASED_CHECKS_H_
