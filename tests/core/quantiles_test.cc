#include "core/describe/quantiles.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <random>

#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::Agrees;
constexpr double kInfinity = std::numeric_limits<double>::infinity();

// The definition: put all values in order, read off one.
std::vector<double> InOrder(std::vector<double> values) {
  std::sort(values.begin(), values.end());
  return values;
}

// Blocks of uneven sizes, some empty.
class UnevenColumn final : public BlockedColumn {
 public:
  explicit UnevenColumn(const std::vector<double>& values) {
    size_t size = 0;
    for (size_t at = 0; at < values.size(); at += size, size = (size * 7 + 3) % 101) {
      size = std::min(size, values.size() - at);
      blocks_.emplace_back(values.begin() + static_cast<std::ptrdiff_t>(at),
                           values.begin() + static_cast<std::ptrdiff_t>(at + size));
    }
    blocks_.emplace_back();
  }
  size_t blocks() const override { return blocks_.size(); }
  std::span<const double> block(size_t index) const override {
    // A holder may hand out one scratch block again and again.
    scratch_ = blocks_[index];
    return scratch_;
  }

 private:
  std::vector<std::vector<double>> blocks_;
  mutable std::vector<double> scratch_;
};

TEST(Quantiles, MatchRTypes7And1) {
  // tests/reference/describe_r.R: R 4.2 quantile, types 7 and 1.
  const auto reference = testing::ReadJson("describe_r.json");
  const auto probabilities = reference["probabilities"].get<std::vector<double>>();
  for (const auto& [key, figures] : reference["univariate"].items()) {
    const size_t blank = key.find(' ');
    const auto values = testing::ReadCsvColumn(key.substr(0, blank), key.substr(blank + 1));
    const std::vector<double> found = Quantiles(SpanColumn(values), probabilities);
    const std::vector<double> ordered = InOrder(values);
    for (size_t i = 0; i < probabilities.size(); ++i) {
      const double truth = figures["percentile_cont"][i].get<double>();
      EXPECT_TRUE(Agrees(truth, found[i], 14)) << key << " at " << probabilities[i];
      const size_t rank = DiscreteRank(values.size(), probabilities[i]);
      EXPECT_EQ(figures["percentile_disc"][i].get<double>(), ordered[rank]) << key;
    }
  }
}

struct Shape {
  const char* name;
  double (*value)(std::mt19937_64& random, size_t i, size_t n);
};

constexpr Shape kShapes[] = {
    {"skewed",
     [](std::mt19937_64& r, size_t, size_t) { return std::exp(std::normal_distribution()(r)); }},
    {"rising", [](std::mt19937_64&, size_t i, size_t) { return static_cast<double>(i); }},
    {"falling", [](std::mt19937_64&, size_t i, size_t) { return -static_cast<double>(i); }},
    {"periodic", [](std::mt19937_64&, size_t i, size_t) { return static_cast<double>(i % 64); }},
    {"twelve values",
     [](std::mt19937_64& r, size_t, size_t) { return static_cast<double>(r() % 12); }},
    {"half zero, both signs",
     [](std::mt19937_64& r, size_t, size_t) {
       return r() % 2 ? -0.0 : std::normal_distribution()(r);
     }},
    {"constant", [](std::mt19937_64&, size_t, size_t) { return 3.5; }},
    {"one far value", [](std::mt19937_64&, size_t i, size_t) { return i == 17 ? 1e300 : 0.25; }},
    {"infinite ends",
     [](std::mt19937_64& r, size_t i, size_t n) {
       return i < n / 3 ? -kInfinity : i < n / 2 ? kInfinity : std::normal_distribution()(r);
     }},
};

