#include "core/regression/column_scaling.h"

#include <algorithm>
#include <cmath>
#include <limits>

#include "core/elementary/elementary.h"
#include "core/regression/column_kernels.h"
#include "core/support/double_double.h"

namespace ladderline {
namespace {

// Sums over a column, measured from its first value: a constant column has exactly its value as
// mean.
class Location {
 public:
  void Add(const double* x, const double* w, Index n) {
    if (!started_) origin_ = x[0];
    started_ = true;
    const Pair origin = Both(origin_);
    const double from = origin_;
    if (w == nullptr) {
      sum_ += SumOver(
          n, [=](Index i) { return LoadPair(x + i) - origin; },
          [=](Index i) { return x[i] - from; });
    } else {
      sum_ += SumOver(
          n, [=](Index i) { return LoadPair(w + i) * (LoadPair(x + i) - origin); },
          [=](Index i) { return w[i] * (x[i] - from); });
    }
    distance_ += SumOver(
        n,
        [=](Index i) {
          const Pair d = LoadPair(x + i) - origin;
          return Pair{std::abs(d[0]), std::abs(d[1])};
        },
        [=](Index i) { return std::abs(x[i] - from); });
  }

  bool started() const { return started_; }

  double Mean(double weight_sum) const { return origin_ + sum_.value() / weight_sum; }

  // Measured from `centre`, numbers are of the size 1 / factor.
  ColumnScaling::Column Scaling(double centre, std::int64_t rows) const {
    double size = distance_ / static_cast<double>(rows) + std::abs(origin_ - centre);
    if (!std::isfinite(size)) {
      size = std::numeric_limits<double>::max();
      centre = 0;
    }
    int exponent = 0;
    if (size > 0) std::frexp(size, &exponent);
    return {centre, std::ldexp(1.0, std::clamp(-exponent, -1020, 1020))};
  }

 private:
  bool started_ = false;
  double origin_ = 0;
  DoubleDouble sum_;
  double distance_ = 0;
};

double SumOf(const double* x, Index n) {
  return SumOver(
      n, [=](Index i) { return LoadPair(x + i); }, [=](Index i) { return x[i]; });
}

}  // namespace

ColumnScaling MeasureColumns(const RowSource& source) {
  const std::span<const DesignColumn> columns = source.columns();
  const Index k = static_cast<Index>(columns.size());
  std::vector<Location> x(k);
  Location y;
  DoubleDouble weight_sum, log_weight_sum;
  RowBlock block(k);
  block.may_omit_indicators = true;
  double logs[kBlockRows];
  for (Index b = 0; b < source.block_count(); ++b) {
    source.Fill(b, block);
    for (Index j = 0; j < k; ++j)
      if (!columns[j].intercept && block.x[j] != nullptr) x[j].Add(block.x[j], block.w, block.rows);
    y.Add(block.y, block.w, block.rows);
    if (block.w == nullptr) continue;
    weight_sum += SumOf(block.w, block.rows);
    LogBlock(block.w, logs, static_cast<std::size_t>(block.rows));
    log_weight_sum += SumOf(logs, block.rows);
  }

  ColumnScaling scaling;
  const double rows = static_cast<double>(source.rows());
  scaling.weight_sum = source.has_weights() ? weight_sum.value() : rows;
  scaling.log_weight_sum = log_weight_sum.value();
  if (source.has_weights() && source.rows() > 0) {
    int exponent = 0;
    std::frexp(scaling.weight_sum / rows, &exponent);
    scaling.weight_factor = std::ldexp(1.0, -(exponent / 2) * 2);
  }
  scaling.x.resize(k);
  const bool centred = source.has_intercept();
  for (Index j = 0; j < k; ++j) {
    if (columns[j].intercept || !x[j].started()) continue;
    double centre = columns[j].centre;
    if (!centred) {
      centre = 0;
    } else if (std::isnan(centre)) {
      const bool grouped = columns[j].group != DesignColumn::kEveryGroup;
      centre = grouped ? 0 : x[j].Mean(scaling.weight_sum);
    }
    scaling.x[j] = x[j].Scaling(centre, source.rows());
  }
  scaling.y_mean = y.Mean(scaling.weight_sum);
  if (source.rows() > 0) scaling.y = y.Scaling(centred ? scaling.y_mean : 0, source.rows());
  return scaling;
}

}  // namespace ladderline
