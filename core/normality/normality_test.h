// What a test of normality says about one column.
#ifndef LADDERLINE_CORE_NORMALITY_NORMALITY_TEST_H_
#define LADDERLINE_CORE_NORMALITY_NORMALITY_TEST_H_

#include <limits>

namespace ladderline {

// The note, where there is one, is plain words: why a figure is missing (NaN), or what a reader
// must know to use it.
struct NormalityTest {
  double statistic = std::numeric_limits<double>::quiet_NaN();
  double p_value = std::numeric_limits<double>::quiet_NaN();  // relative accuracy in the tail too
  const char* note = nullptr;
};

inline constexpr const char* kNoSpread = "all values are equal";

}  // namespace ladderline

#endif  // LADDERLINE_CORE_NORMALITY_NORMALITY_TEST_H_
