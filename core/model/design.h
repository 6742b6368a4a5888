// From kept columns to the design a regression reads: which terms there are, and their rows.
#ifndef LADDERLINE_CORE_MODEL_DESIGN_H_
#define LADDERLINE_CORE_MODEL_DESIGN_H_

#include <array>
#include <cmath>
#include <cstdint>
#include <span>
#include <vector>

#include "core/model/columns.h"
#include "core/model/model.h"
#include "core/model/polynomial_basis.h"
#include "core/regression/least_squares.h"
#include "core/regression/raw_columns.h"
#include "core/regression/row_source.h"

namespace ladderline {

// The terms of a model whose columns are described (levels in byte order, reference chosen):
// intercept first, then column by column; a category's levels in their order, without its
// reference; a polynomial's powers rising; of a product every pair of its parts' terms, the second
// part's running faster. A product leaves out a category's reference, or its commonest level where
// all have terms. Only names and factors are set. None when there are more than kMostTerms.
std::vector<ModelTerm> MakeTerms(std::span<const ModelColumn> columns, bool intercept);
std::int64_t CountTerms(std::span<const ModelColumn> columns, bool intercept);

// What a polynomial's powers are made of.
PolynomialBasis BasisOf(const ModelColumn& column, bool intercept);
// The powers of polynomials and what stands beside them; empty without a polynomial. A power that
// was dropped though higher ones stay has no coefficient: what it would carry goes to the columns
// that it repeats.
RawColumns MakeRawColumns(std::span<const ModelColumn> columns, std::span<const ModelTerm> terms,
                          std::span<const DroppedColumn> dropped);

// The rows of a ColumnSet as design columns, one per term, response and weights; transforms applied
// block by block, that of the response once (8 bytes per row). The category with the most levels is
// handed over as the groups of its rows.
//   set, columns, terms   must outlive the source; columns[i] describes set.column(i)
class DesignSource final : public RowSource {
 public:
  DesignSource(const ColumnSet& set, std::span<const ModelColumn> columns,
               std::span<const ModelTerm> terms);

  std::int64_t rows() const override { return set_.rows().fitted; }
  std::span<const DesignColumn> columns() const override { return design_; }
  bool has_weights() const override { return set_.weight_column() >= 0; }
  int groups() const override { return groups_; }
  void Fill(Index block, RowBlock& out) const override;
  // From now on Fill gives the response divided by 2^exponent.
  void DivideResponse(int exponent) { response_factor_ = std::ldexp(1.0, -exponent); }
  // The re-expressed response of all rows, undivided; empty where it stands as it is.
  std::span<const double> response() const { return response_; }
  // Only rows, y and w; y undivided.
  void FillResponse(Index block, RowBlock& out) const;

 private:
  // Where a factor of a design column comes from: a number column, or a level (by code) of a
  // category.
  struct Origin {
    int column = -1;  // −1: none
    int code = -1;    // −1: a number
    int power = 0;    // of a polynomial; 0: no polynomial
  };
  Origin OriginOf(const Factor& factor) const;
  // The values of a factor, in place or in `scratch`.
  const double* Values(const Origin& origin, std::size_t first, std::size_t n,
                       double* scratch) const;
  const PolynomialBasis& BasisAt(const Origin& origin) const;
  void FillPolynomial(Index j, std::size_t first, RowBlock& out) const;
  void FillProduct(Index j, std::size_t first, RowBlock& out) const;
  const double* Numbers(int column, std::size_t first, std::size_t n, double* scratch) const;
  void Indicator(const Origin& origin, std::size_t first, std::size_t n, double* out) const;

  const ColumnSet& set_;
  std::span<const ModelColumn> model_columns_;
  std::vector<std::array<Origin, 2>> origins_;  // by design column
  std::vector<PolynomialBasis> polynomials_;
  std::vector<int> polynomial_of_;  // by column
  std::vector<DesignColumn> design_;
  int groups_ = 0;
  int group_column_ = -1;
  std::vector<std::uint16_t> group_of_code_;  // index into the group column's levels
  double response_factor_ = 1;
  mutable std::vector<std::uint16_t> group_scratch_;
  std::vector<double> response_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_DESIGN_H_
