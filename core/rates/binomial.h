// Shares of a whole, with exact limits, in percent.
//
//   domain   0 ≤ part ≤ whole, both may be fractional; whole > 0; 0 < level < 1. NaN outside it.
//   source   Clopper & Pearson, "The use of confidence or fiducial limits", Biometrika 26 (1934):
//            low  = the share for which P(X ≥ part) = (1 − level)/2; 0 for part = 0
//            high = the share for which P(X ≤ part) = (1 − level)/2; 100 for part = whole
//   accuracy relative 1e-13
#ifndef LADDERLINE_CORE_RATES_BINOMIAL_H_
#define LADDERLINE_CORE_RATES_BINOMIAL_H_

namespace ladderline {

double PercentOf(double part, double whole);
double PercentLow(double part, double whole, double level);
double PercentHigh(double part, double whole, double level);

// The odds p/(1 − p) at the low limit of p, given successes and failures ≥ 0. As odds, a limit
// keeps its digits at both ends. The high limit is 1/LowOdds(failures, successes, level).
double LowOdds(double successes, double failures, double level);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_RATES_BINOMIAL_H_
