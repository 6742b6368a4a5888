#include "core/support/distributions.h"

#include <gtest/gtest.h>

#include <cmath>
#include <limits>
#include <string>

#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::Agrees;
using testing::ReadJson;

constexpr double kInfinity = std::numeric_limits<double>::infinity();
constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

double Number(const nlohmann::json& text) { return std::stod(text.get<std::string>()); }

// tests/reference/distributions.json: mpmath at 60 digits; tails run down to 1e-299.
class Tails : public ::testing::Test {
 protected:
  const nlohmann::json truth_ = ReadJson("distributions.json");
};

TEST_F(Tails, NormalKeepsRelativeAccuracyAndGoesBack) {
  for (const auto& row : truth_["normal"]) {
    const double z = row[0], tail = Number(row[1]);
    EXPECT_TRUE(Agrees(tail, NormalUpperTail(z), 12.5)) << row;
    EXPECT_TRUE(Agrees(tail, NormalLowerTail(-z), 12.5)) << row;
    EXPECT_TRUE(Agrees(2 * tail, NormalTwoSided(-z), 12.5)) << row;
    EXPECT_TRUE(Agrees(z, NormalUpperQuantile(tail), 13.0)) << row;
    EXPECT_TRUE(Agrees(-z, NormalQuantile(tail), 13.0)) << row;
  }
}

TEST_F(Tails, StudentTKeepsRelativeAccuracyAndGoesBack) {
  for (const auto& row : truth_["t"]) {
    const double t = row[0], df = row[1], tail = Number(row[2]);
    EXPECT_TRUE(Agrees(tail, StudentTUpperTail(t, df), 11.5)) << row;
    EXPECT_TRUE(Agrees(tail, StudentTLowerTail(-t, df), 11.5)) << row;
    EXPECT_TRUE(Agrees(2 * tail, StudentTTwoSided(-t, df), 11.5)) << row;
    // t moves by 2 to 16 units in the last place for one of a tail near a half.
    EXPECT_TRUE(Agrees(t, StudentTUpperQuantile(tail, df), 12.5)) << row;
    EXPECT_TRUE(Agrees(-t, StudentTQuantile(tail, df), 12.5)) << row;
  }
}

TEST_F(Tails, FKeepsRelativeAccuracyAndGoesBack) {
  for (const auto& row : truth_["f"]) {
    const double f = row[0], df1 = row[1], df2 = row[2], tail = Number(row[3]);
    EXPECT_TRUE(Agrees(tail, FUpperTail(f, df1, df2), 11.5)) << row;
    EXPECT_TRUE(Agrees(tail, FLowerTail(1 / f, df2, df1), 11.5)) << row;
    if (tail < 0.99) {
      EXPECT_TRUE(Agrees(f, FUpperQuantile(tail, df1, df2), 12.5)) << row;
    }
  }
}

TEST_F(Tails, ChiSquareKeepsRelativeAccuracyAndGoesBack) {
  for (const auto& row : truth_["chi_square"]) {
    const double x = row[0], df = row[1], tail = Number(row[2]);
    EXPECT_TRUE(Agrees(tail, ChiSquareUpperTail(x, df), 12.0)) << row;
    if (tail < 0.99) {
      EXPECT_TRUE(Agrees(1 - tail, ChiSquareLowerTail(x, df), 12.0)) << row;
      EXPECT_TRUE(Agrees(x, ChiSquareUpperQuantile(tail, df), 12.5)) << row;
    }
  }
}

TEST(Distributions, LowerChiSquareQuantileInvertsTheLowerTail) {
  for (double df : {0.5, 1.0, 9.0, 400.0})
    for (double p : {1e-60, 1e-8, 0.2, 0.5, 0.975})
      EXPECT_TRUE(Agrees(p, ChiSquareLowerTail(ChiSquareQuantile(p, df), df), 11.5))
          << df << ' ' << p;
}

TEST(Distributions, CriticalValueIsTwoSided) {
  for (double level : {0.5, 0.9, 0.95, 0.999})
    for (double df : {1.0, 4.0, 250.0})
      EXPECT_TRUE(Agrees(1 - level, StudentTTwoSided(StudentTCritical(level, df), df), 12.5));
  EXPECT_EQ(StudentTCritical(0, 7), 0);
  EXPECT_EQ(StudentTCritical(1, 7), kInfinity);
}

TEST(Distributions, InfiniteDegreesOfFreedomAreTheLimitingLaw) {
  EXPECT_EQ(StudentTTwoSided(2, kInfinity), NormalTwoSided(2));
  EXPECT_EQ(StudentTUpperQuantile(0.025, kInfinity), NormalUpperQuantile(0.025));
  EXPECT_EQ(FUpperTail(2, 3, kInfinity), ChiSquareUpperTail(6, 3));
  EXPECT_EQ(FUpperQuantile(0.05, 3, kInfinity), ChiSquareUpperQuantile(0.05, 3) / 3);
  EXPECT_EQ(FUpperTail(2, kInfinity, 3), ChiSquareLowerTail(1.5, 3));
  EXPECT_EQ(FUpperQuantile(0.05, kInfinity, kInfinity), 1);
  EXPECT_EQ(FUpperTail(1.5, kInfinity, kInfinity), 0);
  EXPECT_EQ(FUpperTail(0.5, kInfinity, kInfinity), 1);
}

