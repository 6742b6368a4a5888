#include "core/scan/candidates.h"

#include <algorithm>
#include <cmath>
#include <initializer_list>

#include "core/describe/moments.h"
#include "core/describe/quantiles.h"
#include "core/profile/lambda_profile.h"
#include "core/profile/offset_choice.h"
#include "core/support/prose.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

double ToTwoDigits(double number) { return ParseNumber(Rounded(number, 2)).value_or(number); }

// 0..1 or 0..100, if the values fill one of them.
struct NaturalRange {
  double high = 0;  // 0: none
  explicit NaturalRange(std::span<const double> values, const MeasureFacts& facts) {
    if (facts.least < 0) return;
    if (facts.largest <= 1) {
      const auto inside = [](double x) { return x > 0 && x < 1; };
      if (std::any_of(values.begin(), values.end(), inside)) high = 1;
    } else if (facts.largest > 50 && facts.largest <= 100) {
      high = 100;
    }
  }
};

// Half the least distance of a value to an end it does not stand at, as a share of the range.
double InsetFor(std::span<const double> values, double high) {
  double gap = high;
  for (const double x : values) {
    if (x > 0) gap = std::min(gap, x);
    if (x < high) gap = std::min(gap, high - x);
  }
  return std::clamp(ToTwoDigits(gap / high / 2), 1e-12, 0.25);
}

class List {
 public:
  void Add(TransformKind kind, std::initializer_list<double> arguments, int estimated = 0,
           double power = std::numeric_limits<double>::quiet_NaN()) {
    const std::optional<Transform> transform =
        Transform::TryMake(kind, {arguments.begin(), arguments.size()});
    if (!transform) return;
    for (const Candidate& earlier : candidates_)
      if (earlier.transform == *transform) return;
    candidates_.push_back({*transform, power, estimated});
  }
  std::vector<Candidate> Take() { return std::move(candidates_); }

 private:
  std::vector<Candidate> candidates_;
};

}  // namespace

MeasureFacts FactsOfMeasure(std::span<const double> values) {
  MeasureFacts facts{.least = values[0], .largest = values[0], .whole = true};
  PowerSums<3> sums;
  for (const double x : values) {
    facts.least = std::min(facts.least, x);
    facts.largest = std::max(facts.largest, x);
    facts.zeros |= x == 0;
    facts.whole &= x == std::floor(x);
    sums.Add(x);
  }
  facts.skewness = Skewness(sums.Summarise());
  for (const double end : {facts.least, facts.largest}) {
    const auto rows = static_cast<double>(std::count(values.begin(), values.end(), end));
    const double share = rows / static_cast<double>(values.size());
    if (share <= facts.heap_share) continue;
    facts.heap_share = share;
    facts.heap = end;
  }
  return facts;
}

std::vector<Candidate> CandidatesFor(std::span<const double> values, const MeasureFacts& facts,
                                     std::optional<double> box_cox,
                                     std::optional<double> yeo_johnson) {
  using Kind = TransformKind;
  List list;
  list.Add(Kind::kIdentity, {}, 0, 1);
  list.Add(Kind::kPowerOf, {-2}, 0, -2);
  list.Add(Kind::kNegativeReciprocal, {}, 0, -1);
  list.Add(Kind::kPowerOf, {-0.5}, 0, -0.5);
  list.Add(Kind::kLogOffset, {}, 0, 0);
  list.Add(Kind::kPowerOf, {1.0 / 3}, 0, 1.0 / 3);
  list.Add(Kind::kSqrtOffset, {}, 0, 0.5);
  list.Add(Kind::kSquare, {}, 0, 2);
  list.Add(Kind::kPowerOf, {3}, 0, 3);
  if (facts.least > 0 && box_cox) list.Add(Kind::kBoxCox, {*box_cox}, 1, *box_cox);
  if (yeo_johnson) list.Add(Kind::kYeoJohnson, {*yeo_johnson}, 1);

  if (facts.whole && facts.least >= 0) {
    list.Add(Kind::kLogOffset, {1});
    list.Add(Kind::kSqrtOffset, {0.375});
  }
  if (facts.zeros) {
    const Result<double> offset = ChooseLogOffset({values.begin(), values.end()});
    if (offset.ok()) list.Add(Kind::kLogOffset, {offset.value()}, 1);
  }
  std::vector<double> sizes;
  for (const double x : values)
    if (x != 0) sizes.push_back(std::abs(x));
  if (!sizes.empty()) {
    constexpr double kHalf[] = {0.5};
    list.Add(Kind::kAsinhScaled, {ToTwoDigits(1 / Quantiles(SpanColumn(sizes), kHalf)[0])}, 1);
  }

  const NaturalRange natural(values, facts);
  if (natural.high > 0) {
    if (facts.least == 0 || facts.largest == natural.high) {
      list.Add(Kind::kLogit, {0, natural.high, InsetFor(values, natural.high)}, 1);
    } else {
      list.Add(Kind::kLogit, {0, natural.high});
    }
  }
  constexpr double kLeftTail = -0.5;
  if (facts.skewness <= kLeftTail) {
    if (facts.whole) {
      const bool known = natural.high == 100;
      list.Add(Kind::kLogReflected, {(known ? 100 : facts.largest) + 1}, known ? 0 : 1);
    } else if (natural.high > 0 && natural.high > facts.largest) {
      list.Add(Kind::kLogReflected, {natural.high});
    } else {
      std::vector<double> mirrored;
      for (const double x : values) mirrored.push_back(-x);
      const Result<double> top = ChooseLogOffset(std::move(mirrored));
      if (top.ok()) list.Add(Kind::kLogReflected, {top.value()}, 1);
    }
  }
  return list.Take();
}

}  // namespace ladderline
