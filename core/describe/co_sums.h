// Sums of products of deviations of two variables, for covariance, correlation and the straight
// line of y on x. Removal, soundness, domain and range are those of power_sums.h.
#ifndef LADDERLINE_CORE_DESCRIBE_CO_SUMS_H_
#define LADDERLINE_CORE_DESCRIBE_CO_SUMS_H_

#include <cstdint>

#include "core/describe/deviations.h"
#include "core/support/double_double.h"

namespace ladderline {

struct Pair {
  double y;
  double x;
};

// Sums of products of the deviations from the means; y in units of 2^-y_shift, x of 2^-x_shift.
struct CentralCoSums {
  std::int64_t n = 0;
  int y_shift = 0;
  int x_shift = 0;
  DoubleDouble y_mean, x_mean;
  DoubleDouble yy, xx, xy;
  bool sound = true;
};

class CoSums {
 public:
  using Row = Pair;
  using Summary = CentralCoSums;

  CoSums() = default;
  static CoSums CentredAtMeanOf(const CoSums& first);

  void Add(Pair row) {
    const DoubleDouble y = y_.Of(row.y), x = x_.Of(row.x);
    if (!y_.Covers(y) || !x_.Covers(x)) [[unlikely]]
      return AddUncovered(row);
    AddCovered(y, x);
  }
  void Remove(Pair row);
  Summary Summarise() const;

 private:
  void AddUncovered(Pair row);
  void AddCovered(DoubleDouble y, DoubleDouble x) {
    ++n_;
    ++steps_;
    Fold(y, x, 1);
  }
  void Fold(DoubleDouble y, DoubleDouble x, double sign) {
    const DoubleDouble yy = Product(y, y), xx = Product(x, x), xy = Product(x, y);
    Accumulate(y_sum_, sign * y.hi, sign * y.lo);
    Accumulate(x_sum_, sign * x.hi, sign * x.lo);
    Accumulate(yy_, sign * yy.hi, sign * yy.lo);
    Accumulate(xx_, sign * xx.hi, sign * xx.lo);
    Accumulate(xy_, sign * xy.hi, sign * xy.lo);
  }

  Deviations y_, x_;
  DoubleDouble y_sum_, x_sum_, yy_, xx_, xy_;
  std::int64_t n_ = 0;
  std::int64_t not_finite_ = 0;
  std::int64_t steps_ = 0;
  double yy_peak_ = 0, xx_peak_ = 0;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_CO_SUMS_H_
