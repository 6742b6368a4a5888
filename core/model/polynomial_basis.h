// A polynomial of a number as a fit takes it: columns p_1 … p_d that span x … x^d, and are nearly
// orthogonal over the range x was seen in, however far that is from 0.
//
//   next to an intercept   p_k = T_k(u), Chebyshev's polynomials, u = (x − middle) / half the range
//   without                p_k = (x / largest |x|) T_{k−1}(u), so that no constant comes in
// A range of one value gives u = ±1 (0 for the value 0).
//   accuracy  plain columns err by a few k² units in the last place of 1, extended ones by as much
//             of 2^-104
//   cost      2 flops per row and column, 60 extended
#ifndef LADDERLINE_CORE_MODEL_POLYNOMIAL_BASIS_H_
#define LADDERLINE_CORE_MODEL_POLYNOMIAL_BASIS_H_

#include <cstddef>
#include <vector>

#include "core/support/double_double.h"

namespace ladderline {

inline constexpr int kHighestDegree = 20;

class PolynomialBasis {
 public:
  // low ≤ high, finite: the range of x; degree 1..kHighestDegree.
  PolynomialBasis(double low, double high, int degree, bool intercept);

  int degree() const { return degree_; }
  // p_k(x), 1 ≤ k ≤ degree.
  double Value(double x, int k) const;
  DoubleDouble ValueExtended(double x, int k) const;
  // values[k − 1] = p_k(x) for every k.
  void Values(double x, double* values) const;
  // columns[k − 1][i] = p_k(x[i]) for i < n.
  void Fill(const double* x, std::size_t n, double* const* columns) const;
  // The same as the unevaluated sums of two columns.
  void FillExtended(const double* x, std::size_t n, double* const* high, double* const* low) const;

  // For the two tables below x is measured in 2^unit_exponent(), so that |x| ≤ 1.
  int unit_exponent() const { return exponent_; }
  // [j][k]: the coefficient of x^k in p_j, 0 ≤ j, k ≤ degree; p_0 = 1.
  std::vector<std::vector<DoubleDouble>> InPowers() const;
  // [k][j]: that of p_j in x^k.
  std::vector<std::vector<DoubleDouble>> OfPowers() const;
  // The same polynomials over another range, next to an intercept or not as these:
  // [j][k]: the coefficient of p_k of `other` in p_j, 0 ≤ j, k ≤ degree.
  std::vector<std::vector<DoubleDouble>> In(const PolynomialBasis& other) const;

 private:
  double middle_, half_, largest_;
  int degree_;
  bool intercept_;
  int exponent_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_POLYNOMIAL_BASIS_H_
