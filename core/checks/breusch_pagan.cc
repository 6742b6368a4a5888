#include "core/checks/breusch_pagan.h"

#include "core/regression/column_kernels.h"
#include "core/support/distributions.h"

namespace ladderline {

std::string_view SpreadObstacle(std::int64_t rows, Index rank, double total) {
  // Rounding of residuals that are equally large; they are of size 1.
  constexpr double kEqual = 1e-20;
  if (rank < 2) return "there is no column that the spread could change with";
  if (rows <= rank) return "there are too few rows for its columns";
  if (!(total > kEqual * static_cast<double>(rows))) return "all residuals are equally large";
  return {};
}

BreuschPagan::BreuschPagan(const CentredBasis& auxiliary)
    : auxiliary_(auxiliary), explained_(auxiliary) {}

void BreuschPagan::Add(const CheckBlock& block) {
  explained_.Add(block, block.spread);
  total_ += Dot(block.spread, block.spread, block.rows);
}

TestFigures BreuschPagan::Finish(std::int64_t rows) const {
  const Index rank = auxiliary_.rank();
  const std::string_view obstacle = SpreadObstacle(rows, rank, total_.value());
  if (!obstacle.empty()) return TestFigures::Not(obstacle);
  const std::vector<double> coordinates = explained_.Coordinates();
  DoubleDouble explained;
  for (Index j = 1; j < rank; ++j) explained += TwoProduct(coordinates[j], coordinates[j]);
  TestFigures test;
  test.df = static_cast<double>(rank - 1);
  test.statistic = static_cast<double>(rows) * (explained / total_).value();
  test.p_value = ChiSquareUpperTail(test.statistic, test.df);
  return test;
}

}  // namespace ladderline
