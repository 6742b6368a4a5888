// The outcome of a test on a fit, or why there is none.
#ifndef LADDERLINE_CORE_CHECKS_TEST_FIGURES_H_
#define LADDERLINE_CORE_CHECKS_TEST_FIGURES_H_

#include <limits>
#include <string_view>

namespace ladderline {

struct TestFigures {
  double statistic = std::numeric_limits<double>::quiet_NaN();
  double df = std::numeric_limits<double>::quiet_NaN();
  double df2 = std::numeric_limits<double>::quiet_NaN();      // of an F; NaN for other laws
  double p_value = std::numeric_limits<double>::quiet_NaN();  // relative accuracy in the tail
  // Empty when computed; else a clause for people, a literal: `the fit is exact`. Then all figures
  // are NaN.
  std::string_view obstacle = {};

  bool computed() const { return obstacle.empty(); }
  static TestFigures Not(std::string_view why) {
    TestFigures figures;
    figures.obstacle = why;
    return figures;
  }
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_TEST_FIGURES_H_
