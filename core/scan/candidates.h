// The re-expressions that are tried on a measure.
//
//   identity, and the plain powers −2, −1, −½, 0, ⅓, ½, 2, 3 by their plain names: always
//   box_cox λ           λ as estimated, for positive values
//   yeo_johnson λ       λ as estimated
//   log_offset 1, sqrt_offset 0.375    for counts: whole values of 0 or more. The second steadies
//                       the spread of Poisson counts (Anscombe, Biometrika 35, 1948)
//   log_offset OFFSET   where zeros occur: the offset of zero skewness (offset_choice.h)
//   asinh_scaled θ      1/θ is the median size of the values other than 0, to two digits: below it
//                       the curve is nearly straight, above nearly a logarithm
//   logit LOW HIGH INSET    for values that fill a natural range: 0..1 with values between the
//                       ends, or 0..100 with values above 50. Where an end occurs, the inset is
//                       half the least distance between an end and the other values, to two digits
//                       (common practice, as half the least value is added before a logarithm)
//   log_reflected TOP   for a skewness of −½ or less: of whole values 1 above the ceiling, which is
//                       100 in that natural range, else the largest value; of others the end of
//                       the natural range above them, else the top of zero skewness
#ifndef LADDERLINE_CORE_SCAN_CANDIDATES_H_
#define LADDERLINE_CORE_SCAN_CANDIDATES_H_

#include <limits>
#include <optional>
#include <span>
#include <vector>

#include "core/transform/transform.h"

namespace ladderline {

struct Candidate {
  Transform transform;
  // As a power of the value itself, 0 standing for its logarithm; NaN for other re-expressions.
  double power = std::numeric_limits<double>::quiet_NaN();
  int estimated = 0;  // how many of its numbers were taken from the data

  // Leaves the measure alone.
  bool IsIdentity() const { return transform.kind() == TransformKind::kIdentity; }
};

// What the choice of candidates looks at.
struct MeasureFacts {
  double least = 0, largest = 0;
  bool zeros = false;
  bool whole = false;  // all are whole numbers
  double skewness = 0;
  // The share of the rows that hold the least or the largest value, whichever is more, and that
  // value.
  double heap_share = 0, heap = 0;
};
// Of one or more finite values.
MeasureFacts FactsOfMeasure(std::span<const double> values);

//   values            one or more, finite
//   box_cox           λ as estimated; read for positive values only
//   yeo_johnson       likewise
//   cost              for zeros or a tail to the left a search for an offset
std::vector<Candidate> CandidatesFor(std::span<const double> values, const MeasureFacts& facts,
                                     std::optional<double> box_cox,
                                     std::optional<double> yeo_johnson);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SCAN_CANDIDATES_H_
