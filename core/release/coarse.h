// Figures of single rows made coarse: rounded, or put together until each stands for enough rows.
#ifndef LADDERLINE_CORE_RELEASE_COARSE_H_
#define LADDERLINE_CORE_RELEASE_COARSE_H_

#include <cstdint>
#include <span>
#include <vector>

#include "core/model/model.h"

namespace ladderline {

// Of counts, held at the end of the range.
std::int64_t SumOfRows(std::int64_t a, std::int64_t b);

// The next multiple of `floor`; a count of 0 stays, and so does one without a next multiple.
std::int64_t RoundedUp(std::int64_t count, std::int64_t floor);

enum class Towards { kDown, kUp, kNearest };
// A value rounded to so many significant digits, of itself or of `range` where that is smaller: the
// decimal place is that of the last digit of min(|value|, range). 0 stays, and no sign changes.
double Coarse(double value, double range, int digits, Towards towards);

// Least, quartiles and largest of a column: the ends outwards to 2 digits and then to a multiple of
// a step, 1, 2 or 5 times a power of ten, that is at least 1/20 of their range; the others, the
// mean and the sd to 3 digits. Where that leaves the domain of its transform (0 under a logarithm,
// or as a weight), a low end goes to the next such step below itself, and what has none to more
// digits. A column of one value keeps it, and so do ends that are such multiples, as those of whole
// numbers over a range of 20 or less are.
void CoarsenRange(ModelColumn& column);

// Bins in order, neighbours put together until each has no row or at least `floor`.
std::vector<HistogramBin> CoarseBins(std::span<const HistogramBin> bins, std::int64_t floor);

// Quantiles beyond which fewer than `floor` of `rows` rows lie are NaN, the others have 3 digits.
// Bins of the fitted values, as many and as wide as each other, become fewer until each has no row
// or at least `floor`; the ends of the fitted range go outwards to 2 digits of its width, which
// moves the edges between by as much.
ModelResiduals CoarseResiduals(const ModelResiduals& residuals, std::int64_t rows,
                               std::int64_t floor);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_RELEASE_COARSE_H_
