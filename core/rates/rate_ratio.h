// The ratio of two rates, (e1/b1) / (e2/b2), by what the events say once their total is given: e1
// is then binomial with odds ratio·b1 : b2.
//
//   domain   e1, e2 ≥ 0, may be fractional except in the p-value; b1, b2 > 0; 0 < level < 1. NaN
//            outside it, for a ratio with e2 = 0, and for a limit that is infinite (high at e2 =
//            0).
//   source   limits: Clopper & Pearson 1934 on the binomial share, as in binomial.h
//   accuracy relative 1e-12
#ifndef LADDERLINE_CORE_RATES_RATE_RATIO_H_
#define LADDERLINE_CORE_RATES_RATE_RATIO_H_

namespace ladderline {

double RateRatio(double e1, double b1, double e2, double b2);
double RateRatioLow(double e1, double b1, double e2, double b2, double level);
double RateRatioHigh(double e1, double b1, double e2, double b2, double level);

// Two-sided p of "the rates are equal": the probability of all divisions of the events that are no
// more likely than the one seen. Likelihoods within 1e-10 of each other, relatively, count as
// equal, so that rounding breaks no tie. 1 when there are no events. NaN for a fractional count
// and beyond 2^53 events.
//   accuracy relative 1e-11;  cost about 20 µs whatever the counts
double RateRatioP(double e1, double b1, double e2, double b2);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_RATES_RATE_RATIO_H_
