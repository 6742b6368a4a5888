#include "core/scan/reading.h"

#include <cmath>

#include "core/support/prose.h"
#include "core/transform/spec_words.h"

namespace ladderline {
namespace {

// A p-value below which a funnel is spoken of, as in the checks of a model.
constexpr double kFunnel = 0.05;
// The share of the rows from which a single value at an end is worth a word, as in shape.h.
constexpr double kHeap = 0.2;

const ScannedCandidate& Identity(const ReExpressionScan& scan) {
  for (const ScannedCandidate& scanned : scan.candidates)
    if (scanned.candidate.IsIdentity()) return scanned;
  return scan.candidates.front();
}

std::string SkewnessText(double skewness) {
  return std::abs(skewness) < 0.005 ? "0" : Rounded(skewness, 2);
}

}  // namespace

std::string ScanReading(const ReExpressionScan& scan, const std::string& measure) {
  const ScannedCandidate& first = scan.candidates.front();
  const ScannedCandidate& raw = Identity(scan);
  const std::string rows = Counted(first.rows_used, "row");
  const std::string of = scan.given_predictors ? "of the residuals " : "";
  std::string reading;
  if (first.candidate.IsIdentity()) {
    reading =
        "Leave " + measure + " as it is: over " + rows + " no re-expression that keeps them all " +
        (scan.given_predictors ? "fits better" : "makes it more even") + " by more than chance";
    if (!std::isnan(first.shape.skewness))
      reading += " (skewness " + of + SkewnessText(first.shape.skewness) + ")";
  } else {
    reading = "Re-express " + measure + " by " + SpecWords(first.candidate.transform) +
              ": it keeps all " + rows;
    if (std::isinf(first.log_likelihood)) {
      reading += ", and the predictors then fit exactly";
    } else if (std::abs(first.shape.skewness) < std::abs(raw.shape.skewness)) {
      reading += " and takes the skewness " + of + "from " + SkewnessText(raw.shape.skewness) +
                 " to " + SkewnessText(first.shape.skewness);
    }
  }
  if (scan.given_predictors && !std::isnan(first.funnel_p)) {
    const bool raw_funnel = raw.funnel_p < kFunnel, funnel = first.funnel_p < kFunnel;
    if (funnel) {
      reading += "; the spread of the residuals still changes along the predictors";
    } else if (raw_funnel) {
      reading += "; the spread of the residuals no longer changes visibly along the predictors";
    }
  }
  if (scan.measure.heap_share >= kHeap) {
    reading += "; but " + Percent(scan.measure.heap_share) + " of the values are " +
               PlainNumber(scan.measure.heap) + ", a heap that no re-expression spreads";
  }
  return reading + ".";
}

std::string CandidateReading(const ReExpressionScan& scan, std::size_t i) {
  const ScannedCandidate& scanned = scan.candidates[i];
  const std::int64_t all = scanned.rows_used + scanned.rows_outside;
  if (scanned.rows_outside > 0) {
    return "Loses " + std::to_string(scanned.rows_outside) + " of " + Counted(all, "row") +
           ": values outside its domain.";
  }
  if (i == 0) {
    return scanned.candidate.IsIdentity()
               ? "Nothing need be changed: no other is better by more than chance."
           : scanned.candidate.estimated > 0
               ? "Fits best."
               : "The simplest of those that fit as well as the best.";
  }
  if (scanned.as_good_as_best) return "Fits as well as the best, within chance.";
  if (std::isnan(scanned.log_likelihood)) {
    return "Its likelihood does not compare: the slope at some value is 0 or infinite.";
  }
  return scanned.candidate.IsIdentity()
             ? "Fits worse than the best by more than chance: leaving the measure "
               "alone is not enough."
             : "Fits worse than the best by more than chance.";
}

}  // namespace ladderline
