#include "core/profile/power_response.h"

#include <algorithm>
#include <cmath>
#include <utility>

#include "core/elementary/elementary.h"
#include "core/support/double_double.h"

// Symbols: s a row's logarithm, t = ν s, e = exp(t) times the common unit. With the integrals
//   φ = ∫ e^(tu) du,  ψ = ∫ u e^(tu) du,  χ = ∫ u² e^(tu) du,  u from 0 to 1,
// the value is s φ and its derivatives in ν are s² ψ and s³ χ.
namespace ladderline {
namespace {

// Beyond this exponent, sums of squares (times squared logarithms, below 2^21, times rows) could
// overflow: everything is then divided by the largest exponential.
constexpr double kLargestExponent = 300;
// What exp needs no care for; e^-700 against the largest value is nothing.
constexpr double kLeastExponent = -700;

// The closed formulas divide rounded differences by ν² (and, for the curvature, ν³): the root mean
// square of t below which they would cost λ more than 5e-13 of its natural unit.
constexpr double kNearZero = 0.02;
// |t| up to which the series serves, and from which the closed formulas lose nothing.
constexpr double kSeriesExponent = 0.5;

// A spread whose fourth power underflows.
constexpr double kNoSpread = 1e-75;

// Sums and extremes run in two lanes, rows in turn: the same order of operations everywhere.
constexpr size_t kLanes = 2;

template <class Step>
inline void InLanes(size_t n, Step step) {
  size_t i = 0;
  for (; i + 1 < n; i += kLanes) {
    step(i, 0);
    step(i + 1, 1);
  }
  if (i < n) step(i, 0);
}

struct Range {
  double least, largest;
};

Range RangeOf(const std::vector<double>& x) {
  double least[kLanes] = {x[0], x[0]}, largest[kLanes] = {x[0], x[0]};
  InLanes(x.size(), [&](size_t i, int lane) {
    least[lane] = std::min(least[lane], x[i]);
    largest[lane] = std::max(largest[lane], x[i]);
  });
  return {std::min(least[0], least[1]), std::max(largest[0], largest[1])};
}

// Compensated, so that the error does not grow with the rows.
double SumOf(const std::vector<double>& x) {
  DoubleDouble lanes[kLanes];
  InLanes(x.size(), [&](size_t i, int lane) {
    const DoubleDouble sum = TwoSum(lanes[lane].hi, x[i]);
    lanes[lane] = {sum.hi, lanes[lane].lo + sum.lo};
  });
  return (lanes[0] + lanes[1]).value();
}

double SquaresOf(const std::vector<double>& x) {
  double lanes[kLanes] = {};
  InLanes(x.size(), [&](size_t i, int lane) { lanes[lane] += x[i] * x[i]; });
  return lanes[0] + lanes[1];
}

// χ for |t| <= 1/2: Σ t^k / (k! (k + 3)), cut below 2^-55.
inline double ChiSeries(double t) {
  const double t2 = t * t, t4 = t2 * t2;
  const double low = (1.0 / 3 + t * (1.0 / 4)) + t2 * (1.0 / 10 + t * (1.0 / 36));
  const double middle = (1.0 / 168 + t * (1.0 / 960)) + t2 * (1.0 / 6480 + t * (1.0 / 50400));
  const double high =
      (1.0 / 443520 + t * (1.0 / 4354560)) + t2 * (1.0 / 47174400 + t * (1.0 / 558835200));
  const double highest = 1.0 / 7185024000 + t * (1.0 / 99632332800);
  return low + t4 * (middle + t4 * (high + t4 * highest));
}

}  // namespace

PowerResponse::PowerResponse(PowerFamily family, std::vector<double> values)
    : family_(family), logs_(std::move(values)) {
  if (logs_.empty()) return;
  const bool box_cox = family == PowerFamily::kBoxCox;
  const Range raw = RangeOf(logs_);
  both_signs_ = !box_cox && raw.least < 0 && raw.largest > 0;
  if (both_signs_) {
    TakeSignedLogs();
  } else if (!box_cox && raw.least < 0) {
    // Mirrored: as for −x, with 2 − λ in place of λ.
    power_offset_ = 2;
    Negate();
    TakeCentredLogs(1, -raw.largest, -raw.least);
    Negate();
    centre_ = -centre_;
  } else {
    TakeCentredLogs(box_cox ? 0 : 1, raw.least, raw.largest);
  }
  Summarise();
}

// ln(x + one) less its mean, or nearly its mean.
void PowerResponse::TakeCentredLogs(double one, double least, double largest) {
  const size_t n = logs_.size();
  double* const x = logs_.data();
  if (largest + one <= 8 * (least + one)) {
    // A narrow range: the logarithm of x against the mean keeps every digit of small differences.
    const double mean = SumOf(logs_) / static_cast<double>(n);
    const double middle =
        std::isfinite(mean) ? std::clamp(mean, least, largest) : least / 2 + largest / 2;
    const double base = middle + one;
    for (size_t i = 0; i < n; ++i) x[i] = (x[i] - middle) / base;
    Log1pBlock(x, x, n);
    centre_ = one == 0 ? Log(middle) : Log1p(middle);
  } else {
    one == 0 ? LogBlock(x, x, n) : Log1pBlock(x, x, n);
    centre_ = SumOf(logs_) / static_cast<double>(n);
    for (size_t i = 0; i < n; ++i) x[i] -= centre_;
  }
}

void PowerResponse::TakeSignedLogs() {
  double size[kBlock], log[kBlock];
  for (size_t first = 0; first < logs_.size(); first += kBlock) {
    const size_t count = std::min(kBlock, logs_.size() - first);
    double* const x = logs_.data() + first;
    for (size_t i = 0; i < count; ++i) size[i] = std::fabs(x[i]);
    Log1pBlock(size, log, count);
    for (size_t i = 0; i < count; ++i) x[i] = std::copysign(log[i], x[i]);
  }
}

void PowerResponse::Negate() {
  for (double& x : logs_) x = -x;
}

void PowerResponse::Summarise() {
  log_sum_ = SumOf(logs_);
  spread_ = std::sqrt(SquaresOf(logs_) / static_cast<double>(logs_.size()));
  const Range range = RangeOf(logs_);
  least_ = range.least;
  largest_ = range.largest;
}

bool PowerResponse::IsConstant() const { return !(largest_ - least_ > kNoSpread); }

PowerResponse PowerResponse::Thinned(size_t stride) const {
  PowerResponse thinned;
  thinned.family_ = family_;
  thinned.centre_ = centre_;
  thinned.power_offset_ = power_offset_;
  thinned.both_signs_ = both_signs_;
  for (size_t i = 0; i < rows(); i += stride) thinned.logs_.push_back(logs_[i]);
  if (!thinned.logs_.empty()) thinned.Summarise();
  return thinned;
}

PowerResponse::Transformed::Transformed(const PowerResponse& source, double lambda)
    : source_(source),
      power_(lambda - source.power_offset_),
      power_below_(source.both_signs_ ? lambda - 2 : power_),
      reciprocal_(1 / power_),
      reciprocal_below_(1 / power_below_) {
  const double n = static_cast<double>(source.rows());
  const double least_exponent = Power(source.least_) * source.least_;
  const double largest_exponent = Power(source.largest_) * source.largest_;
  if (std::max(least_exponent, largest_exponent) > kLargestExponent) {
    shift_ = std::max(least_exponent, largest_exponent);
    unit_ = Exp(-shift_);
  }
  const double least_power = std::min(std::fabs(power_), std::fabs(power_below_));
  if (least_power * source.spread_ < kNearZero) {
    const bool all_small =
        std::max(std::fabs(least_exponent), std::fabs(largest_exponent)) <= kSeriesExponent;
    formula_ = all_small ? Formula::kSeries : Formula::kByRow;
  }
  log_jacobian_ =
      (lambda - 1) * source.log_sum_ + n * (source.power_offset_ - 1) * source.centre_ - n * shift_;
  if (source.both_signs_) {
    const double mean = source.log_sum_ / n;
    centre_ = At(mean, Exp(std::max(Power(mean) * mean - shift_, kLeastExponent)));
  }
}

inline PowerResponse::Transformed::Point PowerResponse::Transformed::Series(double s,
                                                                            double e) const {
  const double t = Power(s) * s, chi = unit_ * ChiSeries(t);
  const double psi = 0.5 * (e - t * chi), phi = e - t * psi;
  return {s * phi, s * s * psi, s * s * s * chi};
}

inline PowerResponse::Transformed::Point PowerResponse::Transformed::Closed(double s,
                                                                            double e) const {
  const double r = s < 0 ? reciprocal_below_ : reciprocal_, se = s * e;
  const double value = (e - unit_) * r, slope = (se - value) * r;
  return {value, slope, (s * se - 2 * slope) * r};
}

PowerResponse::Transformed::Point PowerResponse::Transformed::At(double s, double e) const {
  return std::fabs(Power(s) * s) <= kSeriesExponent ? Series(s, e) : Closed(s, e);
}

size_t PowerResponse::Transformed::Fill(size_t first, Block& out) const {
  const double* const s = source_.logs_.data() + first;
  const size_t count = std::min(kBlock, source_.rows() - first);
  for (size_t i = 0; i < count; ++i)
    out.value[i] = std::max(Power(s[i]) * s[i] - shift_, kLeastExponent);
  double e[kBlock];
  ExpBlock(out.value, e, count);
  const auto fill = [&](auto formula) {
    for (size_t i = 0; i < count; ++i) {
      const Point point = formula(s[i], e[i]);
      out.value[i] = point.value - centre_.value;
      out.slope[i] = point.slope - centre_.slope;
      out.curvature[i] = point.curvature - centre_.curvature;
    }
  };
  switch (formula_) {
    case Formula::kClosed:
      fill([this](double log, double exponential) { return Closed(log, exponential); });
      break;
    case Formula::kSeries:
      fill([this](double log, double exponential) { return Series(log, exponential); });
      break;
    case Formula::kByRow:
      fill([this](double log, double exponential) { return At(log, exponential); });
      break;
  }
  return count;
}

}  // namespace ladderline
