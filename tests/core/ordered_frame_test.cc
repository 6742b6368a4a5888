#include "core/describe/ordered_frame.h"

#include <algorithm>
#include <cmath>
#include <deque>
#include <functional>
#include <limits>
#include <random>
#include <vector>

#include "tests/reference/reference.h"

namespace ladderline {
namespace {

constexpr double kInfinity = std::numeric_limits<double>::infinity();

// Medians by the definition: the middle one of the values in order, or halfway between two.
double MedianOf(std::vector<double> values) {
  std::sort(values.begin(), values.end());
  const size_t n = values.size();
  return n % 2 == 1 ? values[n / 2] : std::lerp(values[n / 2 - 1], values[n / 2], 0.5);
}
double MedianAbsDevOf(std::vector<double> values) {
  const double median = MedianOf(values);
  for (double& x : values) x = std::abs(x - median);
  return MedianOf(values);
}

TEST(OrderedFrame, MatchesR) {
  // tests/reference/describe_r.R: R 4.2, median, mad(constant = 1), quantile types 7 and 1.
  const auto reference = testing::ReadJson("describe_r.json");
  const auto probabilities = reference["probabilities"].get<std::vector<double>>();
  for (const auto& [key, r] : reference["univariate"].items()) {
    const size_t blank = key.find(' ');
    // As a group, asked once per frame; then in order, after rows have come and gone.
    for (const bool moving : {false, true}) {
      OrderedFrame frame, again;
      for (OrderedFrame* f : {&frame, &again}) {
        for (int i = 0; moving && i < 3; ++i) f->Add(1e9 * i);
        for (const double x : testing::ReadCsvColumn(key.substr(0, blank), key.substr(blank + 1)))
          f->Add(x);
        for (int i = 0; moving && i < 3; ++i) f->Remove(1e9 * i);
      }
      EXPECT_TRUE(testing::Agrees(r["median"], frame.Median(), 15)) << key;
      EXPECT_TRUE(testing::Agrees(r["median_abs_dev"], again.MedianAbsDev(), 14)) << key;
      for (size_t i = 0; i < probabilities.size(); ++i) {
        const double p = probabilities[i];
        EXPECT_TRUE(testing::Agrees(r["percentile_cont"][i], frame.PercentileCont(p), 14)) << key;
        EXPECT_EQ(r["percentile_disc"][i].get<double>(), frame.PercentileDisc(p)) << key;
      }
    }
  }
}

TEST(OrderedFrame, MovingFramesEqualTheDefinition) {
  std::mt19937_64 random(5);
  const std::function<double(int)> series[] = {
      [&](int) { return std::exp(std::normal_distribution()(random)); },
      [&](int) { return static_cast<double>(random() % 7); },  // ties
      [](int i) { return static_cast<double>(i); },            // always a new largest
      [](int i) { return -static_cast<double>(i); },
      [](int i) { return i % 50 == 0 ? 1e15 : 0.1; },
      [](int) { return 2.5; },
  };
  for (const auto& value : series) {
    for (const size_t length : {1u, 2u, 3u, 10u, 101u, 3000u}) {
      OrderedFrame frame;
      std::deque<double> rows;
      for (int i = 0; i < 7000; ++i) {
        rows.push_back(value(i));
        frame.Add(rows.back());
        if (rows.size() > length) {
          frame.Remove(rows.front());
          rows.pop_front();
        }
        if (length > 20 && i % 171 != 0) continue;
        const std::vector<double> now(rows.begin(), rows.end());
        ASSERT_EQ(frame.size(), now.size());
        ASSERT_EQ(frame.Median(), MedianOf(now)) << length << " at " << i;
        ASSERT_EQ(frame.MedianAbsDev(), MedianAbsDevOf(now)) << length << " at " << i;
        ASSERT_EQ(frame.PercentileCont(0), *std::min_element(now.begin(), now.end()));
        ASSERT_EQ(frame.PercentileDisc(1), *std::max_element(now.begin(), now.end()));
      }
    }
  }
}

TEST(OrderedFrame, AGroupAskedOnceOrOftenSaysTheSame) {
  std::mt19937_64 random(6);
  for (const int n : {1, 2, 999, 20000}) {
    OrderedFrame frame, other;
    for (int i = 0; i < n; ++i) {
      const double x = std::normal_distribution()(random);
      frame.Add(x);
      other.Add(x);
    }
    const double median = frame.Median();
    const double deviation = other.MedianAbsDev();
    for (int i = 0; i < 3; ++i) {
      EXPECT_EQ(frame.Median(), median);
      EXPECT_EQ(frame.MedianAbsDev(), deviation);
    }
  }
}

TEST(OrderedFrame, ValuesLeaveInAnyOrder) {
  std::mt19937_64 random(8);
  std::vector<double> values;
  OrderedFrame frame;
  for (int i = 0; i < 20000; ++i) {
    values.push_back(static_cast<double>(random() % 5000));
    frame.Add(values.back());
  }
  std::shuffle(values.begin(), values.end(), random);
  while (values.size() > 1) {
    frame.Remove(values.back());
    values.pop_back();
    if (values.size() % 613 != 0) continue;
    ASSERT_EQ(frame.Median(), MedianOf(values));
  }
  EXPECT_EQ(frame.Median(), values[0]);
}

TEST(OrderedFrame, EdgeCases) {
  OrderedFrame frame;
  EXPECT_TRUE(std::isnan(frame.Median()));
  EXPECT_TRUE(std::isnan(frame.PercentileDisc(0.5)));
  EXPECT_TRUE(std::isnan(frame.MedianAbsDev()));
  frame.Add(4);
  EXPECT_EQ(frame.Median(), 4);
  EXPECT_EQ(frame.MedianAbsDev(), 0);
  frame.Remove(4);
  EXPECT_TRUE(std::isnan(frame.Median())) << "all rows have left";
  EXPECT_TRUE(std::isnan(frame.MedianAbsDev()));
  for (int i = 0; i < 5; ++i) frame.Add(0.1);
  EXPECT_EQ(frame.PercentileCont(0.3), 0.1) << "constant";
  EXPECT_EQ(frame.MedianAbsDev(), 0);
  OrderedFrame zeros;
  for (const double x : {-0.0, -0.0, -0.0}) zeros.Add(x);
  EXPECT_FALSE(std::signbit(zeros.Median())) << "minus zero";
  OrderedFrame infinite;
  for (const double x : {kInfinity, 1.0, 2.0}) infinite.Add(x);
  EXPECT_EQ(infinite.Median(), 2);
  EXPECT_EQ(infinite.PercentileCont(1), kInfinity);
}

}  // namespace
}  // namespace ladderline
