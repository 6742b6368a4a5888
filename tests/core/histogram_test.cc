#include "core/describe/histogram.h"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>
#include <set>
#include <span>
#include <string>
#include <utility>
#include <vector>

#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::ReadCsvColumn;
using testing::ReadJson;

std::vector<double> Sorted(std::vector<double> x) {
  std::sort(x.begin(), x.end());
  return x;
}

std::vector<std::size_t> Counts(const std::vector<HistogramBin>& bins) {
  std::vector<std::size_t> counts;
  for (const HistogramBin& bin : bins) counts.push_back(bin.rows);
  return counts;
}

// Every bin recounted from its own edges, each beginning where the one before ends.
void ExpectSound(const std::vector<HistogramBin>& bins, const std::vector<double>& x,
                 const std::string& what) {
  ASSERT_FALSE(bins.empty()) << what;
  EXPECT_LE(bins.front().low, x.front()) << what;
  EXPECT_GE(bins.back().high, x.back()) << what;
  for (std::size_t i = 0; i < bins.size(); ++i) {
    const bool last = i + 1 == bins.size();
    if (!last) {
      EXPECT_EQ(bins[i].high, bins[i + 1].low) << what;
    }
    if (bins.size() > 1) {
      EXPECT_LT(bins[i].low, bins[i].high) << what;
    }
    const auto inside = std::count_if(x.begin(), x.end(), [&](double value) {
      return bins[i].low <= value && (value < bins[i].high || (last && value == bins[i].high));
    });
    EXPECT_EQ(bins[i].rows, static_cast<std::size_t>(inside)) << what << ", bin " << i;
  }
  EXPECT_GT(bins.front().rows, 0u) << what;
  EXPECT_GT(bins.back().rows, 0u) << what;
}

// A column in blocks of any sizes, in the order given.
class Blocks final : public BlockedColumn {
 public:
  explicit Blocks(std::vector<std::vector<double>> blocks) : blocks_(std::move(blocks)) {}
  std::size_t blocks() const override { return blocks_.size(); }
  std::span<const double> block(std::size_t b) const override { return blocks_[b]; }

 private:
  std::vector<std::vector<double>> blocks_;
};

// Whether every width is 1, 2, 2.5 or 5 times one power of ten, or a whole number.
void ExpectReadable(const std::vector<HistogramBin>& bins, const std::string& what) {
  const double width = bins[0].high - bins[0].low;
  const double digit = width / std::pow(10, std::floor(std::log10(width) + 1e-6));
  bool readable = std::abs(width - std::round(width)) < 1e-9 * width;
  for (const double d : {1.0, 2.0, 2.5, 5.0}) readable = readable || std::abs(digit - d) < 1e-6;
  EXPECT_TRUE(readable) << what << ", width " << width;
}

TEST(Histogram, ReadOnlyColumnsAreCountedInReadableBinsWhateverTheirOrder) {
  const nlohmann::json pictures = ReadJson("pictures.json");
  for (const auto& c : pictures["histograms"]) {
    const std::string column = c["column"];
    const std::vector<double> x = ReadCsvColumn(c["file"], column);
    // NumAcc4 has three values, which are multiples of a step.
    const std::size_t different = std::set<double>(x.begin(), x.end()).size();
    for (const std::size_t most : {6u, 12u, 25u}) {
      const std::string what = column + " in " + std::to_string(most);
      const std::vector<HistogramBin> bins = Histogram(SpanColumn(x), most);
      ExpectSound(bins, Sorted(x), what);
      EXPECT_LE(bins.size(), most) << what;
      EXPECT_GE(4 * bins.size(), std::min(most, 4 * different)) << what;
      ExpectReadable(bins, what);
      const std::vector<double> part(x.begin(), x.begin() + 7), rest(x.begin() + 7, x.end());
      const std::vector<HistogramBin> again = Histogram(Blocks({{}, rest, {}, part}), most);
      EXPECT_EQ(Counts(again), Counts(bins)) << what;
      EXPECT_EQ(again.front().low, bins.front().low) << what;
    }
  }
}

TEST(Histogram, ReadOnlyColumnsKeepTheirCoarseStep) {
  // 0 … 36 whole: widths of 1.5 would hold one value and two in turn.
  std::vector<double> x(1500, 0.0);
  for (int i = 0; i < 370; ++i) x.push_back(i % 37);
  const std::vector<HistogramBin> bins = Histogram(SpanColumn(x), 25);
  ExpectSound(bins, Sorted(x), "whole numbers");
  EXPECT_EQ(bins[0].high - bins[0].low, 2);
  EXPECT_EQ(bins[1].rows, 20u);
  // One value beside the step of the others, far behind the sample that is looked at first.
  x.push_back(3.25);
  const std::vector<HistogramBin> finer = Histogram(SpanColumn(x), 25);
  ExpectSound(finer, Sorted(x), "quarters");
}