// The t tail exceeds the normal one by the factor 1 + φ(z) z (z² + 1) / (4 df Q(z)) to first order
// (Abramowitz & Stegun 26.7.8 with 26.2.12), which is below 1 + (z² + 1)² / (4 df).
TEST(Distributions, HugeDegreesOfFreedomJoinTheNormalLaw) {
  for (double z : {0.5, 2.0, 9.0, 36.0}) {
    for (double df : {1e8, 1e10, 1e12}) {
      EXPECT_NEAR(StudentTUpperTail(z, df) / NormalUpperTail(z), 1,
                  1.01 * (z * z + 1) * (z * z + 1) / (4 * df) + 1e-11)
          << z << ' ' << df;
    }
  }
}

TEST(Distributions, EndsAndBadArguments) {
  EXPECT_EQ(NormalUpperTail(kInfinity), 0);
  EXPECT_EQ(NormalUpperTail(-kInfinity), 1);
  EXPECT_EQ(StudentTUpperTail(-kInfinity, 3), 1);
  EXPECT_EQ(StudentTTwoSided(0, 3), 1);
  EXPECT_EQ(FUpperTail(kInfinity, 2, 3), 0);
  EXPECT_EQ(FUpperTail(-1, 2, 3), 1);
  EXPECT_EQ(FLowerTail(0, 2, 3), 0);
  EXPECT_EQ(ChiSquareUpperTail(kInfinity, 2), 0);
  EXPECT_EQ(ChiSquareUpperTail(0, 2), 1);
  EXPECT_EQ(NormalQuantile(0), -kInfinity);
  EXPECT_EQ(NormalQuantile(1), kInfinity);
  EXPECT_EQ(StudentTUpperQuantile(0, 2), kInfinity);
  EXPECT_EQ(FUpperQuantile(1, 2, 2), 0);
  EXPECT_EQ(ChiSquareQuantile(0, 2), 0);
  EXPECT_EQ(ChiSquareQuantile(1, 2), kInfinity);
  for (double bad : {kNaN, -0.5, 1.5}) {
    EXPECT_TRUE(std::isnan(NormalQuantile(bad)));
    EXPECT_TRUE(std::isnan(StudentTQuantile(bad, 2)));
    EXPECT_TRUE(std::isnan(FUpperQuantile(bad, 2, 2)));
    EXPECT_TRUE(std::isnan(ChiSquareQuantile(bad, 2)));
  }
  for (double bad : {kNaN, -1.0, 0.0}) {
    EXPECT_TRUE(std::isnan(StudentTTwoSided(1, bad)));
    EXPECT_TRUE(std::isnan(StudentTCritical(0.95, bad)));
    EXPECT_TRUE(std::isnan(FUpperTail(1, bad, 2)));
    EXPECT_TRUE(std::isnan(FUpperTail(1, 2, bad)));
    EXPECT_TRUE(std::isnan(ChiSquareUpperTail(1, bad)));
  }
  EXPECT_TRUE(std::isnan(NormalTwoSided(kNaN)));
  EXPECT_TRUE(std::isnan(StudentTTwoSided(kNaN, 2)));
  EXPECT_TRUE(std::isnan(FUpperTail(kNaN, 2, 2)));
  EXPECT_TRUE(std::isnan(ChiSquareLowerTail(kNaN, 2)));
}

TEST(Distributions, ExtremeArgumentsNeitherThrowNorLeaveTheRange) {
  for (double df : {0.01, 1.0, 4e4, 1e12}) {
    for (double x : {1e-300, 1e-9, 0.3, 1.0, 4e4, 1e300}) {
      for (double tail : {StudentTTwoSided(x, df), ChiSquareUpperTail(x, df), FUpperTail(x, df, 1),
                          FUpperTail(x, 2, df), FUpperTail(x, df, df)}) {
        EXPECT_GE(tail, 0) << x << ' ' << df;
        EXPECT_LE(tail, 1) << x << ' ' << df;
      }
    }
    for (double q : {1e-300, 1e-9, 0.3, 0.999}) {
      for (double x : {ChiSquareUpperQuantile(q, df), FUpperQuantile(q, df, 1),
                       FUpperQuantile(q, 2, df), std::abs(StudentTUpperQuantile(q, df))}) {
        EXPECT_GE(x, 0) << q << ' ' << df;
      }
    }
  }
}

}  // namespace
}  // namespace ladderline