TEST(Quantiles, OrderStatisticsEqualThoseOfASortedColumn) {
  std::mt19937_64 random(20240305);
  for (const Shape& shape : kShapes) {
    for (const size_t n : {1u, 2u, 3u, 100u, 4096u, 4097u, 30011u, 200000u}) {
      std::vector<double> values;
      for (size_t i = 0; i < n; ++i) values.push_back(shape.value(random, i, n));
      const std::vector<double> ordered = InOrder(values);
      std::vector<size_t> ranks;
      for (size_t i = 0; i <= 40; ++i) ranks.push_back((n - 1) * i / 40);
      ranks.push_back(0);  // out of order and repeated
      const std::vector<double> found = OrderStatistics(UnevenColumn(values), ranks);
      for (size_t i = 0; i < ranks.size(); ++i)
        ASSERT_EQ(found[i], ordered[ranks[i]]) << shape.name << " n=" << n << " rank " << ranks[i];
    }
  }
}

// Shows other values than its own on the second pass, which is the one that samples.
class MisleadingColumn final : public BlockedColumn {
 public:
  explicit MisleadingColumn(const std::vector<double>& values)
      : values_(values), shown_(values.size()) {
    for (size_t i = 0; i < shown_.size(); ++i) shown_[i] = 1e6 + static_cast<double>(i % 1000);
  }
  size_t blocks() const override { return 1; }
  std::span<const double> block(size_t) const override { return ++passes == 2 ? shown_ : values_; }
  mutable int passes = 0;

 private:
  std::vector<double> values_, shown_;
};

TEST(Quantiles, AMisleadingSampleCostsOnlyFurtherPasses) {
  std::mt19937_64 random(7);
  std::vector<double> values;
  for (int i = 0; i < 50000; ++i) values.push_back(std::normal_distribution()(random));
  const std::vector<double> ordered = InOrder(values);
  const MisleadingColumn column(values);
  const size_t ranks[] = {12500, 25000};
  const std::vector<double> found = OrderStatistics(column, ranks);
  for (size_t i = 0; i < 2; ++i) EXPECT_EQ(found[i], ordered[ranks[i]]);
  EXPECT_GT(column.passes, 3) << "the sample did not mislead: this test shows nothing";
}

TEST(Quantiles, EdgeCases) {
  const double tenths[] = {0, 0.3, 1};
  for (const double q : Quantiles(SpanColumn({}), tenths)) EXPECT_TRUE(std::isnan(q)) << "empty";
  const double one[] = {-7.25};
  for (const double q : Quantiles(SpanColumn(one), tenths)) EXPECT_EQ(q, -7.25) << "one row";
  const std::vector<double> constant(9, 0.1);
  for (const double q : Quantiles(SpanColumn(constant), tenths)) EXPECT_EQ(q, 0.1) << "constant";
  const double infinite[] = {-kInfinity, 2, kInfinity};
  const double ends[] = {0, 0.5, 1};
  EXPECT_EQ(Quantiles(SpanColumn(infinite), ends), (std::vector<double>{-kInfinity, 2, kInfinity}));
  EXPECT_TRUE(Quantiles(SpanColumn(one), {}).empty());
}

TEST(Quantiles, InterpolationNeitherOverflowsNorLeavesItsEnds) {
  EXPECT_EQ(Interpolate(-1e308, 1e308, 0.5), 0);
  EXPECT_EQ(Interpolate(0.1, 0.1, 0.7), 0.1);
  EXPECT_EQ(Interpolate(-kInfinity, 5, 0), -kInfinity);
  EXPECT_LE(Interpolate(0.1, 0.3, 1 - 0x1p-53), 0.3);
}

TEST(Quantiles, DiscreteRankFollowsTheShareOfRows) {
  // 0.07 * 100 is 7.000000000000001 in double arithmetic; 7 of 100 rows are a share of 0.07.
  EXPECT_EQ(DiscreteRank(100, 0.07), 6u);
  for (const size_t n : {1u, 3u, 10u, 49u, 1000u})
    for (size_t k = 1; k <= n; ++k)
      EXPECT_EQ(DiscreteRank(n, static_cast<double>(k) / static_cast<double>(n)), k - 1);
  EXPECT_EQ(DiscreteRank(5, 0), 0u);
  EXPECT_EQ(DiscreteRank(5, 1e-300), 0u);
}

}  // namespace
}  // namespace ladderline