TEST(Histogram, ReadOnlyColumnsOfAnySizeAndSpread) {
  const double most = std::numeric_limits<double>::max(),
               least = std::numeric_limits<double>::denorm_min();
  for (const std::vector<double>& x : {std::vector<double>{-most, 0, most},
                                       {0, least},
                                       {least, 3 * least, 40 * least},
                                       {1, 1 + 0x1p-52},
                                       {1e300, 1e300 + 1e285},
                                       {-0.0, 0.0, 5},
                                       {-1e-300, 1e300}}) {
    const std::vector<HistogramBin> bins = Histogram(SpanColumn(x), 25);
    ExpectSound(bins, Sorted(x), std::to_string(x.back()));
    EXPECT_LE(bins.size(), 25u);
  }
  EXPECT_TRUE(Histogram(SpanColumn({}), 25).empty());
  const std::vector<double> same(3, 7.5);
  const std::vector<HistogramBin> one = Histogram(SpanColumn(same), 25);
  ASSERT_EQ(one.size(), 1u);
  EXPECT_EQ(one[0].low, 7.5);
  EXPECT_EQ(one[0].high, 7.5);
  EXPECT_EQ(one[0].rows, 3u);
}

// pictures.json: numpy.histogram of NumPy 1.24.
TEST(Histogram, AskedForBinsCountAsNumPyDoes) {
  const nlohmann::json reference = ReadJson("pictures.json");
  for (const auto& c : reference["histograms"]) {
    const std::vector<double> x = Sorted(ReadCsvColumn(c["file"], c["column"]));
    for (const auto& [bins, counts] : c["counts"].items()) {
      const std::vector<HistogramBin> histogram = Histogram(x, std::stoul(bins));
      EXPECT_EQ(Counts(histogram), counts.get<std::vector<std::size_t>>()) << c["file"] << bins;
      EXPECT_EQ(histogram.front().low, x.front());
      EXPECT_EQ(histogram.back().high, x.back());
    }
  }
}

// The width itself by NumPy; neighbours among 1, 2, 2.5, 5, 10 lie at most a factor 2.5 apart, so
// that the nearer one is within its root.
TEST(Histogram, ChosenWidthIsThatOfFreedmanAndDiaconisRounded) {
  const nlohmann::json reference = ReadJson("pictures.json");
  int checked = 0;
  for (const auto& c : reference["histograms"]) {
    const std::vector<double> x = Sorted(ReadCsvColumn(c["file"], c["column"]));
    const std::vector<HistogramBin> bins = Histogram(x);
    ExpectSound(bins, x, c["file"]);
    EXPECT_LE(bins.size(), kMostChosenBins);
    const double width = bins[0].high - bins[0].low, wanted = c["freedman_diaconis_width"];
    std::vector<double> gaps(x.size());
    std::adjacent_difference(x.begin(), x.end(), gaps.begin());
    const auto gap = [](double d) { return d > 0; };
    const double step = *std::find_if(gaps.begin() + 1, gaps.end(), gap);
    if (step > wanted || x.back() - x.front() > wanted * kMostChosenBins) continue;
    EXPECT_LE(std::abs(std::log(width / wanted)), std::log(2.5) / 2 + 1e-6) << c["file"];
    ++checked;
  }
  EXPECT_GE(checked, 5);
}

TEST(Histogram, EdgesAreReadable) {
  // Cherry trees, volumes 10.2 to 77: width by Freedman & Diaconis 11.4.
  const std::vector<HistogramBin> bins =
      Histogram(Sorted(ReadCsvColumn("boxcox/trees.csv", "Volume")));
  std::vector<double> edges;
  for (const HistogramBin& bin : bins) edges.push_back(bin.low);
  edges.push_back(bins.back().high);
  EXPECT_EQ(edges, (std::vector<double>{10, 20, 30, 40, 50, 60, 70, 80}));
  // A third of a unit: multiples of 0.1 are the doubles nearest to what a reader sees.
  std::vector<double> x;
  for (int i = 0; i < 3000; ++i) x.push_back(std::sqrt(i) / 60);
  for (const HistogramBin& bin : Histogram(x)) {
    EXPECT_EQ(bin.low, std::round(bin.low * 1000) / 1000);
    EXPECT_EQ(bin.high, std::round(bin.high * 1000) / 1000);
  }
}

TEST(Histogram, WholeNumbersGetBinsOfWholeWidthFromNoneToTheNext) {
  std::vector<double> visits;
  for (int value = 0; value < 6; ++value) visits.insert(visits.end(), 60 >> value, value);
  const std::vector<HistogramBin> bins = Histogram(visits);
  ASSERT_EQ(Counts(bins), (std::vector<std::size_t>{60, 30, 15, 7, 3, 1}));
  for (std::size_t i = 0; i < bins.size(); ++i) {
    EXPECT_EQ(bins[i].low, static_cast<double>(i));
    EXPECT_EQ(bins[i].high, static_cast<double>(i) + 1);
  }
}

