#include "core/model/polynomial_basis.h"

#include <algorithm>
#include <array>
#include <cassert>
#include <cmath>

namespace ladderline {
namespace {

// The polynomials q_0 … q_count−1 of one row by their recurrence: q_1 = u q_0, q_n+1 = 2 u q_n −
// q_n−1.
template <class Number, class Take>
void Recur(Number q, Number u, int count, Take&& take) {
  take(0, q);
  if (count == 1) return;
  Number before = q;
  q = u * q;
  take(1, q);
  const Number twice = u * 2;
  for (int n = 2; n < count; ++n) {
    const Number next = twice * q - before;
    before = q;
    q = next;
    take(n, q);
  }
}

using Coefficients = std::vector<DoubleDouble>;

}  // namespace

PolynomialBasis::PolynomialBasis(double low, double high, int degree, bool intercept)
    : middle_(low / 2 + high / 2),
      half_(high / 2 - low / 2),
      largest_(std::max(std::abs(low), std::abs(high))),
      degree_(degree),
      intercept_(intercept) {
  assert(low <= high && degree >= 1 && degree <= kHighestDegree);
  if (largest_ == 0) largest_ = 1;
  if (!(half_ > 0)) {
    middle_ = 0;
    half_ = largest_;
  }
  std::frexp(largest_, &exponent_);
}

double PolynomialBasis::Value(double x, int k) const {
  double value = 0;
  const double u = (x - middle_) / half_;
  const int count = intercept_ ? k + 1 : k;
  Recur(intercept_ ? 1 : x / largest_, u, count, [&](int, double q) { value = q; });
  return value;
}

DoubleDouble PolynomialBasis::ValueExtended(double x, int k) const {
  DoubleDouble value;
  const DoubleDouble u = TwoSum(x, -middle_) / half_;
  const DoubleDouble first = intercept_ ? DoubleDouble(1) : DoubleDouble(x) / largest_;
  Recur(first, u, intercept_ ? k + 1 : k, [&](int, DoubleDouble q) { value = q; });
  return value;
}

void PolynomialBasis::Values(double x, double* values) const {
  std::array<double*, kHighestDegree> columns;
  for (int k = 0; k < degree_; ++k) columns[static_cast<std::size_t>(k)] = values + k;
  Fill(&x, 1, columns.data());
}

void PolynomialBasis::Fill(const double* x, std::size_t n, double* const* columns) const {
  const int skipped = intercept_ ? 1 : 0;
  for (std::size_t i = 0; i < n; ++i) {
    const double u = (x[i] - middle_) / half_;
    Recur(intercept_ ? 1 : x[i] / largest_, u, degree_ + skipped, [&](int k, double q) {
      if (k >= skipped) columns[k - skipped][i] = q;
    });
  }
}

void PolynomialBasis::FillExtended(const double* x, std::size_t n, double* const* high,
                                   double* const* low) const {
  const int skipped = intercept_ ? 1 : 0;
  for (std::size_t i = 0; i < n; ++i) {
    const DoubleDouble u = TwoSum(x[i], -middle_) / half_;
    const DoubleDouble first = intercept_ ? DoubleDouble(1) : DoubleDouble(x[i]) / largest_;
    Recur(first, u, degree_ + skipped, [&](int k, DoubleDouble q) {
      if (k < skipped) return;
      high[k - skipped][i] = q.hi;
      low[k - skipped][i] = q.lo;
    });
  }
}

std::vector<Coefficients> PolynomialBasis::InPowers() const {
  const double middle = std::ldexp(middle_, -exponent_), half = std::ldexp(half_, -exponent_);
  const auto size = static_cast<std::size_t>(degree_) + 1;
  const auto times_u = [&](const Coefficients& a, double factor) {
    Coefficients product(size);
    for (std::size_t k = 0; k < size; ++k) {
      const DoubleDouble shifted = k == 0 ? DoubleDouble() : a[k - 1];
      product[k] = (shifted - a[k] * middle) * factor / half;
    }
    return product;
  };
  std::vector<Coefficients> table(size, Coefficients(size));
  table[0][0] = 1;
  Coefficients before, q(size);
  if (intercept_) {
    q[0] = 1;
  } else {
    q[1] = DoubleDouble(1) / std::ldexp(largest_, -exponent_);
    table[1] = q;
  }
  for (std::size_t j = intercept_ ? 1 : 2; j < size; ++j) {
    Coefficients next = times_u(q, before.empty() ? 1 : 2);
    for (std::size_t k = 0; k < size && !before.empty(); ++k) next[k] -= before[k];
    before = std::move(q);
    q = std::move(next);
    table[j] = q;
  }
  return table;
}

std::vector<Coefficients> PolynomialBasis::OfPowers() const {
  const double middle = std::ldexp(middle_, -exponent_), half = std::ldexp(half_, -exponent_);
  const auto size = static_cast<std::size_t>(degree_) + 1;
  // Powers in T_j(u): x = middle + half u, and u T_j is the mean of the neighbours of T_j.
  std::vector<Coefficients> table(size, Coefficients(size));
  table[0][0] = 1;
  for (std::size_t k = 1; k < size; ++k) {
    const Coefficients& a = table[k - 1];
    for (std::size_t j = 0; j <= k; ++j) {
      DoubleDouble neighbours;
      if (j > 0) neighbours += j == 1 ? a[0] * 2 : a[j - 1];
      if (j + 1 < size) neighbours += a[j + 1];
      table[k][j] = a[j] * middle + neighbours * half / 2;
    }
  }
  if (intercept_) return table;
  // x^k = x x^(k−1), and x T_j is a multiple of p_j+1.
  const double largest = std::ldexp(largest_, -exponent_);
  std::vector<Coefficients> shifted(size, Coefficients(size));
  shifted[0][0] = 1;
  for (std::size_t k = 1; k < size; ++k)
    for (std::size_t j = 1; j <= k; ++j) shifted[k][j] = table[k - 1][j - 1] * largest;
  return shifted;
}

std::vector<Coefficients> PolynomialBasis::In(const PolynomialBasis& other) const {
  // T_n(u) in T_k(v) where u = shift + slope v, by the recurrence of T_n; v T_k is the mean of the
  // neighbours of T_k.
  const auto size = static_cast<std::size_t>(degree_) + 1;
  const DoubleDouble slope = DoubleDouble(other.half_) / half_;
  const DoubleDouble shift = TwoSum(other.middle_, -middle_) / half_;
  const auto times_u = [&](const Coefficients& a) {
    Coefficients product(size);
    for (std::size_t k = 0; k < size; ++k) {
      DoubleDouble neighbours;
      if (k > 0) neighbours += k == 1 ? a[0] * 2 : a[k - 1];
      if (k + 1 < size) neighbours += a[k + 1];
      product[k] = a[k] * shift + neighbours * slope / 2;
    }
    return product;
  };
  std::vector<Coefficients> chebyshev(size, Coefficients(size));
  chebyshev[0][0] = 1;
  if (size > 1) chebyshev[1] = times_u(chebyshev[0]);
  for (std::size_t n = 2; n < size; ++n) {
    chebyshev[n] = times_u(chebyshev[n - 1]);
    for (std::size_t k = 0; k < size; ++k)
      chebyshev[n][k] = chebyshev[n][k] * 2 - chebyshev[n - 2][k];
  }
  if (intercept_) return chebyshev;
  // p_k = x / largest T_{k−1}.
  std::vector<Coefficients> table(size, Coefficients(size));
  table[0][0] = 1;
  for (std::size_t j = 1; j < size; ++j)
    for (std::size_t k = 1; k <= j; ++k)
      table[j][k] = chebyshev[j - 1][k - 1] * other.largest_ / largest_;
  return table;
}

}  // namespace ladderline
