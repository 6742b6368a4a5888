// A small regression from cross-products alone, for columns near enough to orthonormal.
#ifndef LADDERLINE_CORE_CHECKS_GRAM_REGRESSION_H_
#define LADDERLINE_CORE_CHECKS_GRAM_REGRESSION_H_

#include <span>
#include <vector>

#include "core/regression/centred_basis.h"

namespace ladderline {

struct Explained {
  Index rank = 0;             // columns that carry something of their own
  double sum_of_squares = 0;  // of the response, explained by them
};

// Decided in column order: a column that the earlier ones explain but for 1e-11 of its own sum of
// squares is a repeat and is left out. An exact repeat leaves about 1e-15.
//   gram   cross-products of the columns, packed
//   cross  their cross-products with the response
//   size   their sums of squares before anything was taken out of them: the diagonal of `gram`, or
//          more where the caller has already taken other columns out
//   accuracy  1e-16 divided by the smallest share that is left of a column
Explained ExplainFromGram(std::vector<double> gram, std::vector<double> cross,
                          std::span<const double> size);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_GRAM_REGRESSION_H_