TEST(Histogram, StepsOfTheDataAreKeptWhole) {
  const auto expect_even = [](double step, double places, std::size_t most_per_bin) {
    std::vector<double> x;
    for (int i = 0; i < 1000; ++i) x.push_back(std::round((i % 120) * step * places) / places);
    x = Sorted(x);
    x.erase(std::unique(x.begin(), x.end()), x.end());  // each value once
    const std::vector<HistogramBin> bins = Histogram(x);
    ExpectSound(bins, x, std::to_string(step));
    for (std::size_t i = 0; i + 1 < bins.size(); ++i)
      EXPECT_EQ(bins[i].rows, bins[0].rows) << "step " << step << ", bin " << i;
    EXPECT_LE(bins[0].rows, most_per_bin) << step;
  };
  expect_even(1, 1, 50);
  expect_even(7, 1, 50);  // weeks in days
  expect_even(0.05, 100, 50);
  expect_even(0.3, 10, 50);
  expect_even(12500, 1, 50);
}

TEST(Histogram, ManyEqualValuesStillGiveBins) {
  std::vector<double> x(900, 0.0);  // the quartiles and the eighths coincide
  for (int i = 1; i <= 100; ++i) x.push_back(i * 1.37);
  const std::vector<HistogramBin> bins = Histogram(x);
  ExpectSound(bins, x, "heaped");
  EXPECT_GE(bins.size(), 5u);
}

TEST(Histogram, FlatAndEmptyColumns) {
  EXPECT_TRUE(Histogram({}).empty());
  for (const std::vector<double>& x : {std::vector<double>{4.5}, std::vector<double>(7, -1e300)}) {
    for (const std::vector<HistogramBin>& bins : {Histogram(x), Histogram(x, 12)}) {
      ASSERT_EQ(bins.size(), 1u);
      EXPECT_EQ(bins[0].low, x[0]);
      EXPECT_EQ(bins[0].high, x[0]);
      EXPECT_EQ(bins[0].rows, x.size());
    }
  }
}

TEST(Histogram, AnyRangeOfDoublesGivesSoundBins) {
  constexpr double kMax = std::numeric_limits<double>::max();
  constexpr double kTiny = std::numeric_limits<double>::denorm_min();
  std::vector<double> wide, close, tiny, outlier;
  for (int i = -300; i <= 300; ++i) wide.push_back(std::pow(10.0, i));
  for (int i = 0; i < 50; ++i) close.push_back(1e9 + 0x1p-23 * i);
  for (int i = 0; i < 500; ++i) tiny.push_back(kTiny * (i - 250));
  for (int i = 0; i < 500; ++i) outlier.push_back(i / 7.0);
  outlier.push_back(1e300);
  const std::vector<std::vector<double>> columns = {{0, 1},
                                                    {-1e300, 1e300},
                                                    {-kMax, kMax},
                                                    {-kMax, 0, kMax},
                                                    {0, kTiny},
                                                    {-kTiny, 0, kTiny},
                                                    {1, 1 + 0x1p-52},
                                                    {-1e-300, 1e300},
                                                    {1e15, 1e15 + 1, 1e15 + 2},
                                                    {9.1e15, 9.3e15},
                                                    {0.1, 0.2, 0.3},
                                                    {-5, -5, -5, 1e17},
                                                    {1, 2, 3, 4, 5},
                                                    wide,
                                                    close,
                                                    tiny,
                                                    outlier,
                                                    {kMax / 2, kMax},
                                                    {-2.5, 1e-9},
                                                    {1e18, 1e18 + 1024},
                                                    {0.25, 1e6}};
  for (const std::vector<double>& x : columns) {
    const std::string what = ::testing::PrintToString(x).substr(0, 60);
    ExpectSound(Histogram(x), x, what);
    EXPECT_LE(Histogram(x).size(), kMostChosenBins) << what;
    for (const std::size_t bins : {1u, 3u, 40u, 1000u}) {
      const std::vector<HistogramBin> asked = Histogram(x, bins);
      ExpectSound(asked, x, what);
      EXPECT_LE(asked.size(), bins) << what;
    }
  }
}

TEST(Histogram, BarsAreDrawnToScaleAndFewRowsStayInSight) {
  EXPECT_EQ(HistogramBar(1000, 1000), std::string(40, '#'));
  EXPECT_EQ(HistogramBar(500, 1000), std::string(20, '#'));
  EXPECT_EQ(HistogramBar(25, 1000), "#");
  EXPECT_EQ(HistogramBar(1, 1000), ".");
  EXPECT_EQ(HistogramBar(0, 1000), "");
}

}  // namespace
}  // namespace ladderline
