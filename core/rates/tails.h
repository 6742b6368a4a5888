// Tails of the Poisson and the binomial law for counts of any size, and where they reach a level.
//
// Counts may be fractional: the laws are then those of the incomplete gamma and beta functions,
// which interpolate them: P(X ≥ k) = P(k, mean) and I_p(k, n − k + 1).
//   domain    the tail proper, up to a little over a half: P(X ≥ k) where the mean is not far above
//             k, P(X ≤ k) where it is not far below
//   accuracy  relative error of a tail under 1e-12 for tails down to 1e-300 and counts up to 1e15
//   bits      the same on every machine (core/elementary). That, and counts from 1e6 on, where the
//             incomplete gamma and beta functions at hand lose digits and from 1e12 on give up, is
//             why these are not theirs.
//   cost      below 1 µs for counts up to some hundreds, 10 µs for any larger
//   source    density: Loader, "Fast and accurate computation of binomial probabilities" (2000);
//             tail over density: DLMF 8.7.1, 8.9.2 and 8.17.8, and where these are slow their
//             integral in ln(mean) or ln(p), by Gauss's rule on panels
#ifndef LADDERLINE_CORE_RATES_TAILS_H_
#define LADDERLINE_CORE_RATES_TAILS_H_

#include <functional>

namespace ladderline {

struct LogTail {
  double log_p;  // ln of the tail
  double slope;  // its derivative by ln(mean) or ln(odds); the tail is log-concave in these
};

class PoissonLaw {
 public:
  explicit PoissonLaw(double count);   // k ≥ 0
  LogTail AtLeast(double mean) const;  // P(X ≥ k); k > 0
  LogTail AtMost(double mean) const;   // P(X ≤ k)
  double LogDensity(double mean) const;
  double LogFactorial() const;  // lnΓ(k + 1)

 private:
  double count_;
  double log_scale_;  // the factors of the density that do not depend on the mean
};

// Successes k and failures m of n = k + m trials; the odds of a success are given as two weights
// above 0, success : failure, of which the larger is in 0.1 … 10.
class BinomialLaw {
 public:
  BinomialLaw(double successes, double failures);
  LogTail AtLeast(double success, double failure) const;  // P(X ≥ k); k > 0
  double LogDensity(double success, double failure) const;
  double LogChoices() const;  // ln of n over k

 private:
  double successes_, failures_;
  double log_scale_;
};

// The mean or odds at which `tail_at`, giving a LogTail of it, reaches `tail`: Newton's method on
// logarithms. A log-concave tail is approached from one side from the second step on.
double WhereTailIs(double tail, double start, const std::function<LogTail(double)>& tail_at);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_RATES_TAILS_H_
