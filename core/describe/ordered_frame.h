// Medians, percentiles and the median absolute deviation of a group or of a moving frame.
//
// A group that is asked once keeps its values as they come, 8 bytes each, and selects. A frame that
// loses rows or is asked again keeps them in order from then on, and answers in O(log n).
//   domain   no NaN; an infinity is a value like any other; -0 counts as 0
//   empty    NaN; one row or a constant column: that value, and a deviation of 0
#ifndef LADDERLINE_CORE_DESCRIBE_ORDERED_FRAME_H_
#define LADDERLINE_CORE_DESCRIBE_ORDERED_FRAME_H_

#include <cstddef>
#include <vector>

#include "core/describe/ordered_multiset.h"
#include "core/model/blocked.h"

namespace ladderline {

class OrderedFrame {
 public:
  void Add(double x);
  // Takes out a row equal to x; there must be one.
  void Remove(double x);
  std::size_t size() const { return ordered_ ? in_order_.size() : as_they_came_.size(); }

  // 0 <= probability <= 1; see quantiles.h for both definitions.
  double PercentileCont(double probability);
  double PercentileDisc(double probability);
  double Median() { return PercentileCont(0.5); }
  // The median of |x - median|, without a factor.
  double MedianAbsDev();
  // All values, least first; O(n) once they are kept in order.
  std::vector<double> InOrder();

 private:
  std::vector<double> Sorted() const;  // from as_they_came_
  void Order();
  void Ask();  // comes before an answer: the second one is given in order

  Blocked<double> as_they_came_;
  OrderedMultiset in_order_;
  bool asked_ = false;
  bool ordered_ = false;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_ORDERED_FRAME_H_
