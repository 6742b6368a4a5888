// Joint tests of several columns, answered from the triangular factor alone.
#ifndef LADDERLINE_CORE_REGRESSION_JOINT_TEST_H_
#define LADDERLINE_CORE_REGRESSION_JOINT_TEST_H_

#include <span>
#include <vector>

#include "core/regression/least_squares.h"

namespace ladderline {

// Partial F test of the hypothesis that a group's slopes are all 0 while every other column stays.
struct JointTest {
  Index df = 0;               // kept columns of the group
  double sum_of_squares = 0;  // by which RSS grows without them
  double f = 0;        // against s² with residual_df; NaN when saturated, inf for an RSS of 0
  double p_value = 0;  // relative accuracy in the tail
};

// One test per group of source columns (none of them the intercept). A group of which every column
// was dropped has df 0 and NaN elsewhere. O(rank³) for all groups together.
std::vector<JointTest> JointTests(const LeastSquares& fit,
                                  std::span<const std::vector<Index>> groups);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_JOINT_TEST_H_
