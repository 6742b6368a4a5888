#include "core/release/coarse.h"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <limits>

namespace ladderline {
namespace {

constexpr int kEndDigits = 2, kMiddleDigits = 3, kAllDigits = 17;

// floor(log10 x) for x > 0, from the decimal text: the same on every machine.
int DecimalExponent(double x) {
  char text[64];
  const char* end = std::to_chars(text, text + sizeof text, x, std::chars_format::scientific).ptr;
  const char* exponent = std::find(static_cast<const char*>(text), end, 'e') + 1;
  if (*exponent == '+') ++exponent;
  int value = 0;
  std::from_chars(exponent, end, value);
  return value;
}

// Up to kExactPower a power of ten is exact.
constexpr int kExactPower = 22;
double PowerOfTen(int n) {
  double power = 1;
  for (; n > 0; --n) power *= 10;
  return power;
}

double Turned(double x, Towards towards) {
  switch (towards) {
    case Towards::kDown:
      return std::floor(x);
    case Towards::kUp:
      return std::ceil(x);
    default:
      return std::nearbyint(x);
  }
}

// 1, 2 or 5 times a power of ten, or none.
struct Step {
  int digit = 0, place = 0;
};

double SizeOf(Step step) {
  const double power = PowerOfTen(std::abs(step.place));
  return step.place >= 0 ? step.digit * power : step.digit / power;
}

// The least step of at least x > 0, or the largest of at most x.
Step StepAt(double x, Towards towards) {
  constexpr int kDigits[] = {1, 2, 5};
  const int exponent = DecimalExponent(x);
  if (std::abs(exponent) >= kExactPower) return {};
  Step below;
  for (int place = exponent; place <= exponent + 1; ++place) {
    for (const int digit : kDigits) {
      const double step = SizeOf({digit, place});
      if (step > x && towards == Towards::kDown) return below;
      if (step >= x && towards == Towards::kUp) return {digit, place};
      below = {digit, place};
    }
  }
  return below;
}

// The multiple of a step next to x.
double OnSteps(double x, Step step, Towards towards) {
  if (step.digit == 0) return x;
  const double power = PowerOfTen(std::abs(step.place));
  const double steps = (step.place >= 0 ? x / power : x * power) / step.digit;
  // What rounding of the division leaves of a value on the grid is no reason to go further.
  const double nearest = std::nearbyint(steps);
  const double turned =
      std::abs(steps - nearest) <= 1e-12 * std::abs(steps) ? nearest : Turned(steps, towards);
  const double coarse = step.place >= 0 ? turned * step.digit * power : turned * step.digit / power;
  if (!std::isfinite(coarse)) return x;
  // A value on the grid but for rounding may come back on its wrong side.
  if (towards == Towards::kDown) return std::min(coarse, x);
  if (towards == Towards::kUp) return std::max(coarse, x);
  return coarse;
}

template <class Inside>
double CoarseInside(double value, double range, int digits, Towards towards, Inside&& inside) {
  for (; digits < kAllDigits; ++digits) {
    const double coarse = Coarse(value, range, digits, towards);
    if (inside(coarse)) return coarse;
  }
  return value;
}

// An end of a range: to digits, and to a step of the range; where that leaves the domain, a low end
// above 0 to the next step below itself, and else to as few digits as stay inside.
template <class Inside>
double CoarseEnd(double value, double range, Towards towards, Inside&& inside) {
  constexpr double kStepsInRange = 20;
  const double wide = OnSteps(Coarse(value, range, kEndDigits, towards),
                              StepAt(range / kStepsInRange, Towards::kUp), towards);
  if (inside(wide)) return wide;
  if (value > 0 && towards == Towards::kDown) {
    const double below = SizeOf(StepAt(value, Towards::kDown));
    if (below > 0 && inside(below)) return below;
  }
  return CoarseInside(value, range, kEndDigits, towards, inside);
}

}  // namespace

std::int64_t SumOfRows(std::int64_t a, std::int64_t b) {
  constexpr std::int64_t kMost = std::numeric_limits<std::int64_t>::max();
  return a > kMost - b ? kMost : a + b;
}

std::int64_t RoundedUp(std::int64_t count, std::int64_t floor) {
  const std::int64_t over = count % floor;
  constexpr std::int64_t kMost = std::numeric_limits<std::int64_t>::max();
  return over == 0 || count - over > kMost - floor ? count : count - over + floor;
}

double Coarse(double value, double range, int digits, Towards towards) {
  if (value == 0 || !std::isfinite(value) || !(range > 0)) return value;
  const int place = DecimalExponent(std::min(std::abs(value), range)) - (digits - 1);
  return OnSteps(value, std::abs(place) <= kExactPower ? Step{1, place} : Step{}, towards);
}

void CoarsenRange(ModelColumn& column) {
  const double low = column.observed_low, high = column.observed_high, range = high - low;
  if (!(range > 0)) return;
  const bool above_0 = column.role == ColumnRole::kWeight || column.role == ColumnRole::kExposure;
  const auto inside = [&](double value) {
    return column.transform.Returns(value) && (value > 0 || !above_0);
  };
  const auto middle = [&](double value) {
    return std::clamp(CoarseInside(value, range, kMiddleDigits, Towards::kNearest, inside),
                      column.observed_low, column.observed_high);
  };
  column.observed_low = CoarseEnd(low, range, Towards::kDown, inside);
  column.observed_high = CoarseEnd(high, range, Towards::kUp, inside);
  column.lower_quartile = middle(column.lower_quartile);
  column.median = std::max(middle(column.median), column.lower_quartile);
  column.upper_quartile = std::max(middle(column.upper_quartile), column.median);
  column.mean = middle(column.mean);
  column.sd = Coarse(column.sd, range, kMiddleDigits, Towards::kNearest);
}

std::vector<HistogramBin> CoarseBins(std::span<const HistogramBin> bins, std::int64_t floor) {
  const auto few = [&](const HistogramBin& bin) {
    return bin.rows > 0 && static_cast<std::int64_t>(bin.rows) < floor;
  };
  std::vector<HistogramBin> out;
  for (const HistogramBin& bin : bins) {
    if (!out.empty() && few(out.back())) {
      out.back().high = bin.high;
      out.back().rows += bin.rows;
    } else {
      out.push_back(bin);
    }
  }
  while (out.size() > 1 && few(out.back())) {
    const HistogramBin last = out.back();
    out.pop_back();
    out.back().high = last.high;
    out.back().rows += last.rows;
  }
  return out;
}

ModelResiduals CoarseResiduals(const ModelResiduals& residuals, std::int64_t rows,
                               std::int64_t floor) {
  ModelResiduals out = residuals;
  const double spread =
      residuals.quantiles.empty() ? 0 : residuals.quantiles.back() - residuals.quantiles.front();
  for (size_t i = 0; i < out.quantiles.size(); ++i) {
    const double p = kResidualProbabilities[i];
    double& quantile = out.quantiles[i];
    const bool enough =
        std::min(p, 1 - p) * static_cast<double>(rows) >= static_cast<double>(floor);
    quantile = enough ? Coarse(quantile, spread, kMiddleDigits, Towards::kNearest) : kNaN;
  }
  if (out.bins.empty()) return out;

  const size_t count = out.bins.size();
  size_t together = 1;  // of the old bins in a new one
  const auto pooled = [&](size_t first) {
    ResidualBin bin;
    double sum = 0, squares = 0;
    for (size_t i = first; i < first + together; ++i) {
      const ResidualBin& part = residuals.bins[i];
      if (part.rows == 0) continue;
      bin.rows = SumOfRows(bin.rows, part.rows);
      sum += static_cast<double>(part.rows) * part.mean;
    }
    if (bin.rows == 0) return bin;
    bin.mean = sum / static_cast<double>(bin.rows);
    for (size_t i = first; i < first + together; ++i) {
      const ResidualBin& part = residuals.bins[i];
      if (part.rows == 0) continue;
      const double apart = part.mean - bin.mean;
      squares += static_cast<double>(part.rows) * apart * apart;
      if (part.rows > 1) squares += static_cast<double>(part.rows - 1) * part.sd * part.sd;
    }
    if (bin.rows > 1) bin.sd = std::sqrt(squares / static_cast<double>(bin.rows - 1));
    return bin;
  };
  for (; together <= count; ++together) {
    if (count % together != 0) continue;
    out.bins.clear();
    for (size_t first = 0; first < count; first += together) out.bins.push_back(pooled(first));
    if (std::none_of(out.bins.begin(), out.bins.end(),
                     [&](const ResidualBin& bin) { return bin.rows > 0 && bin.rows < floor; }))
      break;
  }
  const double low = residuals.bins.front().fitted_low, high = residuals.bins.back().fitted_high;
  const double first = Coarse(low, high - low, kEndDigits, Towards::kDown);
  const double last = Coarse(high, high - low, kEndDigits, Towards::kUp);
  const double width = (last - first) / static_cast<double>(out.bins.size());
  for (size_t i = 0; i < out.bins.size(); ++i) {
    out.bins[i].fitted_low = first + static_cast<double>(i) * width;
    out.bins[i].fitted_high =
        i + 1 == out.bins.size() ? last : first + static_cast<double>(i + 1) * width;
  }
  return out;
}

}  // namespace ladderline
