// The frame of a chart with two axes: title above, names of the axes, ticks, light lines.
#ifndef LADDERLINE_CORE_CHART_PLOT_H_
#define LADDERLINE_CORE_CHART_PLOT_H_

#include <string_view>

#include "core/chart/axis.h"
#include "core/chart/svg.h"

namespace ladderline {

struct Plot {
  Axis x, y;
  double left, top, width, height;  // of the field
  double bottom;                    // of the whole chart

  double X(double value) const { return left + width * x.Place(value); }
  double Y(double value) const { return top + height * (1 - y.Place(value)); }
};

// What is to be shown: ranges with low <= high, finite.
struct PlotRange {
  double low, high;
  bool whole = false;  // ticks at whole numbers
  bool tight = false;  // the axis ends where the range does; x only
};

// Draws the frame and says where the field is. The name of y stands above its axis.
Plot DrawPlot(Svg& svg, std::string_view title, std::string_view x_name, std::string_view y_name,
              const PlotRange& x, const PlotRange& y);

// The title over the whole width, in at most three lines; where it ends.
double DrawTitle(Svg& svg, std::string_view title);

// Ticks and their labels under a horizontal line at `y`, and the axis's name; where they end.
double DrawHorizontalAxis(Svg& svg, const Axis& axis, double left, double width, double y,
                          std::string_view name);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHART_PLOT_H_
