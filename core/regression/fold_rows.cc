#include "core/regression/fold_rows.h"

#include <algorithm>
#include <cmath>

#include "core/regression/triangle_fold.h"

namespace ladderline {
namespace {

void WriteColumn(const double* x, const ColumnScaling::Column& scaling, const double* root_weight,
                 Index n, double* out) {
  const double centre = scaling.centre, factor = scaling.factor;
  if (root_weight == nullptr) {
    for (Index i = 0; i < n; ++i) out[i] = (x[i] - centre) * factor;
  } else {
    for (Index i = 0; i < n; ++i) out[i] = (x[i] - centre) * factor * root_weight[i];
  }
}

}  // namespace

std::vector<double> FoldRows(const RowSource& source, const ColumnScaling& scaling) {
  const Index k = static_cast<Index>(scaling.x.size());
  TriangleFold fold(k + 1, source.rows());
  RowBlock block(k);
  double roots[kBlockRows];
  for (Index b = 0; b < source.block_count(); ++b) {
    source.Fill(b, block);
    if (block.w != nullptr) {
      for (Index i = 0; i < block.rows; ++i)
        roots[i] = std::sqrt(block.w[i] * scaling.weight_factor);
    }
    for (Index first = 0; first < block.rows;) {
      const Index n = std::min(block.rows - first, fold.room());
      const double* root_weight = block.w == nullptr ? nullptr : roots + first;
      for (Index j = 0; j < k; ++j)
        WriteColumn(block.x[j] + first, scaling.x[j], root_weight, n, fold.column(j));
      WriteColumn(block.y + first, scaling.y, root_weight, n, fold.column(k));
      fold.Take(n);
      first += n;
    }
  }
  return fold.Finish();
}

}  // namespace ladderline
