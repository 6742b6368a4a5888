// Whether the spread of the residuals follows any quadratic pattern in the design columns.
//
// n R² of the regression of the squared residuals on the design columns, their squares and their
// products, and an intercept, against χ² with rank − 1 degrees of freedom. With more than 30
// auxiliary columns (intercept included, counted before repeats are dropped: from 7 design columns
// on) it is the regression on the fitted value and its square instead, 2 degrees of freedom. With
// weights as in breusch_pagan.h.
//   method  Products of columns that the fit's triangle has made orthonormal span the same space as
//           products of the raw ones and are near enough to orthonormal for cross-products, of
//           which those with the same four factors are summed once: C(k+3, 4) sums for k columns
//           with the intercept instead of k(k+1)/4 · (k(k+1)/2 + 1).
//   source  White, Econometrica 48 (1980); for the short form Wooldridge, Introductory Econometrics
#ifndef LADDERLINE_CORE_CHECKS_WHITE_H_
#define LADDERLINE_CORE_CHECKS_WHITE_H_

#include <cstdint>
#include <vector>

#include "core/checks/check_block.h"
#include "core/checks/test_figures.h"
#include "core/regression/centred_basis.h"

namespace ladderline {

inline constexpr Index kMostAuxiliaryColumns = 30;

class White {
 public:
  // `auxiliary` (auxiliary_basis.h) must outlive this.
  White(const CentredBasis& auxiliary, std::int64_t rows);
  void Add(const CheckBlock& block);
  // Not computed as breusch_pagan.h says, and in the short form when all fitted values are the
  // same.
  TestFigures Finish() const;
  // The short form was taken.
  bool by_fitted() const { return by_fitted_; }

 private:
  double* Column(Index product) { return columns_.data() + product * kCheckRows; }
  // The place of the product of base columns a ≤ b.
  Index Place(Index a, Index b) const { return a * width_ - a * (a - 1) / 2 + (b - a); }
  double Moment(Index a, Index b, Index c, Index d) const;
  void SetBase(const CheckBlock& block);

  const CentredBasis& auxiliary_;
  double rows_;
  bool by_fitted_;
  Index width_;     // base columns: ones and the orthonormal ones, or ones and the fitted value
  Index products_;  // of two of them
  // The products in order of their places, base columns first, then residual² − 1.
  std::vector<double> columns_;
  std::vector<DoubleDouble> sums_;  // products_ × (products_ + 1); only some are used
  DoubleDouble total_;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHECKS_WHITE_H_
