// Rows that can be projected through fewer columns than the design has.
#ifndef LADDERLINE_CORE_REGRESSION_ROW_PARTS_H_
#define LADDERLINE_CORE_REGRESSION_ROW_PARTS_H_

#include <vector>

#include "core/regression/centred_basis.h"
#include "core/regression/row_source.h"

namespace ladderline {

// Rows in which the same columns can differ from 0: those of one group, or all. Where R^-T d has
// `rank` coordinates, R^-T restricted to these columns is U W with orthonormal U, so that W d,
// which has no more than the part's columns, carries the same lengths and products.
struct RowPart {
  std::vector<Index> columns;      // positions among the kept ones, ascending
  std::vector<double> projection;  // W, lower triangular, packed by rows
  std::vector<double> directions;  // U, rank × columns, by rows; empty stands for the identity

  Index size() const { return static_cast<Index>(columns.size()); }

  // U q: coordinates W d as coordinates R^-T d.
  std::vector<double> Whole(const std::vector<double>& q) const;
  // total += U matrix U'; both packed and symmetric.
  void AddWhole(const std::vector<DoubleDouble>& matrix, std::vector<double>& total) const;
};

// One part per group where that pays (rows_by_group.h), else a single one. Bases that are worked in
// double-double stay whole.
std::vector<RowPart> MakeRowParts(const RowSource& source, const CentredBasis& basis);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_ROW_PARTS_H_
