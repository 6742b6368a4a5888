#include "core/regression/collinearity.h"

#include <Eigen/Dense>
#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>

#include "core/elementary/elementary.h"
#include "core/regression/householder.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

double LargestSingularValue(const Eigen::MatrixXd& matrix) {
  const Eigen::MatrixXd square = matrix * matrix.transpose();
  const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> solver(square, Eigen::EigenvaluesOnly);
  return std::sqrt(solver.eigenvalues().maxCoeff());
}

}  // namespace

double ConditionNumber(const CentredBasis& basis) {
  const Index rank = basis.rank();
  if (rank == 0) return kNaN;
  // The raw columns are the centred ones plus centres times the ones, which changes nothing but
  // the first row of the factor.
  Eigen::MatrixXd r = Eigen::MatrixXd::Zero(rank, rank);
  for (Index j = 0; j < rank; ++j) {
    for (Index i = 0; i <= j; ++i) r(i, j) = basis.factor[PackedIndex(i, j)].hi;
    if (basis.intercept && j > 0) r(0, j) += basis.centre[j] * basis.factor[0].hi;
    r.col(j) /= r.col(j).stableNorm();
  }
  // The smallest singular value as the largest of the inverse: a triangle's inverse keeps digits
  // that the small end of a decomposition loses.
  const Eigen::MatrixXd inverse =
      r.triangularView<Eigen::Upper>().solve(Eigen::MatrixXd::Identity(rank, rank));
  return LargestSingularValue(r) * LargestSingularValue(inverse);
}

double ConditionNumber(const CentredBasis& basis, const RawColumns& raw) {
  if (raw.empty()) return ConditionNumber(basis);
  const Index rank = basis.rank();
  if (rank == 0) return kNaN;
  // Columns of unit length, and the rows of their inverse: the coefficients' functionals.
  Eigen::MatrixXd r(rank, rank), inverse(rank, rank);
  std::vector<double> coordinates(static_cast<std::size_t>(rank));
  for (Index j = 0; j < rank; ++j) {
    const RawColumn& column =
        raw[static_cast<std::size_t>(basis.kept[static_cast<std::size_t>(j)])];
    const std::vector<double> direction = RawDirection(basis, column);
    r.col(j) = Eigen::Map<const Eigen::VectorXd>(direction.data(), rank);
    const double length = r.col(j).stableNorm();
    r.col(j) /= length;
    RawCoordinates(basis, column, coordinates);
    inverse.row(j) = length * Eigen::Map<const Eigen::RowVectorXd>(coordinates.data(), rank);
  }
  return LargestSingularValue(r) * LargestSingularValue(inverse);
}

double VarianceInflation(const CentredBasis& basis, const RawColumn& raw) {
  const Index rank = basis.rank(), first_row = basis.intercept ? 1 : 0;
  const std::vector<double> direction = RawDirection(basis, raw);
  std::vector<double> coordinates(static_cast<std::size_t>(rank));
  RawCoordinates(basis, raw, coordinates);
  const double length =
      Eigen::Map<const Eigen::VectorXd>(direction.data(), rank).tail(rank - first_row).stableNorm();
  const double both =
      length * Eigen::Map<const Eigen::VectorXd>(coordinates.data(), rank).stableNorm();
  return both * both;
}

std::vector<double> VarianceInflation(const CentredBasis& basis,
                                      std::span<const std::vector<Index>> groups) {
  const Index rank = basis.rank();
  // Squares about the means leave out the intercept's row.
  const Index first_row = basis.intercept ? 1 : 0;
  const std::vector<double> terms = TermCoordinates(basis);
  std::vector<double> result;
  for (const std::vector<Index>& group : groups) {
    // GVIF = det(X_S'X_S) · det((X'X)^-1_SS), and both are squares of triangular determinants: of
    // the group's columns of R, and of its rows of R^-1. Scaling one up and the other down by the
    // same power of two changes nothing.
    std::vector<double> r, a;
    Index df = 0;
    for (Index column : group) {
      assert(!(basis.intercept && column == 0));
      const auto kept = std::lower_bound(basis.kept.begin(), basis.kept.end(), column);
      if (kept == basis.kept.end() || *kept != column) continue;
      const Index position = kept - basis.kept.begin();
      const double* term = terms.data() + column * rank;
      const int exponent = SizeExponent(term, rank);
      for (Index i = 0; i < rank; ++i) a.push_back(std::ldexp(term[i], -exponent));
      for (Index i = first_row; i < rank; ++i) {
        r.push_back(i > position ? 0
                                 : std::ldexp(basis.factor[PackedIndex(i, position)].hi, exponent));
      }
      ++df;
    }
    double inflation = df > 0 ? 1 : kNaN;
    Triangularise(rank - first_row, df, r.data(), rank - first_row);
    Triangularise(rank, df, a.data(), rank);
    for (Index j = 0; j < df; ++j) {
      const double both = std::abs(r[j * (rank - first_row) + j] * a[j * rank + j]);
      inflation *= df == 1 ? both * both : Pow(both, 2 / static_cast<double>(df));
    }
    result.push_back(inflation);
  }
  return result;
}

}  // namespace ladderline
