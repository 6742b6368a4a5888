// A fit in combined columns from the triangle of the uncombined fit, against one of the rows.
#include "core/regression/restricted_fit.h"

#include <gtest/gtest.h>

#include <cmath>
#include <map>

#include "tests/core/regression_cases.h"
#include "tests/reference/reference.h"

namespace ladderline::testing {
namespace {

using Combination = std::vector<std::vector<RawColumn::Part>>;

// Columns: the ones, if any, then four; combined: the second and third added, the first with twice
// the ones, the fourth as it is, and one that is left out.
struct Pair {
  Case full, combined;
  Combination map;
};
Pair MakePair(bool intercept, bool weighted, double offset, double noise) {
  constexpr std::size_t kRows = 60;
  Pair pair{Case(intercept), Case(intercept), {}};
  std::vector<Column> x;
  for (std::uint64_t seed = 1; seed <= 4; ++seed)
    // In steps of 2^-20, so that sums of columns are exact.
    x.push_back(Map(Noise(kRows, seed),
                    [&](double z) { return offset + std::nearbyint(z * 0x1p20) * 0x1p-20; }));
  for (const Column& column : x) pair.full.AddNumber(column);
  const double shift = intercept ? 2 : 0;
  Column first = Map(x[0], [&](double z) { return z + shift; }), sum = x[1];
  for (std::size_t i = 0; i < kRows; ++i) sum[i] += x[2][i];
  pair.combined.AddNumber(first);
  pair.combined.AddNumber(sum);
  pair.combined.AddNumber(x[3]);
  const Column e = Noise(kRows, 9);
  Column y(kRows);
  for (std::size_t i = 0; i < kRows; ++i)
    y[i] = 3 + x[0][i] - 2 * x[1][i] + x[2][i] + 0.5 * x[3][i] + noise * e[i];
  pair.full.y = pair.combined.y = y;
  if (weighted)
    pair.full.w = pair.combined.w = Map(Noise(kRows, 12), [](double z) { return 2.5 + z; });
  const Index at = intercept ? 1 : 0;
  if (intercept) pair.map.push_back({{0, 1}});
  pair.map.push_back({{at, 1}});
  if (intercept) pair.map.back().push_back({0, 2});
  pair.map.push_back({{at + 1, 1}, {at + 2, 1}});
  pair.map.push_back({{at + 3, 1}});
  return pair;
}

TEST(RestrictedFit, IsTheFitOfTheRowsInTheCombinedColumns) {
  for (const bool intercept : {true, false}) {
    for (const bool weighted : {true, false}) {
      for (const double offset : {0.0, 1e6}) {
        SCOPED_TRACE(::testing::Message() << intercept << weighted << offset);
        const Pair pair = MakePair(intercept, weighted, offset, 1);
        const LeastSquares full = FitLeastSquares(pair.full.Source());
        const LeastSquares truth = FitLeastSquares(pair.combined.Source(), Extended::kAlways);
        const RestrictedFit found = Restrict(full.basis, pair.map);
        ASSERT_EQ(found.basis.rank(), truth.rank());
        const double digits = offset == 0 ? 12 : 9;
        const std::vector<double> expected = RawCoefficients(truth.basis),
                                  got = RawCoefficients(found.basis);
        const std::vector<double> expected_inverse = TermCoordinates(truth.basis),
                                  got_inverse = TermCoordinates(found.basis);
        const auto rank = static_cast<std::size_t>(truth.rank());
        for (std::size_t j = 0; j < rank; ++j) {
          EXPECT_TRUE(Agrees(expected[j], got[j], digits)) << j;
          double a = 0, b = 0;
          for (std::size_t i = 0; i < rank; ++i) {
            a = std::hypot(a, expected_inverse[j * rank + i]);
            b = std::hypot(b, got_inverse[j * rank + i]);
          }
          EXPECT_TRUE(Agrees(a, b, digits)) << j;
        }
        EXPECT_TRUE(Agrees(truth.residual_ss, full.residual_ss + found.added_ss, digits));
        for (std::size_t i = intercept ? 1 : 0; i < rank; ++i) {
          EXPECT_TRUE(Agrees(std::abs(truth.effect[i]), std::abs(found.effect[i]), digits)) << i;
        }
      }
    }
  }
}

TEST(RestrictedFit, LeavesOutColumnsWithoutParts) {
  Pair pair = MakePair(true, false, 0, 1);
  pair.map.insert(pair.map.begin() + 2, std::vector<RawColumn::Part>());
  const RestrictedFit found = Restrict(FitLeastSquares(pair.full.Source()).basis, pair.map);
  EXPECT_EQ(found.basis.columns, 5);
  EXPECT_EQ(found.basis.kept, (std::vector<Index>{0, 1, 3, 4}));
  const std::vector<double> truth = RawCoefficients(FitLeastSquares(pair.combined.Source()).basis);
  EXPECT_TRUE(Agrees(truth[2], RawCoefficients(found.basis)[3], 12));
}

TEST(RestrictedFit, LeavesOutWhatRepeatsEarlierColumns) {
  Pair pair = MakePair(true, false, 1e3, 1);
  pair.map.insert(pair.map.begin() + 3, {{0, 7}, {1, 3}, {2, -2}, {3, -2}});  // 7 + 3 a − 2 b
  const RestrictedFit found = Restrict(FitLeastSquares(pair.full.Source()).basis, pair.map);
  EXPECT_EQ(found.basis.kept, (std::vector<Index>{0, 1, 2, 4}));
  ASSERT_EQ(found.dropped.size(), 1u);
  EXPECT_EQ(found.dropped[0].column, 3);
  std::map<Index, double> repeats;
  for (const Repeat& repeat : found.dropped[0].repeats) repeats[repeat.column] = repeat.coefficient;
  // The first combined column is a + 2.
  EXPECT_NEAR(repeats[0], 7 - 2 * 3, 1e-6);
  EXPECT_NEAR(repeats[1], 3, 1e-12);
  EXPECT_NEAR(repeats[2], -2, 1e-12);
  const std::vector<double> truth = RawCoefficients(FitLeastSquares(pair.combined.Source()).basis);
  EXPECT_TRUE(Agrees(truth[3], RawCoefficients(found.basis)[4], 11));
}

// Where the combined columns hold all that the full fit found, nothing is added.
TEST(RestrictedFit, AddsNothingWhereNothingIsLost) {
  const Pair pair = MakePair(true, false, 0, 1);
  const LeastSquares full = FitLeastSquares(pair.full.Source());
  Combination turned = {{{0, 1}}, {{1, 1}, {2, 1}}, {{2, 3}}, {{3, 1}, {0, -7}}, {{4, 1}, {1, 2}}};
  const RestrictedFit found = Restrict(full.basis, turned);
  EXPECT_LT(found.added_ss, 1e-25 * full.residual_ss);
  // b_1 x_1 + b_2 x_2 = b_1 (x_1 + x_2) + …
  const std::vector<double> b = RawCoefficients(full.basis), c = RawCoefficients(found.basis);
  EXPECT_NEAR(c[4], b[4], 1e-13);
  EXPECT_NEAR(c[1], b[1] - 2 * b[4], 1e-13);
}

// The classical covariance is the unit matrix, in whatever coordinates; so is its image.
TEST(RestrictedFit, CarriesCovariancesByTheLinearMap) {
  const Pair pair = MakePair(true, true, 0, 1);
  const LeastSquares full = FitLeastSquares(pair.full.Source());
  const RestrictedFit found = Restrict(full.basis, pair.map);
  const auto old_rank = static_cast<std::size_t>(full.rank());
  Covariance unit;
  unit.scale = 0.25;
  unit.matrix.assign(static_cast<std::size_t>(PackedSize(full.rank())), 0);
  for (Index j = 0; j < full.rank(); ++j)
    unit.matrix[static_cast<std::size_t>(PackedIndex(j, j))] = 1;
  const Covariance image = Restrict(unit, found, std::nan(""));
  for (Index j = 0; j < found.basis.rank(); ++j) {
    for (Index i = 0; i <= j; ++i)
      EXPECT_NEAR(image.matrix[static_cast<std::size_t>(PackedIndex(i, j))], i == j ? 1 : 0, 1e-14);
  }
  EXPECT_EQ(image.scale, 0.25);

  // Of a rank-one covariance vv' every standard error is |a'v|, and a'Q' v in the new coordinates.
  std::vector<double> v(old_rank);
  for (std::size_t i = 0; i < old_rank; ++i) v[i] = 1.0 + static_cast<double>(i * i);
  Covariance one;
  one.scale = 1;
  for (std::size_t j = 0; j < old_rank; ++j)
    for (std::size_t i = 0; i <= j; ++i) one.matrix.push_back(v[i] * v[j]);
  const Covariance moved = Restrict(one, found, std::nan(""));
  const std::vector<double> errors = StandardErrors(found.basis, moved);
  const std::vector<double> terms = TermCoordinates(found.basis);
  const auto rank = static_cast<std::size_t>(found.basis.rank());
  for (std::size_t t = 0; t < rank; ++t) {
    double product = 0;
    for (std::size_t k = 0; k < rank; ++k) {
      double share = 0;
      for (std::size_t i = 0; i < old_rank; ++i)
        share += found.coordinates[k * old_rank + i] * v[i];
      product += terms[t * rank + k] * share;
    }
    EXPECT_NEAR(errors[t], std::abs(product), 1e-12 * std::abs(product));
  }

  // A direction of which no row tells stays one, or takes the variance it is given.
  one.unknown = {std::vector<double>(old_rank, 1 / std::sqrt(static_cast<double>(old_rank)))};
  EXPECT_EQ(Restrict(one, found, std::nan("")).unknown.size(), 1u);
  const Covariance filled = Restrict(one, found, 4);
  EXPECT_TRUE(filled.unknown.empty());
  for (const double error : StandardErrors(found.basis, filled)) EXPECT_TRUE(std::isfinite(error));
}

}  // namespace
}  // namespace ladderline::testing
