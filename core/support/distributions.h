// Tails and quantiles of the normal, t, F and χ² laws, for every room that states a p-value or a
// limit.
//
//   accuracy  tails keep their relative accuracy (1e-11 or better, near 1e-13 typically) down to
//             1e-300: each is computed as itself, never as 1 − something
//   df        1e-2 to 1e12, fractions allowed, or infinite: then it is the limiting law (t: the
//             normal law; F with infinite df2: χ²(df1)/df1; F with both infinite: the constant 1).
//             Zero, negative or NaN df give NaN.
//   specials  NaN in, NaN out; an infinite statistic has tail 0 or 1; a probability of 0 or 1 gives
//             the end of the law's range (±inf, 0); a probability outside 0..1 gives NaN
//   errors    none: nothing is thrown
#ifndef LADDERLINE_CORE_SUPPORT_DISTRIBUTIONS_H_
#define LADDERLINE_CORE_SUPPORT_DISTRIBUTIONS_H_

namespace ladderline {

double NormalLowerTail(double z);      // P(Z ≤ z)
double NormalUpperTail(double z);      // P(Z ≥ z)
double NormalTwoSided(double z);       // P(|Z| ≥ |z|)
double NormalQuantile(double p);       // z with P(Z ≤ z) = p
double NormalUpperQuantile(double q);  // z with P(Z ≥ z) = q

double StudentTLowerTail(double t, double df);
double StudentTUpperTail(double t, double df);
double StudentTTwoSided(double t, double df);
double StudentTQuantile(double p, double df);
double StudentTUpperQuantile(double q, double df);
// The t ≥ 0 with P(|T| ≤ t) = level, for limits of that level; level in 0..1.
double StudentTCritical(double level, double df);

// A statistic below 0 counts as 0.
double FUpperTail(double f, double df1, double df2);
double FLowerTail(double f, double df1, double df2);
double FUpperQuantile(double q, double df1, double df2);

double ChiSquareLowerTail(double x, double df);
double ChiSquareUpperTail(double x, double df);
double ChiSquareQuantile(double p, double df);
double ChiSquareUpperQuantile(double q, double df);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SUPPORT_DISTRIBUTIONS_H_
