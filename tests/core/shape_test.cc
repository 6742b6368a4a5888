#include "core/describe/shape.h"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <string>
#include <vector>

#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::Agrees;
using testing::ReadCsvColumn;
using testing::ReadJson;

ColumnShape Of(std::vector<double> x) {
  std::sort(x.begin(), x.end());
  return ShapeOfColumn(x);
}
std::string Reading(const std::vector<double>& x) { return ShapeReading(Of(x)); }

// describe_r.json: R 4.2.2, e1071 1.7.13.
TEST(ColumnShape, FiguresAgreeWithR) {
  const nlohmann::json reference = ReadJson("describe_r.json");
  int columns = 0;
  for (const auto& [name, r] : reference["univariate"].items()) {
    if (name.find("NumAcc") != std::string::npos) continue;  // R loses digits there
    const std::size_t space = name.find(' ');
    const ColumnShape shape = Of(ReadCsvColumn(name.substr(0, space), name.substr(space + 1)));
    EXPECT_EQ(shape.rows, r["n"].get<std::size_t>()) << name;
    EXPECT_TRUE(Agrees(r["mean"], shape.mean, 13)) << name;
    EXPECT_TRUE(Agrees(r["stddev_samp"], shape.sd, 12)) << name;
    EXPECT_TRUE(Agrees(r["skewness"], shape.skewness, 10)) << name;
    EXPECT_TRUE(Agrees(r["excess_kurtosis"], shape.excess_kurtosis, 10)) << name;
    const auto& p = r["percentile_cont"];  // at 0, 0.1, 1/4, 1/3, 1/2, 3/4, 0.9, 0.99, 1
    EXPECT_TRUE(Agrees(p[0], shape.least, 15)) << name;
    EXPECT_TRUE(Agrees(p[2], shape.lower_quartile, 14)) << name;
    EXPECT_TRUE(Agrees(p[4], shape.median, 14)) << name;
    EXPECT_TRUE(Agrees(p[5], shape.upper_quartile, 14)) << name;
    EXPECT_TRUE(Agrees(p[8], shape.largest, 15)) << name;
    EXPECT_TRUE(Agrees(r["zero_share"].get<double>(),
                       static_cast<double>(shape.zeros) / static_cast<double>(shape.rows), 14))
        << name;
    ++columns;
  }
  EXPECT_GE(columns, 8);
}

TEST(ColumnShape, CountsZerosNegativesAndEnds) {
  const ColumnShape shape = Of({3, -1, 0, -0.0, 3, -7, 2, 3});
  EXPECT_EQ(shape.rows, 8u);
  EXPECT_EQ(shape.zeros, 2u);
  EXPECT_EQ(shape.negatives, 2u);
  EXPECT_EQ(shape.rows_at_least, 1u);
  EXPECT_EQ(shape.rows_at_largest, 3u);
}

TEST(ColumnShape, FiguresThatTheRowsDoNotGiveAreNaN) {
  const ColumnShape one = Of({5});
  EXPECT_EQ(one.mean, 5);
  EXPECT_TRUE(std::isnan(one.sd) && std::isnan(one.skewness) && std::isnan(one.excess_kurtosis));
  const ColumnShape three = Of({5, 6, 9});
  EXPECT_FALSE(std::isnan(three.skewness));
  EXPECT_TRUE(std::isnan(three.excess_kurtosis));
  const ColumnShape flat = Of({5, 5, 5, 5});
  EXPECT_EQ(flat.sd, 0);
  EXPECT_TRUE(std::isnan(flat.skewness) && std::isnan(flat.excess_kurtosis));
}

// The wanted sentences, each the hand-made answer to the column beside it.
TEST(ShapeReading, SaysOnWhichSideTheTailIs) {
  std::vector<double> squares, mirrored;
  for (int i = 1; i <= 40; ++i) {
    squares.push_back(std::pow(1.2, i));
    mirrored.push_back(-std::pow(1.2, i));
  }
  // Mean Σ 1.2^i / 40 = 220.33, median (1.2^20 + 1.2^21)/2 = 42.17: ratio 5.22.
  EXPECT_EQ(Reading(squares), "Long tail of large values: the mean is 5.2 times the median.");
  // Their difference is 178.15.
  EXPECT_EQ(Reading(mirrored), "Long tail of small values: the mean lies 178 below the median.");
}

TEST(ShapeReading, SaysThatBothSidesLookAlike) {
  std::vector<double> even;
  for (int i = 0; i < 60; ++i) even.push_back(100 + i % 30 * 0.1 + i * 0.01);
  EXPECT_EQ(Reading(even).substr(0, 21), "Both sides look alike");
  std::vector<double> far_out;
  for (int i = -100; i <= 100; ++i) far_out.push_back(std::pow(i, 5));
  EXPECT_EQ(Reading(far_out),
            "Both sides look alike, with more far-out values than a bell curve: mean and median "
            "are close.");
}

TEST(ShapeReading, CountsZerosAndHeapsAtTheEnds) {
  std::vector<double> cost(30, 0.0);
  for (int i = 1; i <= 70; ++i) cost.push_back(std::pow(1.1, i));
  EXPECT_NE(Reading(cost).find(", and 30% of the values are zero."), std::string::npos)
      << Reading(cost);
  std::vector<double> score(25, 100.0);
  for (int i = 1; i <= 75; ++i) score.push_back(100 - std::pow(1.05, i));
  EXPECT_NE(Reading(score).find("ail of small values"), std::string::npos) << Reading(score);
  EXPECT_NE(Reading(score).find(", and 25% of the values are 100, the largest."), std::string::npos)
      << Reading(score);
}

TEST(ShapeReading, HasAPlainAnswerForColumnsWithoutAShape) {
  EXPECT_EQ(Reading({12.5}), "A single value, 12.5.");
  EXPECT_EQ(Reading(std::vector<double>(12, 1e6)), "All 12 values are 1000000.");
  EXPECT_EQ(Reading({1, 2, 3, 5, 100}), "Only 5 values: too few to speak of a shape.");
  std::vector<double> two(20, 1.0);
  two.insert(two.end(), 30, 0.0);
  EXPECT_EQ(Reading(two), "Only two values occur: 0 in 60% of the rows, 1 in the others.");
  // Skewness 1.06 of 8 rows is within two standard errors (1.5).
  EXPECT_EQ(Reading({1, 2, 3, 4, 5, 6, 8, 13}),
            "No clear tail among so few rows: the mean is 17% above the median.");
}

TEST(ShapeReading, SurvivesAnyRangeOfDoubles) {
  constexpr double kMax = std::numeric_limits<double>::max();
  std::vector<double> wide;
  for (int i = -300; i <= 300; ++i) wide.push_back(std::pow(10.0, i));
  for (const std::vector<double>& x :
       {wide, std::vector<double>{-kMax, -kMax, -1, 0, 1, 2, 3, kMax, kMax},
        std::vector<double>{-kMax, -kMax, -kMax, -kMax, -kMax, 2, 3, kMax, kMax}}) {
    const std::string reading = Reading(x);
    EXPECT_EQ(reading.find("inf"), std::string::npos) << reading;
    EXPECT_EQ(reading.find("nan"), std::string::npos) << reading;
    EXPECT_EQ(reading.back(), '.');
  }
}

}  // namespace
}  // namespace ladderline
