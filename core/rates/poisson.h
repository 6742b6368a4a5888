// Rates of events on a base (person-years, dwellings), with exact limits.
//
//   domain   events ≥ 0, may be fractional; base > 0; per > 0; 0 < level < 1. NaN outside it.
//   source   Garwood, "Fiducial limits for the Poisson distribution", Biometrika 28 (1936):
//            low  = the mean for which P(X ≥ events) = (1 − level)/2; 0 for no events
//            high = the mean for which P(X ≤ events) = (1 − level)/2
//   accuracy relative 1e-13; the low limit of a fractional count under 0.1, which is tiny, 1e-15
//            over the count
#ifndef LADDERLINE_CORE_RATES_POISSON_H_
#define LADDERLINE_CORE_RATES_POISSON_H_

namespace ladderline {

double RatePer(double events, double base, double per);
double RateLow(double events, double base, double per, double level);
double RateHigh(double events, double base, double per, double level);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_RATES_POISSON_H_
