// A fitted linear function in the coordinates the fit worked in, and how to ask it for values.
//
// With an intercept the fit measures each column from a centre c_j:
//   fitted(x) = β_0 + Σ_j β_j (x_j − c_j),   R'R = Σ w d d',   d = (1, x_1 − c_1, …),
// so that a column such as 1e9 + small noise keeps its digits; the raw intercept is β_0 − Σ c_j
// β_j. Everything reported is a linear functional of the raw coefficients, and every functional is
// written as a design row L, one number per source column: a case to predict is its own row, the
// slope of column j is the row with a 1 at j, the raw intercept the row (1, 0, …, 0), a contrast
// the difference of two rows. In orthonormal coordinates it is a = R^-T (L − L_0 c), which gives
//   estimate Σ L_j b_j,   leverage w‖a‖²,   variance a'Ma for a covariance M (covariance.h).
//
// This struct is all that a stored model has to keep to answer such questions.
#ifndef LADDERLINE_CORE_REGRESSION_CENTRED_BASIS_H_
#define LADDERLINE_CORE_REGRESSION_CENTRED_BASIS_H_

#include <span>
#include <vector>

#include "core/regression/row_source.h"
#include "core/support/double_double.h"

namespace ladderline {

// Upper triangles (and symmetric matrices) are stored column by column: (0,0) (0,1) (1,1) (0,2) ….
constexpr Index PackedIndex(Index row, Index column) { return column * (column + 1) / 2 + row; }
constexpr Index PackedSize(Index n) { return n * (n + 1) / 2; }

struct CentredBasis {
  Index columns = 0;                      // of the source, dropped ones included
  bool intercept = false;                 // then column 0 is the intercept, kept unless rows are 0
  std::vector<Index> kept;                // source columns that carry a coefficient, ascending
  std::vector<double> centre;             // per kept column; 0 for the intercept and without one
  std::vector<DoubleDouble> coefficient;  // β, per kept column
  std::vector<DoubleDouble> factor;       // R, packed, rank × rank, diagonal above 0
  // Whether the low parts of `factor` mean anything: then coordinates, too, are computed in
  // double-double.
  bool extended = false;

  Index rank() const { return static_cast<Index>(kept.size()); }
};

// R rounded to doubles, packed.
std::vector<double> RoundedFactor(const CentredBasis& basis);

// Σ L_j b_j for the functional `row` (`columns` numbers; those of dropped columns are not read).
// Computed in double-double throughout. Rank 0 gives 0.
double Estimate(const CentredBasis& basis, std::span<const double> row);
// The same for a row of double-doubles.
double Estimate(const CentredBasis& basis, std::span<const DoubleDouble> row);

// a = R^-T (L − L_0 c) into `coordinates` (`rank` numbers). O(rank²).
void Coordinates(const CentredBasis& basis, std::span<const double> row,
                 std::span<double> coordinates);
void Coordinates(const CentredBasis& basis, std::span<const DoubleDouble> row,
                 std::span<double> coordinates);

// The raw coefficients: one per source column, NaN for a dropped one.
std::vector<double> RawCoefficients(const CentredBasis& basis);

// The coordinates of every raw coefficient: `columns` vectors of `rank` numbers one after the
// other; a dropped column's are NaN. O(rank³) once, cheaper than asking for them one by one.
std::vector<double> TermCoordinates(const CentredBasis& basis);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_CENTRED_BASIS_H_
