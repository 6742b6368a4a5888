// The offset that makes the logarithms ln(x + offset) of a column have zero skewness.
//
// With c = least value + offset, the logarithm of the least value is ln c. As c falls to 0, that
// value (or the k of n rows that hold it) ends up far below all others, and the skewness tends to
// (2k − n)/√(k (n − k)); as c grows, the logarithm becomes a straight line and the skewness that of
// x itself. In between it only rises: ln(x + b) is an increasing convex function of ln(x + a) for
// b > a, and such a function cannot lower the skewness. So the offset, where there is one, is the
// only one, and it exists exactly for three or more distinct values of which fewer than half of the
// rows hold the least, skewed to the right.
//   search    for ln c, from the mean distance to the least value outwards until the sign changes,
//             then inside that bracket (Boost.Math, TOMS 748); long columns start from the root of
//             a systematic sample. Between the smallest normal c and 1e12 times the range: further
//             out no skewness is left that rounding would not bring about.
//   accuracy  c to 1e-11 relative (where c exceeds the range, to 1e-15 c/range if that is more)
//   source    van Zwet, Convex Transformations of Random Variables (1964), on convex functions and
//             skewness
#ifndef LADDERLINE_CORE_PROFILE_OFFSET_CHOICE_H_
#define LADDERLINE_CORE_PROFILE_OFFSET_CHOICE_H_

#include <vector>

#include "core/support/result.h"

namespace ladderline {

// The offset; every value + offset is above 0. The same bits in whatever order the values come.
//   domain  finite values, negative ones and zeros too, over the whole range of doubles
//   errors  no such offset; the words are a clause that says why: no values, fewer than three
//           distinct ones, half of the rows or more at the least value, no skewness to the right
//   cost    sorting, and ten passes with one logarithm a value
Result<double> ChooseLogOffset(std::vector<double> values);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_PROFILE_OFFSET_CHOICE_H_
