#include "core/describe/ordered_frame.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <vector>

#include "core/describe/quantiles.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr double kHalf[] = {0.5};

class Values final : public BlockedColumn {
 public:
  explicit Values(const Blocked<double>& values) : values_(values) {}
  std::size_t blocks() const override { return values_.blocks(); }
  std::span<const double> block(std::size_t index) const override { return values_.block(index); }

 private:
  const Blocked<double>& values_;
};

class DistancesFrom final : public BlockedColumn {
 public:
  DistancesFrom(double middle, const Blocked<double>& values) : middle_(middle), values_(values) {}
  std::size_t blocks() const override { return values_.blocks(); }
  std::span<const double> block(std::size_t index) const override {
    const std::span<const double> values = values_.block(index);
    distances_.resize(values.size());
    std::transform(values.begin(), values.end(), distances_.begin(),
                   [this](double x) { return std::abs(x - middle_); });
    return distances_;
  }

 private:
  double middle_;
  const Blocked<double>& values_;
  mutable std::vector<double> distances_;
};

// The median of the distances from `middle`, the median. Those of the values below it, going down,
// and of the values above it, going up, are two rising sequences: a binary search tells how many of
// each make up the smaller half.
double MedianDistance(const OrderedMultiset& values, double middle) {
  const size_t n = values.size();
  const size_t below = n / 2, above = n - below;
  const auto down = [&](size_t i) { return middle - values[below - 1 - i]; };
  const auto up = [&](size_t i) { return values[below + i] - middle; };
  const size_t wanted = (n - 1) / 2 + 1;  // values up to and including the lower middle one
  size_t least = wanted > above ? wanted - above : 0, most = std::min(wanted, below);
  while (least < most) {
    const size_t taken = (least + most) / 2;
    if (down(taken) < up(wanted - taken - 1)) {
      least = taken + 1;
    } else {
      most = taken;
    }
  }
  const size_t from_below = least, from_above = wanted - least;
  double low = 0, high = std::numeric_limits<double>::infinity();
  if (from_below > 0) low = std::max(low, down(from_below - 1));
  if (from_above > 0) low = std::max(low, up(from_above - 1));
  if (from_below < below) high = std::min(high, down(from_below));
  if (from_above < above) high = std::min(high, up(from_above));
  return Interpolate(low, high, PlaceOf(n, 0.5).fraction);
}

}  // namespace

void OrderedFrame::Add(double x) {
  x += 0.0;  // -0 becomes 0: which of the two a rank hits must not depend on the way it was found
  if (ordered_) {
    in_order_.Insert(x);
  } else {
    as_they_came_.Push(x);
  }
}

void OrderedFrame::Remove(double x) {
  if (!ordered_) Order();
  in_order_.Erase(x);
}

std::vector<double> OrderedFrame::Sorted() const {
  std::vector<double> values;
  values.reserve(as_they_came_.size());
  for (size_t b = 0; b < as_they_came_.blocks(); ++b)
    values.insert(values.end(), as_they_came_.block(b).begin(), as_they_came_.block(b).end());
  std::sort(values.begin(), values.end());
  return values;
}

void OrderedFrame::Order() {
  const std::vector<double> values = Sorted();
  as_they_came_ = {};
  in_order_ = OrderedMultiset(values);
  ordered_ = true;
}

void OrderedFrame::Ask() {
  if (asked_ && !ordered_) Order();
  asked_ = true;
}

double OrderedFrame::PercentileCont(double probability) {
  Ask();
  if (!ordered_) return Quantiles(Values(as_they_came_), std::span(&probability, 1))[0];
  const size_t n = in_order_.size();
  if (n == 0) return kNaN;
  const QuantilePlace place = PlaceOf(n, probability);
  return Interpolate(in_order_[place.lower], in_order_[std::min(place.lower + 1, n - 1)],
                     place.fraction);
}

double OrderedFrame::PercentileDisc(double probability) {
  Ask();
  if (size() == 0) return kNaN;
  const size_t rank = DiscreteRank(size(), probability);
  if (!ordered_) return OrderStatistics(Values(as_they_came_), std::span(&rank, 1))[0];
  return in_order_[rank];
}

double OrderedFrame::MedianAbsDev() {
  const double median = Median();
  if (!ordered_) return Quantiles(DistancesFrom(median, as_they_came_), kHalf)[0];
  return in_order_.size() == 0 ? kNaN : MedianDistance(in_order_, median);
}

std::vector<double> OrderedFrame::InOrder() {
  Ask();
  return ordered_ ? in_order_.Values() : Sorted();
}

}  // namespace ladderline
