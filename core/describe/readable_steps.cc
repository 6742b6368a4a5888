#include "core/describe/readable_steps.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>
#include <span>
#include <string>

#include "core/support/text.h"

namespace ladderline {

double Decimal::Times(std::int64_t factor) const {
  const auto value = ParseNumber(std::to_string(digits * factor) + "e" + std::to_string(exponent));
  return value.value_or(std::copysign(std::numeric_limits<double>::max(), factor));
}

namespace {

// Calls f for each value while it returns true; whether it always did.
template <class F>
bool ForAll(const BlockedColumn& values, F f) {
  for (std::size_t b = 0; b < values.blocks(); ++b) {
    const std::span<const double> block = values.block(b);
    if (!std::all_of(block.begin(), block.end(), f)) return false;
  }
  return true;
}

}  // namespace

std::optional<Decimal> StepOf(const BlockedColumn& values) {
  constexpr int kMostPlaces = 6;
  constexpr double kExactIntegers = 0x1p53;
  double unit = 1;
  for (int places = 0; places <= kMostPlaces; ++places, unit *= 10) {
    const auto in_units = [&](double x) { return std::nearbyint(x * unit); };
    if (!ForAll(values, [&](double x) {
          return std::abs(x) * unit < kExactIntegers && in_units(x) / unit == x;
        }))
      continue;
    std::optional<std::int64_t> first;
    std::int64_t step = 0;
    ForAll(values, [&](double x) {
      const auto whole = static_cast<std::int64_t>(in_units(x));
      if (!first) first = whole;
      step = std::gcd(step, whole - *first);
      return step != 1;
    });
    return Decimal{step, -places};
  }
  return std::nullopt;
}

Decimal ReadableMultiple(Decimal unit, int i) {
  if (i < 3) return {unit.digits * (i == 2 ? 5 : i + 1), unit.exponent};
  constexpr Decimal kDecade[] = {{1, 1}, {2, 1}, {25, 0}, {5, 1}};
  const Decimal& multiple = kDecade[(i - 3) % 4];
  return {unit.digits * multiple.digits, unit.exponent + multiple.exponent + (i - 3) / 4};
}

std::vector<double> EdgesAround(double least, double largest, Decimal width, bool may_touch,
                                std::size_t most) {
  auto at = static_cast<std::int64_t>(std::floor(least / width.Times(1)));
  // The quotient may be rounded across a whole number, or several where it exceeds 2^53.
  while (width.Times(at) > least) --at;
  while (width.Times(at + 1) <= least) ++at;
  std::vector<double> edges;
  do {
    if (edges.size() == most + 1) return {};
    edges.push_back(width.Times(at++));
  } while (edges.back() < largest || (edges.back() == largest && !may_touch));
  return edges;
}

std::vector<double> ReadableEdges(double least, double largest, double wanted,
                                  std::optional<Decimal> step, std::size_t most) {
  // Without a step, the power of ten one digit below the width, if a double can be so small.
  constexpr int kLeastExponent = -323;
  const Decimal unit =
      step ? *step
           : Decimal{
                 1, std::max(static_cast<int>(std::floor(std::log10(wanted))) - 1, kLeastExponent)};
  int i = 0;
  while (ReadableMultiple(unit, i).Times(1) < wanted) ++i;
  if (i > 0 &&
      wanted / ReadableMultiple(unit, i - 1).Times(1) < ReadableMultiple(unit, i).Times(1) / wanted)
    --i;
  // The largest value may share the last bin as its end where that does not tip it.
  std::vector<double> edges;
  for (; edges.empty(); ++i)
    edges =
        EdgesAround(least, largest, ReadableMultiple(unit, i), !step || i >= kPlaceOfTwenty, most);
  edges.erase(std::unique(edges.begin(), edges.end()), edges.end());
  return edges;
}

}  // namespace ladderline
