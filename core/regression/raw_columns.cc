#include "core/regression/raw_columns.h"

#include <cmath>
#include <limits>

namespace ladderline {
namespace {

std::vector<DoubleDouble> Row(const CentredBasis& basis, const RawColumn& raw) {
  std::vector<DoubleDouble> row(static_cast<std::size_t>(basis.columns));
  for (const RawColumn::Part& part : raw.functional)
    row[static_cast<std::size_t>(part.column)] += part.factor;
  return row;
}

std::vector<double> NoNumbers(const CentredBasis& basis) {
  return std::vector<double>(static_cast<std::size_t>(basis.columns),
                             std::numeric_limits<double>::quiet_NaN());
}

}  // namespace

std::vector<double> RawCoefficients(const CentredBasis& basis, const RawColumns& raw) {
  if (raw.empty()) return RawCoefficients(basis);
  std::vector<double> coefficients = NoNumbers(basis);
  for (const Index kept : basis.kept) {
    const auto t = static_cast<std::size_t>(kept);
    coefficients[t] = std::ldexp(Estimate(basis, Row(basis, raw[t])), -raw[t].exponent);
  }
  return coefficients;
}

void RawCoordinates(const CentredBasis& basis, const RawColumn& raw,
                    std::span<double> coordinates) {
  Coordinates(basis, Row(basis, raw), coordinates);
}

std::vector<double> StandardErrors(const CentredBasis& basis, const Covariance& covariance,
                                   const RawColumns& raw) {
  if (raw.empty()) return StandardErrors(basis, covariance);
  std::vector<double> errors = NoNumbers(basis);
  std::vector<double> coordinates(static_cast<std::size_t>(basis.rank()));
  for (const Index kept : basis.kept) {
    const auto t = static_cast<std::size_t>(kept);
    RawCoordinates(basis, raw[t], coordinates);
    errors[t] = std::ldexp(StandardError(covariance, coordinates), -raw[t].exponent);
  }
  return errors;
}

std::vector<double> RawDirection(const CentredBasis& basis, const RawColumn& raw) {
  std::vector<DoubleDouble> direction(static_cast<std::size_t>(basis.rank()));
  for (const RawColumn::Part& part : raw.values) {
    for (Index j = 0; j < basis.rank(); ++j) {
      if (basis.kept[static_cast<std::size_t>(j)] != part.column) continue;
      for (Index i = 0; i <= j; ++i)
        direction[static_cast<std::size_t>(i)] +=
            part.factor * basis.factor[static_cast<std::size_t>(PackedIndex(i, j))];
      // Centres measure the columns from the ones.
      if (basis.intercept && j > 0)
        direction[0] += part.factor * basis.factor[0] * basis.centre[static_cast<std::size_t>(j)];
    }
  }
  std::vector<double> rounded;
  for (const DoubleDouble& number : direction) rounded.push_back(number.value());
  return rounded;
}

}  // namespace ladderline
