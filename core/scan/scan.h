// Which re-expression suits a measure, or a response given its predictors: every candidate
// (candidates.h) with its figures, in an order of preference.
//
// For each candidate the re-expressed values are taken for normal about a constant, or about a
// linear function of the predictors, and their log-likelihood is stated on the original scale (the
// logarithm of the slope of the re-expression added, row by row): so do candidates compare, and so
// does leaving the measure alone.
//
// Ranking:
//   1. Candidates that keep every row, as good as the best: twice their log-likelihood falls short
//      of the best one's by no more than 3.84, the drop at which a 95% likelihood-ratio interval
//      ends (χ², 1 df). Without predictors the raw measure is among them, too, when it is as even
//      as the best: |skewness| no larger. Among them: leaving the measure alone; then the plain
//      powers; then re-expressions without a number taken from the data; then the rest; by AIC
//      within each.
//   2. The others that keep every row, by AIC; at their end those whose likelihood is infinite (a
//      slope of 0 or infinity at some value), by normal correlation.
//   3. Candidates that lose rows, fewest lost first, then by normal correlation: their likelihood
//      is of other rows, and does not compare.
// Why so: the likelihood is what λ is estimated by, so that a scan and a profile agree, a plain
// power being in the first class where it lies inside λ's interval. Within sampling noise the data
// cannot choose, and then what is easiest to explain should be chosen; above all, to change
// nothing. A re-expression is therefore recommended only where it beats the raw measure by more
// than noise, and where it makes the shape more even: the likelihood alone also bends measures that
// lean to no side, such as evenly used scores of a few steps. That a few related families are tried
// adds little to the 5% chance of doing so in vain, since all bend the measure the same way; how
// often it happens is counted in tests/coverage.
#ifndef LADDERLINE_CORE_SCAN_SCAN_H_
#define LADDERLINE_CORE_SCAN_SCAN_H_

#include <cstdint>
#include <limits>
#include <span>
#include <string>
#include <vector>

#include "core/regression/row_source.h"
#include "core/scan/candidates.h"
#include "core/scan/normal_shape.h"
#include "core/support/result.h"

namespace ladderline {

// Of more rows than this the residuals' shape is that of a systematic sample of so many
// (systematic_sample.h); so are normal_correlation and normal_p of a plain column.
inline constexpr std::size_t kShapeRows = 20'000;

// NaN: not available.
struct ScannedCandidate {
  Candidate candidate;
  std::int64_t rows_used = 0, rows_outside = 0;
  NormalShape shape;  // of the re-expressed values, or of the residuals (of rows scaled by √w)
  // On the original scale, of the rows used; +inf for an exact fit, NaN where a slope is 0
  // or infinite.
  double log_likelihood = kNone;
  // The variance and each estimated number count as parameters; NaN for a candidate that loses
  // rows.
  double aic = kNone;
  // Studentized Breusch–Pagan test of the residuals: does their spread change along the predictors?
  double funnel_p = kNone;
  bool as_good_as_best = false;  // it is in the first class of the ranking

 private:
  static constexpr double kNone = std::numeric_limits<double>::quiet_NaN();
};

struct ReExpressionScan {
  std::vector<ScannedCandidate> candidates;  // best first
  MeasureFacts measure;
  bool given_predictors = false;
};

// Of a plain column: finite values.
//   errors  in words, a whole clause: fewer than 3 rows, or fewer than 3 different values, which
//           have no shape that a re-expression could change
//   cost    a sort of 20,000 values and some passes for each candidate, 16 bytes a row
Result<ReExpressionScan> ScanColumn(std::span<const double> values);

// Of the response `y` of the design's rows, given the other columns.
//   design  with an intercept; its own y is not read
//   errors  as above, too few rows for the design, and columns that leave the range of a double
//   cost    one QR of the design, and one more for each set of rows that a candidate keeps; two
//           passes for each candidate
Result<ReExpressionScan> ScanResponse(std::span<const double> y, const RowSource& design);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SCAN_SCAN_H_
