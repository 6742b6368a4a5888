#include "core/describe/means.h"

#include <cmath>
#include <limits>
#include <random>
#include <vector>

#include "core/describe/trailing_score.h"
#include "core/describe/value_sum.h"
#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::Agrees;
constexpr double kInfinity = std::numeric_limits<double>::infinity();
constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

template <class State>
double Of(const std::vector<double>& rows) {
  State state;
  for (const double x : rows) state.Add(x);
  return state.Value();
}

// The same after other rows have come and gone.
template <class State>
double AsFrame(const std::vector<double>& rows) {
  State state;
  const double others[] = {1e-300, 3, 1e300, 0, -5, 1e-9};
  for (const double x : others) state.Add(x);
  for (const double x : rows) state.Add(x);
  for (const double x : others) state.Remove(x);
  return state.Value();
}

TEST(Means, MatchFiftyDigits) {
  // tests/reference/describe_means.py: mpmath, 50 digits.
  const auto reference = testing::ReadJson("describe_means.json");
  const auto check = [](const std::vector<double>& rows, const nlohmann::json& truth,
                        const std::string& name) {
    const double geometric = std::stod(truth["geometric_mean"].get<std::string>());
    const double harmonic = std::stod(truth["harmonic_mean"].get<std::string>());
    EXPECT_TRUE(Agrees(geometric, Of<GeometricMean>(rows), 15)) << name;
    EXPECT_TRUE(Agrees(geometric, AsFrame<GeometricMean>(rows), 15)) << name;
    EXPECT_TRUE(Agrees(harmonic, Of<HarmonicMean>(rows), 15)) << name;
    EXPECT_TRUE(Agrees(harmonic, AsFrame<HarmonicMean>(rows), 15)) << name;
  };
  for (const auto& [key, truth] : reference["columns"].items()) {
    const size_t blank = key.find(' ');
    check(testing::ReadCsvColumn(key.substr(0, blank), key.substr(blank + 1)), truth, key);
  }
  check(reference["wide"]["rows"].get<std::vector<double>>(), reference["wide"], "wide");
}

TEST(Means, MatchR) {
  // tests/reference/describe_r.R: R 4.2, exp(mean(log(x))), 1/mean(1/x), mean(x == 0).
  const nlohmann::json reference = testing::ReadJson("describe_r.json");
  for (const auto& [key, r] : reference["univariate"].items()) {
    const size_t blank = key.find(' ');
    const auto rows = testing::ReadCsvColumn(key.substr(0, blank), key.substr(blank + 1));
    EXPECT_TRUE(Agrees(r["zero_share"], Of<ZeroShare>(rows), 15)) << key;
    if (r["geometric_mean"].is_null()) continue;
    EXPECT_TRUE(Agrees(r["geometric_mean"], Of<GeometricMean>(rows), 12)) << key;
    EXPECT_TRUE(Agrees(r["harmonic_mean"], Of<HarmonicMean>(rows), 12)) << key;
  }
}

TEST(Means, EdgeCases) {
  struct Edge {
    const char* name;
    std::vector<double> rows;
    double geometric, harmonic, zero_share;
  };
  constexpr double kNoMatter = -1;  // no closed form
  const Edge edges[] = {
      {"empty", {}, kNaN, kNaN, kNaN},
      {"one row", {8}, 8, 8, 0},
      {"constant", {8, 8, 8}, 8, 8, 0},
      {"a zero", {2, 0, 8, 5}, 0, 0, 0.25},
      {"a negative", {2, -8}, kNaN, kNaN, 0},
      {"a zero and a negative", {0, -8}, kNaN, kNaN, 0.5},
      {"NaN", {2, kNaN}, kNaN, kNaN, kNaN},
      {"infinity", {2, kInfinity, 0}, kNaN, kNaN, kNaN},
      {"the smallest number", {0x1p-1074, 0x1p-1074}, 0x1p-1074, 0x1p-1074, 0},
      {"tiny ones", {0x1p-1030, 0x1.8p-1029}, kNoMatter, 0x1.8p-1030, 0},  // 2/(1 + 1/3)
      {"a tiny one among others", {0x1p-1030, 1, 2, 0x1p1000}, kNoMatter, 0x1p-1028, 0},
  };
  const auto same = [](double a, double b) { return a == b || (std::isnan(a) && std::isnan(b)); };
  for (const Edge& edge : edges) {
    if (edge.geometric != kNoMatter) {
      EXPECT_TRUE(same(Of<GeometricMean>(edge.rows), edge.geometric)) << edge.name;
      EXPECT_TRUE(same(AsFrame<GeometricMean>(edge.rows), edge.geometric)) << edge.name;
    }
    EXPECT_TRUE(same(Of<HarmonicMean>(edge.rows), edge.harmonic)) << edge.name;
    EXPECT_TRUE(same(AsFrame<HarmonicMean>(edge.rows), edge.harmonic)) << edge.name;
    EXPECT_TRUE(same(Of<ZeroShare>(edge.rows), edge.zero_share)) << edge.name;
    EXPECT_TRUE(same(AsFrame<ZeroShare>(edge.rows), edge.zero_share)) << edge.name;
  }
}

