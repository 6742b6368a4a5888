#include "core/chart/axis.h"

#include <gtest/gtest.h>

#include <cmath>
#include <limits>
#include <utility>

#include "core/chart/svg.h"

namespace ladderline {
namespace {

constexpr double kMost = std::numeric_limits<double>::max();
constexpr double kLeast = std::numeric_limits<double>::denorm_min();

// Expected ticks by hand.
TEST(Axis, TicksAreReadableAndRoundAxesEndAtThem) {
  const Axis round = RoundAxis(3, 97, 5);
  EXPECT_EQ(round.ticks, (std::vector<double>{0, 20, 40, 60, 80, 100}));
  EXPECT_EQ(round.low, 0);
  EXPECT_EQ(round.high, 100);
  const Axis tight = TightAxis(3, 97, 5);
  EXPECT_EQ(tight.ticks, (std::vector<double>{20, 40, 60, 80}));
  EXPECT_EQ(tight.low, 3);
  EXPECT_EQ(RoundAxis(0.1, 0.3, 4).ticks, (std::vector<double>{0.1, 0.15, 0.2, 0.25, 0.3}));
  EXPECT_EQ(RoundAxis(0, 3, 5, true).ticks, (std::vector<double>{0, 1, 2, 3}));
  EXPECT_EQ(RoundAxis(0, 1, 5, true).ticks, (std::vector<double>{0, 1}));
}

TEST(Axis, AnyRangeHasTicksInItAndPlacesInOrder) {
  for (const auto& [low, high] : {std::pair{0.0, 0.0},
                                  {5.0, 5.0},
                                  {-kMost, kMost},
                                  {kMost, kMost},
                                  {-kMost, -kMost},
                                  {kLeast, kLeast},
                                  {0.0, kLeast},
                                  {1e9, 1e9 + 1e-6},
                                  {-1e-300, 2e-300},
                                  {0.1, 1e12},
                                  {-0.0, 0.0},
                                  {1e300, 1e300 + 1e285}}) {
    for (const std::size_t most : {2u, 3u, 6u}) {
      for (const Axis& axis : {RoundAxis(low, high, most), TightAxis(low, high, most),
                               RoundAxis(low, high, most, true)}) {
        EXPECT_LT(axis.low, axis.high) << low;
        EXPECT_LE(axis.low, low);
        EXPECT_GE(axis.high, high);
        EXPECT_LE(axis.ticks.size(), most + 1);
        double before = -0.001;
        for (const double tick : axis.ticks) {
          EXPECT_GT(axis.Place(tick), before) << low << " to " << high;
          EXPECT_LE(axis.Place(tick), 1);
          before = axis.Place(tick);
        }
        EXPECT_EQ(axis.Place(axis.low), 0);
        EXPECT_EQ(axis.Place(axis.high), 1);
      }
    }
  }
}

TEST(Axis, LabelsStayInTheChartAndApart) {
  for (const auto& [low, high] :
       {std::pair{0.0, 1.0}, {-kMost, kMost}, {1e9, 1e9 + 1e-5}, {123456789.0, 123456999.0}}) {
    for (const std::size_t most : {2u, 6u}) {
      double end = -1;
      int labels = 0;
      for (const PlacedTick& tick : PlaceTicks(TightAxis(low, high, most), 60, 290)) {
        if (tick.label.empty()) continue;
        const double half = TextWidth(tick.label, kTextSize) / 2;
        EXPECT_GT(tick.label_x - half, end + (end < 0 ? 0 : 4)) << tick.label;
        EXPECT_LE(tick.label_x + half, kChartWidth + 1e-9);
        end = tick.label_x + half;
        ++labels;
      }
      EXPECT_GE(labels, 1);
    }
    const Axis fitting =
        FittingAxis(60, 290, [&](std::size_t most) { return RoundAxis(low, high, most); });
    EXPECT_GE(fitting.ticks.size(), 2u);
  }
}

}  // namespace
}  // namespace ladderline
