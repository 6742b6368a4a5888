#include "core/checks/breusch_godfrey.h"

#include <array>

#include "core/checks/gram_regression.h"
#include "core/regression/column_kernels.h"
#include "core/support/distributions.h"

namespace ladderline {

BreuschGodfrey::BreuschGodfrey(const LeastSquares& fit) : fit_(fit), lagged_in_fit_(fit.basis) {}

void BreuschGodfrey::Add(const CheckBlock& block) {
  const Index n = block.rows;
  if (block.w == nullptr) {
    lagged_in_fit_.Add(block, block.lagged);
  } else {
    std::array<double, kCheckRows> weighted{};
    for (Index i = 0; i < n; ++i) weighted[i] = block.lagged[i] * block.root_w[i];
    lagged_in_fit_.Add(block, weighted.data());
  }
  double square, product;
  DotTwo(block.lagged, block.lagged, block.residual, n, &square, &product);
  lagged_lagged_ += square;
  lagged_residual_ += product;
}

TestFigures BreuschGodfrey::Finish() const {
  if (fit_.residual_df() < 2) return TestFigures::Not("there are too few rows for one more column");
  DoubleDouble rest = lagged_lagged_;
  for (const double coordinate : lagged_in_fit_.Coordinates())
    rest -= TwoProduct(coordinate, coordinate);
  const std::array<double, 1> size = {lagged_lagged_.value()};
  const Explained explained = ExplainFromGram({rest.value()}, {lagged_residual_.value()}, size);
  if (explained.rank == 0)
    return TestFigures::Not("the residuals of the rows before repeat columns already there");
  TestFigures test;
  test.df = 1;
  // Residuals come with mean square 1: their total is n.
  test.statistic = explained.sum_of_squares;
  test.p_value = ChiSquareUpperTail(test.statistic, test.df);
  return test;
}

double BreuschGodfrey::LagCorrelation() const {
  return lagged_residual_.value() / static_cast<double>(fit_.rows);
}

}  // namespace ladderline
