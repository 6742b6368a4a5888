// Q'u: the coordinates of a column u in the orthonormal columns of a fit, u being shown run by run.
//
// By linearity R^-T (Σ d u) takes one multiplication per design column and row, and a solve at the
// end.
#ifndef LADDERLINE_CORE_CHECKS_PROJECTION_SUMS_H_
#define LADDERLINE_CORE_CHECKS_PROJECTION_SUMS_H_

#include <vector>

#include "core/checks/check_block.h"
#include "core/regression/centred_basis.h"

namespace ladderline {

class ProjectionSums {
 public:
  // `basis` must outlive this; its columns are the source's, or those after an added intercept.
  explicit ProjectionSums(const CentredBasis& basis);

  // `u` has block.rows numbers. For a weighted basis, whose orthonormal columns are √w R^-T d, it
  // must be given multiplied by √w.
  void Add(const CheckBlock& block, const double* u);
  // `rank` numbers.
  std::vector<double> Coordinates() const;

 private:
  const CentredBasis& basis_;
  std::vector<DoubleDouble> sums_;  // Σ x u, per column of the blocks that the basis keeps
  DoubleDouble total_;              // Σ u
  std::vector<double> shift_;
};

// The block column that holds column `column` of a basis.
inline Index BlockColumn(const CentredBasis& basis, Index column) {
  return basis.intercept ? column : column + 1;
}

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_PROJECTION_SUMS_H_
