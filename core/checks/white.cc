#include "core/checks/white.h"

#include <algorithm>
#include <array>
#include <cmath>

#include "core/checks/breusch_pagan.h"
#include "core/checks/gram_regression.h"
#include "core/checks/projection_sums.h"
#include "core/regression/column_kernels.h"
#include "core/support/distributions.h"

namespace ladderline {
namespace {

constexpr Index kFittedWidth = 2;

bool TooMany(Index width) { return width * (width + 1) / 2 > kMostAuxiliaryColumns; }

}  // namespace

White::White(const CentredBasis& auxiliary, std::int64_t rows)
    : auxiliary_(auxiliary),
      rows_(static_cast<double>(rows)),
      by_fitted_(TooMany(auxiliary.rank())),
      width_(by_fitted_ ? kFittedWidth : auxiliary.rank()),
      products_(width_ * (width_ + 1) / 2),
      columns_((products_ + 1) * kCheckRows),
      sums_(products_ * (products_ + 1)) {
  std::fill_n(Column(0), kCheckRows, 1.0);
}

// Products with the column of ones, the first `width_` places, are the base columns themselves. An
// orthonormal column is taken √rows times, so that its mean square is 1.
void White::SetBase(const CheckBlock& block) {
  if (by_fitted_) {
    std::copy_n(block.fitted, block.rows, Column(1));
    return;
  }
  const std::vector<DoubleDouble>& factor = auxiliary_.factor;
  for (Index j = 1; j < width_; ++j) {
    const Index c = BlockColumn(auxiliary_, auxiliary_.kept[j]);
    const double diagonal = factor[PackedIndex(j, j)].value();
    const double centre = auxiliary_.centre[j] - block.shift[c];
    const double scale = std::sqrt(rows_) / diagonal;
    const double* x = block.x[c];
    double* z = Column(j);
    for (Index i = 0; i < block.rows; ++i) z[i] = (x[i] - centre) * scale;
    for (Index l = 0; l < j; ++l)
      SubtractMultiple(factor[PackedIndex(l, j)].value() / diagonal, Column(l), z, block.rows);
  }
}

void White::Add(const CheckBlock& block) {
  const Index n = block.rows;
  SetBase(block);
  for (Index a = 1; a < width_; ++a) {
    for (Index b = a; b < width_; ++b) {
      double* product = Column(Place(a, b));
      const double* left = Column(a);
      const double* right = Column(b);
      for (Index i = 0; i < n; ++i) product[i] = left[i] * right[i];
    }
  }
  std::copy_n(block.spread, n, Column(products_));
  for (Index a = 0; a < width_; ++a) {
    for (Index b = a; b < width_; ++b) {
      const Index row = Place(a, b);
      const double* left = Column(row);
      DoubleDouble* sums = sums_.data() + row * (products_ + 1);
      Index column = Place(b, b);
      for (; column < products_; column += 2) {
        double first, second;
        DotTwo(left, Column(column), Column(column + 1), n, &first, &second);
        sums[column] += first;
        sums[column + 1] += second;
      }
      if (column == products_) sums[column] += Dot(left, Column(column), n);
    }
  }
  total_ += Dot(block.spread, block.spread, n);
}

double White::Moment(Index a, Index b, Index c, Index d) const {
  std::array<Index, 4> factors = {a, b, c, d};
  std::sort(factors.begin(), factors.end());
  return sums_[Place(factors[0], factors[1]) * (products_ + 1) + Place(factors[2], factors[3])]
      .value();
}

TestFigures White::Finish() const {
  std::vector<double> gram, cross, size;
  std::vector<std::pair<Index, Index>> pairs;
  for (Index a = 0; a < width_; ++a) {
    for (Index b = a; b < width_; ++b) {
      pairs.emplace_back(a, b);
      for (const auto& [c, d] : pairs) gram.push_back(Moment(a, b, c, d));
      size.push_back(gram.back());
      cross.push_back(sums_[Place(a, b) * (products_ + 1) + products_].value());
    }
  }
  const Explained explained = ExplainFromGram(std::move(gram), std::move(cross), size);
  const std::string_view obstacle =
      SpreadObstacle(static_cast<std::int64_t>(rows_), explained.rank, total_.value());
  if (!obstacle.empty()) return TestFigures::Not(obstacle);
  TestFigures test;
  test.df = static_cast<double>(explained.rank - 1);
  test.statistic = rows_ * explained.sum_of_squares / total_.value();
  test.p_value = ChiSquareUpperTail(test.statistic, test.df);
  return test;
}

}  // namespace ladderline
