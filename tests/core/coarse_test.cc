// Rounding and pooling by hand.
#include "core/release/coarse.h"

#include <gtest/gtest.h>

#include <cmath>
#include <utility>

namespace ladderline {
namespace {

TEST(Coarse, EndsGoOutwardsByTheDigitsOfValueOrRange) {
  EXPECT_EQ(Coarse(1503, 1500, 2, Towards::kUp), 1600);
  EXPECT_EQ(Coarse(1503, 1500, 2, Towards::kDown), 1500);
  EXPECT_EQ(Coarse(3.27, 1500, 2, Towards::kDown), 3.2);
  EXPECT_EQ(Coarse(-3.27, 1500, 2, Towards::kDown), -3.3);
  EXPECT_EQ(Coarse(19782, 365, 2, Towards::kDown), 19780);  // days of one year: to ten
  EXPECT_EQ(Coarse(0, 365, 2, Towards::kDown), 0);
  EXPECT_EQ(Coarse(0.3, 1, 2, Towards::kUp), 0.3);
  EXPECT_EQ(Coarse(0.7, 1, 2, Towards::kDown), 0.7);
  EXPECT_EQ(Coarse(214.6, 1000, 3, Towards::kNearest), 215);
  EXPECT_EQ(Coarse(7, 0, 2, Towards::kUp), 7);
}

TEST(Coarse, CountsGoUpToTheNextMultiple) {
  EXPECT_EQ(RoundedUp(0, 5), 0);
  EXPECT_EQ(RoundedUp(1, 5), 5);
  EXPECT_EQ(RoundedUp(5, 5), 5);
  EXPECT_EQ(RoundedUp(6, 5), 10);
}

TEST(Coarse, ARangeStaysInsideTheDomainOfItsTransform) {
  ModelColumn column;
  column.transform = *Transform::TryMake(TransformKind::kLogOffset, std::array{-100.0});
  column.observed_low = 101.234;
  column.lower_quartile = 150.123;
  column.median = 204.56;
  column.upper_quartile = 333.33;
  column.observed_high = 1503;
  column.mean = 250.5;
  column.sd = 99.99;
  CoarsenRange(column);
  EXPECT_EQ(column.observed_low, 101);
  EXPECT_EQ(column.lower_quartile, 150);
  EXPECT_EQ(column.median, 205);
  EXPECT_EQ(column.upper_quartile, 333);
  EXPECT_EQ(column.observed_high, 1600);
  EXPECT_EQ(column.sd, 100);
}

// Steps by hand: 79 / 20 → 5, 87 days / 20 → 5, 0.9 / 20 → 0.05, 900000 / 20 → 50000.
TEST(Coarse, EndsOfARangeGoToAStepOfTheRange) {
  const auto ends = [](double low, double high, Transform transform = Transform(),
                       ColumnRole role = ColumnRole::kPredictor) {
    ModelColumn column;
    column.transform = transform;
    column.role = role;
    column.observed_low = column.lower_quartile = column.median = column.mean = low;
    column.observed_high = column.upper_quartile = high;
    CoarsenRange(column);
    return std::pair(column.observed_low, column.observed_high);
  };
  EXPECT_EQ(ends(18, 97), std::pair(15.0, 100.0));
  EXPECT_EQ(ends(0, 97), std::pair(0.0, 100.0));
  EXPECT_EQ(ends(19725, 19812), std::pair(19725.0, 19815.0));
  EXPECT_EQ(ends(19726, 19813), std::pair(19725.0, 19815.0));
  EXPECT_EQ(ends(0.07, 0.97), std::pair(0.05, 1.0));
  EXPECT_EQ(ends(-18, 61), std::pair(-20.0, 65.0));
  EXPECT_EQ(ends(3, 900003), std::pair(0.0, 950000.0));
  const Transform log = *Transform::TryMake(TransformKind::kLogOffset, std::array{0.0});
  EXPECT_EQ(ends(3, 900003, log), std::pair(2.0, 950000.0));
  EXPECT_EQ(ends(37, 937, Transform(), ColumnRole::kWeight), std::pair(20.0, 950.0));
}

TEST(Coarse, BinsOfFewRowsAreTakenIntoTheirNeighbours) {
  const auto coarse = [](std::vector<std::size_t> rows) {
    std::vector<HistogramBin> bins;
    for (std::size_t i = 0; i < rows.size(); ++i)
      bins.push_back({static_cast<double>(i), static_cast<double>(i + 1), rows[i]});
    std::string text;
    for (const HistogramBin& bin : CoarseBins(bins, 5))
      text += std::to_string(static_cast<int>(bin.low)) + "-" +
              std::to_string(static_cast<int>(bin.high)) + ":" + std::to_string(bin.rows) + " ";
    return text;
  };
  EXPECT_EQ(coarse({9, 30, 0, 6}), "0-1:9 1-2:30 2-3:0 3-4:6 ");
  EXPECT_EQ(coarse({1, 2, 3, 30}), "0-3:6 3-4:30 ");
  EXPECT_EQ(coarse({30, 8, 3, 0, 1}), "0-1:30 1-5:12 ");
  EXPECT_EQ(coarse({30, 0, 0, 1}), "0-4:31 ");
}

TEST(Coarse, ResidualsKeepWhatEnoughRowsStandFor) {
  ModelResiduals residuals;
  residuals.quantiles = {-9.1234, -5.1234, -3.1234, -2.1234, -1.1234, 0.01234,
                         1.1234,  2.1234,  3.1234,  5.1234,  9.1234};
  // Four bins of one unit: rows, mean, sd.
  residuals.bins = {{0, 1, 30, 0.5, 1}, {1, 2, 4, -0.25, 2}, {2, 3, 40, 0, 1}, {3, 4, 26, 1, 0.5}};
  const ModelResiduals coarse = CoarseResiduals(residuals, 100, 5);
  for (const std::size_t i : {0, 1, 9, 10}) EXPECT_TRUE(std::isnan(coarse.quantiles[i])) << i;
  EXPECT_EQ(coarse.quantiles[2], -3.12);
  EXPECT_EQ(coarse.quantiles[5], 0.0123);
  ASSERT_EQ(coarse.bins.size(), 2u);
  EXPECT_EQ(coarse.bins[0].rows, 34);
  EXPECT_EQ(coarse.bins[0].fitted_high, 2);
  const double mean = (30 * 0.5 - 4 * 0.25) / 34;
  EXPECT_NEAR(coarse.bins[0].mean, mean, 1e-15);
  const double squares =
      29 * 1 + 3 * 4 + 30 * std::pow(0.5 - mean, 2) + 4 * std::pow(-0.25 - mean, 2);
  EXPECT_NEAR(coarse.bins[0].sd, std::sqrt(squares / 33), 1e-15);
  EXPECT_EQ(coarse.bins[1].rows, 66);
}

}  // namespace
}  // namespace ladderline
