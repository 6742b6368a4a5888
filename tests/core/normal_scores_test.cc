#include "core/normality/normal_scores.h"

#include <gtest/gtest.h>

#include <vector>

#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::ReadJson;

// pictures.json: mpmath 1.2.1 at 40 digits. Near the middle a score has the absolute accuracy of
// the probability it stands for.
TEST(NormalScores, AreBlomsAndAntisymmetric) {
  const nlohmann::json reference = ReadJson("pictures.json");
  for (const auto& row : reference["normal_scores"]) {
    const std::size_t rank = row[0], n = row[1];
    EXPECT_NEAR(row[2], NormalScore(rank, n), 5e-15) << row;
    EXPECT_EQ(NormalScore(rank, n), -NormalScore(n + 1 - rank, n)) << row;
  }
}

TEST(NormalScores, EveryValueGetsItsPairWhereThereAreEnoughPoints) {
  const std::vector<double> x = {-3, 1, 1, 8};
  for (const std::size_t points : {4u, 5u, 1000u}) {
    const std::vector<QuantilePair> pairs = QuantilePairs(x, points);
    ASSERT_EQ(pairs.size(), x.size());
    for (std::size_t i = 0; i < x.size(); ++i) {
      EXPECT_EQ(pairs[i].value, x[i]);
      EXPECT_EQ(pairs[i].normal_score, NormalScore(i + 1, 4));
    }
  }
}

TEST(NormalScores, FewerPointsAreEvenlySpacedRanksWithBothEnds) {
  std::vector<double> x;
  for (int i = 1; i <= 101; ++i) x.push_back(i);
  std::vector<double> ranks;
  for (const QuantilePair& pair : QuantilePairs(x, 5)) {
    ranks.push_back(pair.value);
    EXPECT_EQ(pair.normal_score, NormalScore(static_cast<std::size_t>(pair.value), 101));
  }
  EXPECT_EQ(ranks, (std::vector<double>{1, 26, 51, 76, 101}));
  ASSERT_EQ(QuantilePairs(x, 1).size(), 1u);
  EXPECT_EQ(QuantilePairs(x, 1)[0].value, 51);
}

TEST(NormalScores, ScoresOfQuantilesAreThoseOfTheirRanks) {
  EXPECT_EQ(QuantileScore(0, 101), NormalScore(1, 101));
  EXPECT_EQ(QuantileScore(0.25, 101), NormalScore(26, 101));
  EXPECT_EQ(QuantileScore(0.5, 100), 0);
  EXPECT_EQ(QuantileScore(1, 101), NormalScore(101, 101));
  // Between ranks 3 and 4 of 5: between their scores, and as far from 0 as its mirror image.
  EXPECT_GT(QuantileScore(0.625, 5), NormalScore(3, 5));
  EXPECT_LT(QuantileScore(0.625, 5), NormalScore(4, 5));
  EXPECT_EQ(QuantileScore(0.625, 5), -QuantileScore(0.375, 5));
  EXPECT_EQ(QuantileScore(0.3, 1), 0);
}

TEST(NormalScores, EmptyAndSingleColumns) {
  EXPECT_TRUE(QuantilePairs({}, 10).empty());
  const std::vector<double> one = {7};
  ASSERT_EQ(QuantilePairs(one, 10).size(), 1u);
  EXPECT_EQ(QuantilePairs(one, 10)[0].normal_score, 0);
  EXPECT_EQ(QuantilePairs(one, 10)[0].value, 7);
}

}  // namespace
}  // namespace ladderline
