#include "core/elementary/elementary.h"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <cstring>
#include <limits>
#include <map>
#include <string>
#include <vector>

#include "tests/reference/reference.h"

namespace ladderline {
namespace {

constexpr double kInf = std::numeric_limits<double>::infinity();
constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr double kLargest = std::numeric_limits<double>::max();
constexpr double kLeast = std::numeric_limits<double>::denorm_min();

struct Point {
  double x, p, head, tail;  // the true value is head + tail, head the nearest double
};

// tests/reference/elementary_values.py: mpmath 1.2.1 at 80 digits.
const std::map<std::string, std::vector<Point>>& Points() {
  static const auto points = [] {
    std::map<std::string, std::vector<Point>> by_function;
    auto columns = testing::ReadCsvText("elementary/values.csv");
    const auto number = [&](const char* column, size_t row) {
      return std::strtod(columns[column][row].c_str(), nullptr);
    };
    for (size_t i = 0; i < columns["function"].size(); ++i)
      by_function[columns["function"][i]].push_back(
          {number("x", i), number("p", i), number("head", i), number("tail", i)});
    return by_function;
  }();
  return points;
}

// In units of the last place of the true value (of the least number where that is subnormal).
double ErrorInUlps(const Point& point, double value) {
  const double size = std::fabs(point.head);
  const double ulp = std::nextafter(size, kInf) - size;
  if (std::isinf(ulp)) return std::fabs((value - point.head) - point.tail) / 0x1p971;
  return std::fabs((value - point.head) / ulp - point.tail / ulp);
}

bool SameBits(double a, double b) { return std::memcmp(&a, &b, sizeof a) == 0; }

template <class Function>
void ExpectWithin(double ulps, const char* name, Function function) {
  const std::vector<Point>& points = Points().at(name);
  ASSERT_GE(points.size(), 300u);
  double worst = 0;
  for (const Point& point : points) {
    const double error = ErrorInUlps(point, function(point));
    EXPECT_LE(error, ulps) << name << " at " << std::hexfloat << point.x << ", " << point.p;
    worst = std::max(worst, error);
  }
  std::printf("%s: largest error %.4f ulp at %zu points\n", name, worst, points.size());
}

TEST(Elementary, ErrorsStayWithinTheContract) {
  ExpectWithin(0.6, "exp", [](const Point& a) { return Exp(a.x); });
  ExpectWithin(0.6, "expm1", [](const Point& a) { return Expm1(a.x); });
  ExpectWithin(0.6, "log", [](const Point& a) { return Log(a.x); });
  ExpectWithin(0.6, "log1p", [](const Point& a) { return Log1p(a.x); });
  ExpectWithin(0.6, "sinh", [](const Point& a) { return Sinh(a.x); });
  ExpectWithin(0.6, "asinh", [](const Point& a) { return Asinh(a.x); });
  ExpectWithin(1.0, "pow", [](const Point& a) { return Pow(a.x, a.p); });
}

TEST(Elementary, PolesAndOverflowsFollowIeee) {
  EXPECT_EQ(Exp(0.0), 1);
  EXPECT_EQ(Exp(kInf), kInf);
  EXPECT_EQ(Exp(710.0), kInf);
  EXPECT_EQ(Exp(kLargest), kInf);
  EXPECT_EQ(Exp(-kInf), 0);
  EXPECT_EQ(Exp(-746.0), 0);
  EXPECT_EQ(Exp(-kLargest), 0);
  EXPECT_EQ(Expm1(kInf), kInf);
  EXPECT_EQ(Expm1(710.0), kInf);
  EXPECT_EQ(Expm1(-kInf), -1);
  EXPECT_EQ(Log(1.0), 0);
  EXPECT_EQ(Log(0.0), -kInf);
  EXPECT_EQ(Log(-0.0), -kInf);
  EXPECT_EQ(Log(kInf), kInf);
  EXPECT_EQ(Log1p(-1.0), -kInf);
  EXPECT_EQ(Log1p(kInf), kInf);
  EXPECT_EQ(Sinh(kInf), kInf);
  EXPECT_EQ(Sinh(-711.0), -kInf);
  EXPECT_EQ(Asinh(kInf), kInf);
  EXPECT_EQ(Asinh(-kInf), -kInf);
  for (double outside : {-kLeast, -1.0, -kInf}) EXPECT_TRUE(std::isnan(Log(outside)));
  for (double outside : {-1.0000000000000002, -kInf}) EXPECT_TRUE(std::isnan(Log1p(outside)));
}

TEST(Elementary, ZeroKeepsItsSign) {
  for (auto function : {Expm1, Log1p, Sinh, Asinh}) {
    EXPECT_TRUE(SameBits(function(0.0), 0.0));
    EXPECT_TRUE(SameBits(function(-0.0), -0.0));
  }
}

TEST(Elementary, NanStaysNan) {
  for (auto function : {Exp, Expm1, Log, Log1p, Sinh, Asinh})
    EXPECT_TRUE(std::isnan(function(kNaN)));
  EXPECT_TRUE(std::isnan(Pow(kNaN, 0)));
  EXPECT_TRUE(std::isnan(Pow(1, kNaN)));
}

TEST(Elementary, PowAtItsEdges) {
  EXPECT_EQ(Pow(0, 2), 0);
  EXPECT_EQ(Pow(-0.0, 0.5), 0);
  EXPECT_EQ(Pow(0, 0), 1);
  EXPECT_EQ(Pow(0, -1), kInf);
  EXPECT_EQ(Pow(5, 0), 1);
  EXPECT_EQ(Pow(1, kLargest), 1);
  EXPECT_EQ(Pow(1, kInf), 1);
  EXPECT_EQ(Pow(kInf, 0.5), kInf);
  EXPECT_EQ(Pow(kInf, -0.5), 0);
  EXPECT_EQ(Pow(2, kInf), kInf);
  EXPECT_EQ(Pow(2, -kInf), 0);
  EXPECT_EQ(Pow(0.5, kInf), 0);
  EXPECT_EQ(Pow(0.5, -kInf), kInf);
  EXPECT_EQ(Pow(10, 309), kInf);
  EXPECT_EQ(Pow(10, -324), 0);
  EXPECT_EQ(Pow(2, kLargest), kInf);
  EXPECT_EQ(Pow(kLargest, kLeast), 1);
  for (double p : {0.0, 1.0, 2.0, 0.5, kInf}) EXPECT_TRUE(std::isnan(Pow(-1, p)));
}

TEST(Elementary, PowersOfTwoAreExact) {
  for (int k = -1074; k <= 1023; ++k) {
    EXPECT_EQ(Pow(2, k), std::ldexp(1.0, k)) << k;
    EXPECT_EQ(Pow(0.25, -0.5 * k), std::ldexp(1.0, k)) << k;
  }
}

TEST(Elementary, BlocksAreTheScalarsBitForBit) {
  std::vector<double> x = {0.0, -0.0, kInf, -kInf, kNaN, kLeast, -kLeast, kLargest, -kLargest, 1.0};
  for (const auto& [name, points] : Points())
    for (const Point& point : points) x.push_back(point.x);
  for (auto [block, scalar] :
       {std::pair{&ExpBlock, &Exp}, std::pair{&LogBlock, &Log}, std::pair{&Log1pBlock, &Log1p}}) {
    for (size_t n : {size_t{0}, size_t{1}, size_t{127}, size_t{128}, size_t{129}, x.size()}) {
      std::vector<double> out(n + 1, 42);
      block(x.data(), out.data(), n);
      for (size_t i = 0; i < n; ++i) {
        const double expected = scalar(x[i]);
        EXPECT_TRUE(SameBits(out[i], expected) || (std::isnan(out[i]) && std::isnan(expected)))
            << std::hexfloat << x[i];
      }
      EXPECT_EQ(out[n], 42);
    }
    std::vector<double> in_place = x, apart(x.size());
    block(in_place.data(), in_place.data(), x.size());
    block(x.data(), apart.data(), x.size());
    EXPECT_EQ(std::memcmp(in_place.data(), apart.data(), x.size() * sizeof(double)), 0);
  }
}

}  // namespace
}  // namespace ladderline
