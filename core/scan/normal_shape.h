// How far values are from a normal sample, in four figures.
#ifndef LADDERLINE_CORE_SCAN_NORMAL_SHAPE_H_
#define LADDERLINE_CORE_SCAN_NORMAL_SHAPE_H_

#include <cstddef>
#include <limits>
#include <span>
#include <vector>

namespace ladderline {

// NaN: the rows do not give it.
struct NormalShape {
  double skewness = std::numeric_limits<double>::quiet_NaN();            // G1
  double excess_kurtosis = std::numeric_limits<double>::quiet_NaN();     // G2
  double normal_correlation = std::numeric_limits<double>::quiet_NaN();  // Blom's positions
  double normal_p = std::numeric_limits<double>::quiet_NaN();            // Anderson–Darling
};

// Shapes of several columns of the same length: normal scores are computed once.
class NormalShapes {
 public:
  // Finite values: moments of all `values`, the figures of order of `sample`, which is sorted.
  NormalShape Of(std::span<const double> values, std::vector<double> sample);

 private:
  std::vector<double> scores_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SCAN_NORMAL_SHAPE_H_
