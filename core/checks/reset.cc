#include "core/checks/reset.h"

#include <algorithm>
#include <array>
#include <cmath>

#include "core/regression/column_kernels.h"
#include "core/support/distributions.h"

namespace ladderline {

Reset::Reset(const LeastSquares& fit, double fitted_zero)
    : fit_(fit),
      // With an intercept a fitted value's powers may be measured from anywhere.
      fitted_zero_(fit.basis.intercept ? 0 : fitted_zero),
      square_in_fit_(fit.basis),
      cube_in_fit_(fit.basis) {}

// With f the fitted value from 0 and t the same from its mean, f t and f t² span with f the same as
// f² and f³, and are far less alike.
void Reset::Add(const CheckBlock& block) {
  const Index n = block.rows;
  std::array<double, kCheckRows> square, cube;
  for (Index i = 0; i < n; ++i) {
    const double t = block.fitted[i];
    square[i] = (t + fitted_zero_) * t;
    cube[i] = square[i] * t;
  }
  if (block.w != nullptr) {
    std::array<double, kCheckRows> weighted{};
    for (Index i = 0; i < n; ++i) weighted[i] = square[i] * block.w[i];
    square_in_fit_.Add(block, weighted.data());
    for (Index i = 0; i < n; ++i) weighted[i] = cube[i] * block.w[i];
    cube_in_fit_.Add(block, weighted.data());
    for (Index i = 0; i < n; ++i) square[i] *= block.root_w[i];
    for (Index i = 0; i < n; ++i) cube[i] *= block.root_w[i];
  } else {
    square_in_fit_.Add(block, square.data());
    cube_in_fit_.Add(block, cube.data());
  }
  double first, second;
  DotTwo(square.data(), square.data(), cube.data(), n, &first, &second);
  square_square_ += first;
  square_cube_ += second;
  cube_cube_ += Dot(cube.data(), cube.data(), n);
  DotTwo(block.residual, square.data(), cube.data(), n, &first, &second);
  square_residual_ += first;
  cube_residual_ += second;
}

// The residuals have nothing in common with the fit's own columns, so that only the powers need to
// be freed of these.
Explained Reset::Explain() const {
  const std::vector<double> square = square_in_fit_.Coordinates();
  const std::vector<double> cube = cube_in_fit_.Coordinates();
  DoubleDouble square_square = square_square_, square_cube = square_cube_, cube_cube = cube_cube_;
  for (std::size_t j = 0; j < square.size(); ++j) {
    square_square -= TwoProduct(square[j], square[j]);
    square_cube -= TwoProduct(square[j], cube[j]);
    cube_cube -= TwoProduct(cube[j], cube[j]);
  }
  const std::array<double, 2> size = {square_square_.value(), cube_cube_.value()};
  return ExplainFromGram({square_square.value(), square_cube.value(), cube_cube.value()},
                         {square_residual_.value(), cube_residual_.value()}, size);
}

TestFigures Reset::Finish() const {
  const Explained explained = Explain();
  if (explained.rank == 0)
    return TestFigures::Not("powers of the fitted values repeat columns that are already there");
  TestFigures test;
  test.df = static_cast<double>(explained.rank);
  test.df2 = static_cast<double>(fit_.residual_df() - explained.rank);
  if (test.df2 < 1) return TestFigures::Not("there are too few rows for two more columns");
  const double rest = std::max(static_cast<double>(fit_.rows) - explained.sum_of_squares, 0.0);
  test.statistic = (explained.sum_of_squares / test.df) / (rest / test.df2);
  test.p_value = FUpperTail(test.statistic, test.df, test.df2);
  return test;
}

double Reset::Move() const {
  const double share = Explain().sum_of_squares / static_cast<double>(fit_.rows);
  return Finish().computed() ? std::sqrt(std::min(share, 1.0)) : std::nan("");
}

}  // namespace ladderline
