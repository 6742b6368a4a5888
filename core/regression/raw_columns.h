// Coefficients of columns that the fit did not work in itself, because others that span the same
// space are better conditioned: the powers of a polynomial. All triangular combinations, so that
// raw column t is left out exactly where source column t is.
#ifndef LADDERLINE_CORE_REGRESSION_RAW_COLUMNS_H_
#define LADDERLINE_CORE_REGRESSION_RAW_COLUMNS_H_

#include <span>
#include <vector>

#include "core/regression/centred_basis.h"
#include "core/regression/covariance.h"

namespace ladderline {

struct RawColumn {
  struct Part {
    Index column;
    DoubleDouble factor;
  };
  // Of the raw column divided by 2^exponent, so that no factor leaves the range of a double: the
  // functional that gives its coefficient, and the source columns that add up to it. A column may
  // stand in several parts.
  std::vector<Part> functional, values;
  int exponent = 0;
};

// One per source column; empty: the source's columns are raw themselves.
using RawColumns = std::vector<RawColumn>;

// As their namesakes for the source's columns: NaN where a column was dropped.
std::vector<double> RawCoefficients(const CentredBasis& basis, const RawColumns& raw);
std::vector<double> StandardErrors(const CentredBasis& basis, const Covariance& covariance,
                                   const RawColumns& raw);

// a of the coefficient of raw column t divided by 2^exponent, into `rank` numbers.
void RawCoordinates(const CentredBasis& basis, const RawColumn& raw, std::span<double> coordinates);
// Raw column divided by 2^exponent in the coordinates of R: its length over the rows is that of
// these `rank` numbers, about its mean that of all but the first where there is an intercept.
std::vector<double> RawDirection(const CentredBasis& basis, const RawColumn& raw);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_RAW_COLUMNS_H_
