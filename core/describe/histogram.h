// Counts of values in bins, and a sketch of them for a screen of plain text.
#ifndef LADDERLINE_CORE_DESCRIBE_HISTOGRAM_H_
#define LADDERLINE_CORE_DESCRIBE_HISTOGRAM_H_

#include <cstddef>
#include <span>
#include <string>
#include <vector>

#include "core/describe/quantiles.h"

namespace ladderline {

// low <= x < high; of the last bin, low <= x <= high.
struct HistogramBin {
  double low;
  double high;
  std::size_t rows;
};

inline constexpr std::size_t kMostChosenBins =
    40;                                         // of a histogram that chooses its bins: a screen
inline constexpr std::size_t kMostBins = 1000;  // that can be asked for

// Bins of equal width that cover the values of a column, empty ones included.
//
// The width is that of Freedman & Diaconis, 2 · IQR / ∛n, rounded to a readable one (1, 2, 2.5 or 5
// times a power of ten), with edges at its multiples, for 2 to some kMostChosenBins bins. Values
// that are all multiples of a step (whole numbers, cents, weeks in days) get a width that is a
// multiple of it, so that each bin has room for as many of them. Where so many values are equal
// that the quartiles are, the eighths, sixteenths … stand in for them, scaled as for normal data.
//   ascending  finite values in order, of any size and spread
//   empty      no bins; one row or a constant column: one bin from the value to itself
//   cost       O(n) of a pass that looks for the step, O(bins · log n) else
//   source     Freedman & Diaconis, "On the histogram as a density estimator: L2 theory",
//   Zeitschrift
//              für Wahrscheinlichkeitstheorie 57 (1981)
std::vector<HistogramBin> Histogram(std::span<const double> ascending);

// The same in `bins` (1 to kMostBins) of equal width from the least value to the largest. Fewer
// where the values lie so close that doubles cannot tell the edges apart.
std::vector<HistogramBin> Histogram(std::span<const double> ascending, std::size_t bins);

// Bins of readable width for values in any order that are only read: as many as such a width allows
// up to `most` (2 to kMostBins). Edges are as above: of a single value they tell no more than
// between which two multiples of the width it lies.
//   values  finite, of any size and spread; empty, one row and a constant column as above
//   cost    two passes, some 2 ns a value; a third where the values are multiples of a coarse step
std::vector<HistogramBin> Histogram(const BlockedColumn& values, std::size_t most);

inline constexpr std::size_t kSketchWidth = 40;

// A bar for `rows`, kSketchWidth characters long for `most` (1 or more); a dot for a few rows.
std::string HistogramBar(std::size_t rows, std::size_t most);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_HISTOGRAM_H_
