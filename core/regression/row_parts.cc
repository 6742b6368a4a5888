#include "core/regression/row_parts.h"

#include <algorithm>
#include <span>

#include "core/regression/column_kernels.h"
#include "core/regression/householder.h"
#include "core/regression/rows_by_group.h"
#include "core/regression/triangle_solve.h"

namespace ladderline {
namespace {

// Sets W and U from R^-1.
void Reduce(const std::vector<double>& inverse, Index rank, RowPart& part) {
  const Index m = part.size();
  const auto entry = [&](Index i, Index j) {  // of the part's columns of R^-T
    const Index column = part.columns[j];
    return column <= i ? inverse[PackedIndex(column, i)] : 0;
  };
  // Columns in reverse, so that the triangle comes out lower in their own order.
  std::vector<double> a(rank * m);
  for (Index j = 0; j < m; ++j)
    for (Index i = 0; i < rank; ++i) a[(m - 1 - j) * rank + i] = entry(i, j);
  Triangularise(rank, m, a.data(), rank);
  part.projection.resize(PackedSize(m));
  for (Index i = 0; i < m; ++i)
    for (Index j = 0; j <= i; ++j)
      part.projection[PackedIndex(j, i)] = a[(m - 1 - j) * rank + (m - 1 - i)];
  // U = R^-T W^-1, row by row: u W = r.
  part.directions.resize(rank * m);
  for (Index i = 0; i < rank; ++i) {
    double* row = part.directions.data() + i * m;
    for (Index j = m - 1; j >= 0; --j) {
      double rest = entry(i, j);
      for (Index l = j + 1; l < m; ++l) rest -= row[l] * part.projection[PackedIndex(j, l)];
      row[j] = rest / part.projection[PackedIndex(j, j)];
    }
  }
}

}  // namespace

std::vector<double> RowPart::Whole(const std::vector<double>& q) const {
  if (directions.empty()) return q;
  std::vector<double> whole(directions.size() / q.size());
  for (std::size_t r = 0; r < whole.size(); ++r)
    whole[r] = Dot(directions.data() + r * q.size(), q.data(), size());
  return whole;
}

void RowPart::AddWhole(const std::vector<DoubleDouble>& matrix, std::vector<double>& total) const {
  if (columns.empty()) return;
  if (directions.empty()) {
    for (std::size_t i = 0; i < total.size(); ++i) total[i] += matrix[i].value();
    return;
  }
  const Index m = size();
  const Index rank = static_cast<Index>(directions.size()) / m;
  std::vector<double> half(directions.size());  // U matrix
  for (Index r = 0; r < rank; ++r) {
    const double* u = directions.data() + r * m;
    for (Index j = 0; j < m; ++j)
      for (Index l = 0; l < m; ++l)
        half[r * m + j] += u[l] * matrix[PackedIndex(std::min(j, l), std::max(j, l))].value();
  }
  for (Index c = 0; c < rank; ++c)
    for (Index r = 0; r <= c; ++r)
      total[PackedIndex(r, c)] += Dot(half.data() + r * m, directions.data() + c * m, m);
}

std::vector<RowPart> MakeRowParts(const RowSource& source, const CentredBasis& basis) {
  const Index rank = basis.rank();
  const std::span<const DesignColumn> columns = source.columns();
  const std::vector<double> inverse = InvertUpper(RoundedFactor(basis), rank);
  if (basis.extended || !RowsByGroup::Pays(source)) {
    RowPart all;
    for (Index j = 0; j < rank; ++j) all.columns.push_back(j);
    all.projection = inverse;
    return {all};
  }
  std::vector<RowPart> parts(source.groups());
  for (Index j = 0; j < rank; ++j) {
    const int group = columns[basis.kept[j]].group;
    for (int g = 0; g < source.groups(); ++g)
      if (group == DesignColumn::kEveryGroup || group == g) parts[g].columns.push_back(j);
  }
  for (RowPart& part : parts) Reduce(inverse, rank, part);
  return parts;
}

}  // namespace ladderline
