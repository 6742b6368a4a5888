#include "core/regression/extended_pass.h"

#include <algorithm>

#include "core/regression/centred_basis.h"
#include "core/regression/double_double_columns.h"
#include "core/regression/triangle_solve.h"

namespace ladderline {
namespace {

std::vector<DoubleDouble> Widen(const std::vector<double>& numbers) {
  return std::vector<DoubleDouble>(numbers.begin(), numbers.end());
}

// C with C'C = g, packed, in place; false when g is not positive definite.
bool Cholesky(Index n, std::vector<DoubleDouble>& g) {
  for (Index j = 0; j < n; ++j) {
    for (Index i = 0; i <= j; ++i) {
      DoubleDouble rest = g[PackedIndex(i, j)];
      for (Index l = 0; l < i; ++l) rest -= g[PackedIndex(l, i)] * g[PackedIndex(l, j)];
      if (i < j) {
        g[PackedIndex(i, j)] = rest / g[PackedIndex(i, i)];
      } else {
        if (!(rest.hi > 0)) return false;
        g[PackedIndex(j, j)] = Sqrt(rest);
      }
    }
  }
  return true;
}

// Upper triangle times upper triangle, packed.
std::vector<DoubleDouble> Multiply(Index n, const std::vector<DoubleDouble>& a,
                                   const std::vector<DoubleDouble>& b) {
  std::vector<DoubleDouble> product(PackedSize(n));
  for (Index j = 0; j < n; ++j)
    for (Index l = 0; l <= j; ++l)
      for (Index i = 0; i <= l; ++i)
        product[PackedIndex(i, j)] += a[PackedIndex(i, l)] * b[PackedIndex(l, j)];
  return product;
}

}  // namespace

bool PassExtended(const RowSource& source, const ColumnScaling& scaling,
                  const std::vector<Index>& kept, const std::vector<double>& factor,
                  const std::vector<double>& coefficient, ExtendedSolution& out) {
  constexpr Index kRows = DoubleDoubleColumns::kRows;
  const Index k = static_cast<Index>(kept.size());
  const std::vector<DoubleDouble> r = Widen(factor);
  std::vector<DoubleDouble> reciprocal(k);
  for (Index j = 0; j < k; ++j) reciprocal[j] = DoubleDouble(1) / r[PackedIndex(j, j)];

  // Column k of z is the residual of the plain solution, so that g's last column holds z'e and e'e.
  std::vector<DoubleDouble> g(PackedSize(k + 1));
  DoubleDoubleColumns z(k + 1), wz(1);
  RowBlock block(static_cast<Index>(scaling.x.size()));
  block.wants_low = true;
  double weight[kRows];
  for (Index b = 0; b < source.block_count(); ++b) {
    source.Fill(b, block);
    for (Index first = 0; first < block.rows; first += kRows) {
      const Index n = std::min(kRows, block.rows - first);
      z.Set(k, block.y + first, nullptr, scaling.y, n);
      for (Index j = 0; j < k; ++j) {
        const Index column = kept[j];
        const double* low = block.x_low[column];
        z.Set(j, block.x[column] + first, low == nullptr ? nullptr : low + first, scaling.x[column],
              n);
        z.SubtractMultiple(k, coefficient[j], z, j);
      }
      z.SolveTransposed(k, r.data(), reciprocal.data());
      if (block.w != nullptr) {
        for (Index i = 0; i < n; ++i) weight[i] = block.w[first + i] * scaling.weight_factor;
      }
      for (Index j = 0; j <= k; ++j) {
        wz.SetWeighted(0, block.w == nullptr ? nullptr : weight, n, z, j);
        for (Index i = 0; i <= j; ++i)
          g[PackedIndex(i, j)] += DoubleDoubleColumns::Dot(z, i, wz, 0);
      }
    }
  }

  std::vector<DoubleDouble> cross(g.begin() + PackedIndex(0, k), g.begin() + PackedIndex(k, k));
  const DoubleDouble plain_residual_ss = g[PackedIndex(k, k)];
  if (!Cholesky(k, g)) return false;

  // With C'C = G and z'e = cross: the correction is R^-1 C^-1 C^-T cross.
  std::vector<DoubleDouble> correction = cross;
  SolveTransposed(g, k, correction.data());
  out.residual_ss = plain_residual_ss;
  for (const DoubleDouble& part : correction) out.residual_ss -= part * part;
  if (out.residual_ss.hi < 0) out.residual_ss = DoubleDouble();
  SolveUpper(g, k, correction.data());
  SolveUpper(r, k, correction.data());
  out.coefficient = Widen(coefficient);
  for (Index j = 0; j < k; ++j) out.coefficient[j] += correction[j];
  out.factor = Multiply(k, g, r);
  out.effect.assign(k, DoubleDouble());
  for (Index j = 0; j < k; ++j)
    for (Index i = 0; i <= j; ++i)
      out.effect[i] += out.factor[PackedIndex(i, j)] * out.coefficient[j];
  return true;
}

}  // namespace ladderline
