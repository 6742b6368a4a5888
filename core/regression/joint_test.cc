#include "core/regression/joint_test.h"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <limits>

#include "core/regression/householder.h"
#include "core/support/distributions.h"

namespace ladderline {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

// Writes x / 2^exponent.
void CopyScaled(const double* x, Index n, int exponent, double* out) {
  for (Index i = 0; i < n; ++i) out[i] = std::ldexp(x[i], -exponent);
}

}  // namespace

std::vector<JointTest> JointTests(const LeastSquares& fit,
                                  std::span<const std::vector<Index>> groups) {
  const CentredBasis& basis = fit.basis;
  const Index rank = basis.rank();
  const double df = static_cast<double>(fit.residual_df());
  const std::vector<double> terms = TermCoordinates(basis);
  std::vector<JointTest> tests;
  for (const std::vector<Index>& group : groups) {
    JointTest test{0, kNaN, kNaN, kNaN};
    // The slopes are R^-1 θ, so that those of the group see nothing of θ but its projection on the
    // rows of R^-1 that belong to them; its square is what they explain.
    std::vector<double> a;
    for (Index column : group) {
      assert(!(basis.intercept && column == 0));
      if (!std::binary_search(basis.kept.begin(), basis.kept.end(), column)) continue;
      a.resize(a.size() + rank);
      const double* term = terms.data() + column * rank;
      CopyScaled(term, rank, SizeExponent(term, rank), a.data() + a.size() - rank);
      ++test.df;
    }
    if (test.df > 0) {
      a.resize(a.size() + rank);
      double* effect = a.data() + a.size() - rank;
      const int exponent = SizeExponent(fit.effect.data(), rank);
      CopyScaled(fit.effect.data(), rank, exponent, effect);
      Triangularise(rank, test.df + 1, a.data(), rank);
      test.sum_of_squares = std::ldexp(Dot(effect, effect, test.df), 2 * exponent);
      const double df1 = static_cast<double>(test.df);
      if (df > 0) test.f = test.sum_of_squares / df1 / (fit.residual_ss / df);
      test.p_value = FUpperTail(test.f, df1, df);
    }
    tests.push_back(test);
  }
  return tests;
}

}  // namespace ladderline