TEST(ValueSum, WholeNumbersStayWholeAndExact) {
  constexpr std::int64_t kMost = std::numeric_limits<std::int64_t>::max();
  constexpr std::int64_t kLeast = std::numeric_limits<std::int64_t>::min();
  ValueSum sum;
  EXPECT_FALSE(sum.Whole().has_value()) << "empty";
  EXPECT_TRUE(std::isnan(sum.Real())) << "empty";
  // 2^53 + 1 is no double.
  sum.Add(std::int64_t{1} << 53);
  sum.Add(std::int64_t{1});
  EXPECT_EQ(sum.Whole(), (std::int64_t{1} << 53) + 1);
  // Beyond the range and back.
  sum.Add(kMost);
  EXPECT_FALSE(sum.Whole().has_value());
  EXPECT_EQ(sum.Real(), 0x1p63 + 0x1p53) << "as a double where no integer holds it";
  sum.Add(kLeast);
  EXPECT_EQ(sum.Whole(), std::int64_t{1} << 53);
  sum.Add(kLeast);
  sum.Add(kLeast);
  EXPECT_FALSE(sum.Whole().has_value());
  sum.Remove(std::int64_t{1} << 53);
  sum.Remove(std::int64_t{1});
  sum.Remove(kMost);
  sum.Remove(kLeast);
  sum.Remove(kLeast);
  EXPECT_EQ(sum.Whole(), kLeast);
}

TEST(ValueSum, OneOtherNumberMakesItReal) {
  ValueSum sum;
  sum.Add(0.5);
  sum.Add(std::int64_t{3});
  EXPECT_FALSE(sum.Whole().has_value());
  EXPECT_EQ(sum.Real(), 3.5);
  sum.Remove(0.5);
  EXPECT_EQ(sum.Whole(), 3);
}

TEST(ValueSum, CancellationLosesNothing) {
  ValueSum sum;
  for (const double x : {1e16, 1.0, -1e16}) sum.Add(x);
  EXPECT_EQ(sum.Real(), 1);
  // 30,000 times the double nearest to 0.1, 0.10000000000000000555, is 3000.00000000000016653;
  // the nearest double is 3000.
  ValueSum tenths;
  tenths.Add(1e12);
  for (int i = 0; i < 30000; ++i) tenths.Add(0.1);
  tenths.Remove(1e12);
  EXPECT_EQ(tenths.Real(), 3000);
}

TEST(TrailingScore, IsTheLastRowAgainstThoseBeforeIt) {
  TrailingScore score;
  EXPECT_TRUE(std::isnan(score.Value())) << "empty";
  score.Add(2);
  EXPECT_TRUE(std::isnan(score.Value())) << "no earlier row";
  score.Add(4);
  EXPECT_TRUE(std::isnan(score.Value())) << "one earlier row";
  score.Add(10);
  // Earlier rows 2 and 4: mean 3, sd √2.
  EXPECT_TRUE(Agrees(7 / std::sqrt(2.0), score.Value(), 15));
  score.Add(std::nullopt);
  EXPECT_TRUE(std::isnan(score.Value())) << "the last row has no value";
  score.Add(1);
  score.Remove(2);
  // Earlier rows 4, 10 and one without a value: mean 7, sd √18.
  EXPECT_TRUE(Agrees(-6 / std::sqrt(18.0), score.Value(), 15));
  score.Remove(4);
  EXPECT_TRUE(std::isnan(score.Value())) << "one earlier value is left";
  score.Remove(10);
  score.Remove(std::nullopt);
  score.Remove(1);
  EXPECT_TRUE(std::isnan(score.Value())) << "all rows have left";
  for (const double x : {5.0, 5.0, 6.0}) score.Add(x);
  EXPECT_TRUE(std::isnan(score.Value())) << "no spread among the earlier rows";
}

TEST(TrailingScore, MovesWithoutDrift) {
  std::mt19937_64 random(3);
  std::normal_distribution<double> noise(0, 1e-3);
  std::vector<double> rows(5000);
  for (double& x : rows) x = 1e9 + noise(random);
  rows[100] += 1e6;
  TrailingScore score;
  for (size_t i = 0; i < rows.size(); ++i) {
    score.Add(rows[i]);
    if (i > 20) score.Remove(rows[i - 21]);
    const double z = score.Value();
    if (i < 21) continue;
    // The definition in long double, from the first row on; 20 rows before the last.
    long double mean = 0, squares = 0;
    const double first = rows[i - 20];
    for (size_t k = i - 20; k < i; ++k) mean += (rows[k] - first) / 20.0L;
    for (size_t k = i - 20; k < i; ++k)
      squares += (rows[k] - first - mean) * (rows[k] - first - mean);
    const long double truth = (rows[i] - first - mean) / std::sqrt(squares / 19);
    ASSERT_NEAR(z, static_cast<double>(truth), 1e-12 * std::max(1.0L, std::abs(truth))) << i;
  }
}

}  // namespace
}  // namespace ladderline
