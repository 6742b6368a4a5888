#include "core/checks/projection_sums.h"

#include "core/regression/column_kernels.h"
#include "core/regression/triangle_solve.h"

namespace ladderline {

ProjectionSums::ProjectionSums(const CentredBasis& basis)
    : basis_(basis), sums_(basis.kept.size()), shift_(basis.kept.size()) {}

void ProjectionSums::Add(const CheckBlock& block, const double* u) {
  total_ += SumOver(
      block.rows, [=](Index i) { return LoadPair(u + i); }, [=](Index i) { return u[i]; });
  for (std::size_t j = basis_.intercept; j < sums_.size(); ++j) {
    const Index c = BlockColumn(basis_, basis_.kept[j]);
    sums_[j] += Dot(block.x[c], u, block.rows);
    shift_[j] = block.shift[c];
  }
}

std::vector<double> ProjectionSums::Coordinates() const {
  const Index rank = basis_.rank();
  std::vector<double> coordinates(rank);
  for (Index j = 0; j < rank; ++j) {
    const bool ones = basis_.intercept && j == 0;
    const DoubleDouble sum =
        ones ? total_ : sums_[j] + total_ * (DoubleDouble(shift_[j]) - basis_.centre[j]);
    coordinates[j] = sum.value();
  }
  std::vector<double> factor;
  for (const DoubleDouble& entry : basis_.factor) factor.push_back(entry.value());
  SolveTransposed(factor, rank, coordinates.data());
  return coordinates;
}

}  // namespace ladderline
