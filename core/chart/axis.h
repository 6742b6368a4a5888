// The axis of a chart: what range it shows, where its ticks stand, which of their labels fit.
#ifndef LADDERLINE_CORE_CHART_AXIS_H_
#define LADDERLINE_CORE_CHART_AXIS_H_

#include <cstddef>
#include <string>
#include <vector>

namespace ladderline {

struct Axis {
  double low, high;           // low < high, finite
  std::vector<double> ticks;  // rising, within the range

  // How far along the axis a value lies, 0 at low and 1 at high.
  double Place(double value) const;
};

// An axis that ends at ticks, with at most `most` (2 or more) steps between them of readable size;
// whole ones where `whole`. A range of one value is widened to both sides.
//   low <= high, finite
Axis RoundAxis(double low, double high, std::size_t most, bool whole = false);

// One that ends where the range does.
Axis TightAxis(double low, double high, std::size_t most);

// A tick of a horizontal axis; the label is empty where it would touch another.
struct PlacedTick {
  double x;
  double label_x;  // its middle
  std::string label;
};

// The ticks of an axis from `left`, `width` pixels long, their labels within 0..kChartWidth.
// `fits`, if given, says whether every tick has its label.
std::vector<PlacedTick> PlaceTicks(const Axis& axis, double left, double width,
                                   bool* fits = nullptr);

// The first of make(most) with most = 6, 5, … 2 whose labels all fit, else the last.
template <class Make>
Axis FittingAxis(double left, double width, Make make) {
  for (std::size_t most = 6;; --most) {
    Axis axis = make(most);
    bool fits = false;
    PlaceTicks(axis, left, width, &fits);
    if (fits || most == 2) return axis;
  }
}

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHART_AXIS_H_
