// Where the ordered values of a normal sample would lie, in standard deviations from its mean.
//   source  Blom, Statistical Estimates and Transformed Beta-Variables (1958)
#ifndef LADDERLINE_CORE_NORMALITY_NORMAL_SCORES_H_
#define LADDERLINE_CORE_NORMALITY_NORMAL_SCORES_H_

#include <cstddef>
#include <span>
#include <vector>

namespace ladderline {

// The normal quantile at (rank - 3/8)/(n + 1/4), rank 1 being the least of n values. Antisymmetric:
// the score of rank n + 1 - i is exactly that of rank i with its sign changed.
double NormalScore(std::size_t rank, std::size_t n);

// The score beside percentile_cont at `probability` (0..1) of n >= 1 values: that of the place
// 1 + (n − 1) probability, whole or between two ranks.
double QuantileScore(double probability, std::size_t n);

struct QuantilePair {
  double normal_score;
  double value;
};

// Values beside their normal scores: on a straight line where the values are normal.
//   ascending  finite values in order
//   points     how many pairs at most, 1 or more. Of more values than that, the ranks taken are
//              evenly spaced, the first and the last among them (of one point: the middle rank)
//   empty      none; one row: its value at score 0; a constant column: that value throughout
std::vector<QuantilePair> QuantilePairs(std::span<const double> ascending, std::size_t points);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_NORMALITY_NORMAL_SCORES_H_
