// The shape of a column in figures and in one sentence.
#ifndef LADDERLINE_CORE_DESCRIBE_SHAPE_H_
#define LADDERLINE_CORE_DESCRIBE_SHAPE_H_

#include <cstddef>
#include <span>
#include <string>

namespace ladderline {

// Quartiles interpolate as percentile_cont does; sd divides by n - 1; skewness is G1 and
// excess_kurtosis G2. NaN stands for a figure that the rows do not give: sd needs 2 rows, skewness
// 3 and excess_kurtosis 4, both some spread.
struct ColumnShape {
  std::size_t rows = 0;
  std::size_t zeros = 0;
  std::size_t negatives = 0;
  double least = 0;
  double lower_quartile = 0;
  double median = 0;
  double upper_quartile = 0;
  double largest = 0;
  double mean = 0;
  double sd = 0;
  double skewness = 0;
  double excess_kurtosis = 0;
  std::size_t rows_at_least = 0;    // rows that hold the least value
  std::size_t rows_at_largest = 0;  // and the largest
};

// Of one or more finite values in order.
ColumnShape ShapeOfColumn(std::span<const double> ascending);

// One plain sentence for a reader without statistics: on which side the tail is, how far the mean
// stands from the median, how many values are zero (if none is negative) or heaped at an end.
//
// A tail counts from a skewness of 1/2 on, a long one from 1 on, far-out values from an excess
// kurtosis of 1 on, and each only where it exceeds two of its standard errors for normal data.
// Fewer than 8 rows get no such statement.
std::string ShapeReading(const ColumnShape& shape);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_SHAPE_H_
