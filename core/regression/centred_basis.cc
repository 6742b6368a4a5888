#include "core/regression/centred_basis.h"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>

#include "core/regression/triangle_solve.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

// L − L_0 c at kept column i.
DoubleDouble CentredPart(const CentredBasis& basis, std::span<const double> row, Index i) {
  const double part = row[basis.kept[i]];
  if (!basis.intercept || i == 0 || row[0] == 0) return part;
  if (row[0] == 1) return TwoSum(part, -basis.centre[i]);
  return DoubleDouble(part) - TwoProduct(row[0], basis.centre[i]);
}

DoubleDouble CentredPart(const CentredBasis& basis, std::span<const DoubleDouble> row, Index i) {
  const DoubleDouble part = row[basis.kept[i]];
  if (!basis.intercept || i == 0) return part;
  return part - row[0] * basis.centre[i];
}

// RoundedFactor without a copy.
struct PlainFactor {
  const DoubleDouble* factor;
  double operator[](Index i) const { return factor[i].hi; }
};

// Rows of T R^-1, where T takes centred coefficients to raw ones.
template <class Number>
std::vector<double> TermRows(const CentredBasis& basis, const std::vector<Number>& factor) {
  const Index rank = basis.rank();
  std::vector<double> rows(basis.columns * rank, kNaN);
  const std::vector<Number> inverse = InvertUpper(factor, rank);
  std::vector<Number> intercept_row(rank);
  for (Index i = rank - 1; i >= 0; --i) {
    double* row = rows.data() + basis.kept[i] * rank;
    const bool is_intercept = basis.intercept && i == 0;
    for (Index j = 0; j < rank; ++j) {
      const Number part = j < i ? Number(0) : inverse[PackedIndex(i, j)];
      if (is_intercept) {
        row[j] = DoubleDouble(part + intercept_row[j]).value();
      } else {
        row[j] = DoubleDouble(part).value();
        if (basis.intercept) intercept_row[j] -= part * basis.centre[i];
      }
    }
  }
  return rows;
}

template <class Number>
double EstimateOf(const CentredBasis& basis, std::span<const Number> row, double unit) {
  assert(static_cast<Index>(row.size()) == basis.columns);
  // Twice the working precision for the price of a few independent operations per term: Ogita, Rump
  // & Oishi, SIAM J. Sci. Comput. 26 (2005), algorithm Dot2.
  double sum = 0, low = 0;
  for (Index i = 0; i < basis.rank(); ++i) {
    const DoubleDouble part = CentredPart(basis, row, i);
    const DoubleDouble slope = {basis.coefficient[i].hi * unit, basis.coefficient[i].lo * unit};
    const DoubleDouble product = TwoProduct(part.hi, slope.hi);
    const DoubleDouble partial = TwoSum(sum, product.hi);
    sum = partial.hi;
    low += partial.lo + (product.lo + (part.hi * slope.lo + part.lo * slope.hi));
  }
  return sum + low;
}

template <class Number>
double EstimateOf(const CentredBasis& basis, std::span<const Number> row) {
  const double estimate = EstimateOf(basis, row, 1);
  if (!std::isnan(estimate)) return estimate;
  // Coefficients beyond 2^996 are too large for TwoProduct: measured in another unit they are not.
  constexpr double kUnit = 0x1p-128;
  return EstimateOf(basis, row, kUnit) / kUnit;
}

template <class Number>
void CoordinatesOf(const CentredBasis& basis, std::span<const Number> row,
                   std::span<double> coordinates) {
  const Index rank = basis.rank();
  assert(static_cast<Index>(row.size()) == basis.columns);
  assert(static_cast<Index>(coordinates.size()) == rank);
  if (!basis.extended) {
    for (Index i = 0; i < rank; ++i) coordinates[i] = CentredPart(basis, row, i).value();
    SolveTransposed(PlainFactor{basis.factor.data()}, rank, coordinates.data());
    return;
  }
  std::vector<DoubleDouble> a(rank);
  for (Index i = 0; i < rank; ++i) a[i] = CentredPart(basis, row, i);
  SolveTransposed(basis.factor, rank, a.data());
  for (Index i = 0; i < rank; ++i) coordinates[i] = a[i].value();
}

}  // namespace

std::vector<double> RoundedFactor(const CentredBasis& basis) {
  std::vector<double> rounded(basis.factor.size());
  std::transform(basis.factor.begin(), basis.factor.end(), rounded.begin(),
                 [](const DoubleDouble& number) { return number.hi; });
  return rounded;
}

double Estimate(const CentredBasis& basis, std::span<const double> row) {
  return EstimateOf(basis, row);
}
double Estimate(const CentredBasis& basis, std::span<const DoubleDouble> row) {
  return EstimateOf(basis, row);
}
void Coordinates(const CentredBasis& basis, std::span<const double> row,
                 std::span<double> coordinates) {
  CoordinatesOf(basis, row, coordinates);
}
void Coordinates(const CentredBasis& basis, std::span<const DoubleDouble> row,
                 std::span<double> coordinates) {
  CoordinatesOf(basis, row, coordinates);
}

std::vector<double> RawCoefficients(const CentredBasis& basis) {
  std::vector<double> raw(basis.columns, kNaN);
  std::vector<double> unit(basis.columns);
  for (Index column : basis.kept) {
    unit[column] = 1;
    raw[column] = Estimate(basis, unit);
    unit[column] = 0;
  }
  return raw;
}

std::vector<double> TermCoordinates(const CentredBasis& basis) {
  if (basis.extended) return TermRows(basis, basis.factor);
  return TermRows(basis, RoundedFactor(basis));
}

}  // namespace ladderline
