#include "core/chart/axis.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <optional>

#include "core/chart/svg.h"
#include "core/describe/readable_steps.h"
#include "core/support/prose.h"

namespace ladderline {
namespace {

constexpr double kLargest = std::numeric_limits<double>::max();

// A range of some width around one value.
void Widen(double& low, double& high) {
  if (low < high) return;
  const double value = low, room = value == 0 ? 1 : std::abs(value) / 10;
  low = std::clamp(value - room, -kLargest, kLargest);
  high = std::clamp(value + room, -kLargest, kLargest);
  // Of the least numbers a tenth is nothing.
  if (!(low < high)) high = std::nextafter(value, kLargest);
}

std::vector<double> TicksAround(double low, double high, std::size_t most, bool whole) {
  const auto steps = static_cast<double>(most);
  const double wanted =
      std::max(high / steps - low / steps, std::numeric_limits<double>::denorm_min());
  const std::optional<Decimal> step = whole ? std::optional(Decimal{1, 0}) : std::nullopt;
  std::vector<double> ticks =
      ReadableEdges(low, high, whole ? std::max(wanted, 1.0) : wanted, step, most);
  // An edge keeps a last bin open, an axis may end at its highest value.
  if (ticks.size() > 2 && ticks[ticks.size() - 2] >= high) ticks.pop_back();
  return ticks;
}

}  // namespace

double Axis::Place(double value) const {
  const double range = high - low;
  if (std::isfinite(range)) return (value - low) / range;
  return (value / 2 - low / 2) / (high / 2 - low / 2);
}

Axis RoundAxis(double low, double high, std::size_t most, bool whole) {
  Widen(low, high);
  Axis axis{low, high, TicksAround(low, high, most, whole)};
  axis.low = std::min(low, axis.ticks.front());
  axis.high = std::max(high, axis.ticks.back());
  return axis;
}

Axis TightAxis(double low, double high, std::size_t most) {
  Widen(low, high);
  Axis axis{low, high, TicksAround(low, high, most, false)};
  std::erase_if(axis.ticks, [&](double tick) { return tick < low || tick > high; });
  return axis;
}

std::vector<PlacedTick> PlaceTicks(const Axis& axis, double left, double width, bool* fits) {
  constexpr double kApart = 8;
  std::vector<PlacedTick> ticks;
  double end = -kApart;  // of the label before
  bool all = true;
  for (const double tick : axis.ticks) {
    PlacedTick placed;
    placed.x = left + width * axis.Place(tick);
    placed.label = PlainNumber(tick);
    const double half = TextWidth(placed.label, kTextSize) / 2;
    placed.label_x = std::clamp(placed.x, half, std::max(half, kChartWidth - half));
    if (placed.label_x - half < end + kApart) {
      placed.label.clear();
      all = false;
    } else {
      end = placed.label_x + half;
    }
    ticks.push_back(std::move(placed));
  }
  if (fits != nullptr) *fits = all;
  return ticks;
}

}  // namespace ladderline
