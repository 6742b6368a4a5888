#include "core/describe/moments.h"

#include <cmath>
#include <functional>
#include <limits>
#include <random>
#include <string>
#include <vector>

#include "core/describe/frame.h"
#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::Agrees;
using testing::DigitsAgreed;
constexpr double kInfinity = std::numeric_limits<double>::infinity();
constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

using Frame2 = Frame<PowerSums<2>>;
using Frame4 = Frame<PowerSums<4>>;
using FrameXY = Frame<CoSums>;

struct Figure {
  const char* name;
  double (*of)(const CentralSums&);
};
constexpr Figure kFigures[] = {
    {"sum", Sum},
    {"mean", Mean},
    {"var_pop", VariancePop},
    {"var_samp", VarianceSamp},
    {"stddev_pop", StdDevPop},
    {"stddev_samp", StdDevSamp},
    {"skewness_pop", SkewnessPop},
    {"skewness", Skewness},
    {"excess_kurtosis_pop", ExcessKurtosisPop},
    {"excess_kurtosis", ExcessKurtosis},
};

struct CoFigure {
  const char* name;
  double (*of)(const CentralCoSums&);
};
constexpr CoFigure kCoFigures[] = {
    {"covar_pop", CovariancePop},
    {"covar_samp", CovarianceSamp},
    {"corr", Correlation},
    {"regr_slope", RegressionSlope},
    {"regr_intercept", RegressionIntercept},
    {"regr_r2", RegressionR2},
    {"regr_avgx", RegressionAverageX},
    {"regr_avgy", RegressionAverageY},
    {"regr_sxx", RegressionSxx},
    {"regr_syy", RegressionSyy},
    {"regr_sxy", RegressionSxy},
};

std::vector<double> Column(const std::string& key, int word) {
  std::vector<std::string> words;
  std::stringstream in(key);
  for (std::string w; in >> w;) words.push_back(w);
  return testing::ReadCsvColumn(words[0], words[static_cast<size_t>(word)]);
}

// The rows one after the other, as a group; then as a frame of n rows that has first taken in
// and lost others, far away and wildly spread.
CentralSums AsGroup(const std::vector<double>& rows) {
  Frame4 frame;
  for (const double x : rows) frame.Add(x);
  return frame.Summarise();
}
CentralSums AsFrame(const std::vector<double>& rows) {
  std::vector<double> all;
  for (size_t i = 0; i < rows.size(); ++i)
    all.push_back(i % 2 == 0 ? -1e12 * static_cast<double>(i) : 1e-12);
  all.insert(all.end(), rows.begin(), rows.end());
  Frame4 frame;
  CentralSums summary;
  for (size_t i = 0; i < all.size(); ++i) {
    frame.Add(all[i]);
    if (i >= rows.size()) frame.Remove(all[i - rows.size()]);
    summary = frame.Summarise();
  }
  return summary;
}

TEST(Moments, NistMeanAndStandardDeviationAreAtTheLimitOfDoubleData) {
  // Digits that exact arithmetic on the rounded data reaches:
  // tests/reference/nist/reference_lre.md.
  const std::pair<const char*, double> limits[] = {
      {"PiDigits", 15}, {"Lottery", 15}, {"Lew", 15},      {"Mavro", 13.1}, {"Michelso", 13.8},
      {"NumAcc1", 15},  {"NumAcc2", 15}, {"NumAcc3", 9.5}, {"NumAcc4", 8.3}};
  const auto certified = testing::ReadJson("nist/certified.json")["sets"];
  for (const auto& [set, sd_limit] : limits) {
    const std::vector<double> y = testing::ReadCsvColumn(std::string("nist/") + set + ".csv", "y");
    const double mean = std::stod(certified[set]["mean"].get<std::string>());
    const double sd = std::stod(certified[set]["sd"].get<std::string>());
    const CentralSums group = AsGroup(y), frame = AsFrame(y);
    EXPECT_TRUE(Agrees(mean, Mean(group), 14.7)) << set;
    EXPECT_TRUE(Agrees(mean, Mean(frame), 14.7)) << set << " as a frame";
    EXPECT_TRUE(Agrees(sd, StdDevSamp(group), sd_limit - 0.3)) << set;
    EXPECT_TRUE(Agrees(sd, StdDevSamp(frame), sd_limit - 0.3)) << set << " as a frame";
    std::printf("%-9s mean %.1f sd %.1f; as a frame: mean %.1f sd %.1f\n", set,
                DigitsAgreed(mean, Mean(group)), DigitsAgreed(sd, StdDevSamp(group)),
                DigitsAgreed(mean, Mean(frame)), DigitsAgreed(sd, StdDevSamp(frame)));
  }
}

TEST(Moments, MatchExactArithmetic) {
  // tests/reference/describe_exact.py: exact rational arithmetic on the same doubles.
  const nlohmann::json reference = testing::ReadJson("describe_exact.json");
  for (const auto& [key, exact] : reference["univariate"].items()) {
    const std::vector<double> x = Column(key, 1);
    const CentralSums group = AsGroup(x), frame = AsFrame(x);
    for (const Figure& figure : kFigures) {
      if (!exact.contains(figure.name)) {
        EXPECT_TRUE(std::isnan(figure.of(group))) << key << " " << figure.name;
        continue;
      }
      const double truth = std::stod(exact[figure.name].get<std::string>());
      // NumAcc2 is symmetric but for the rounding of its data: third powers cancel down to 3e-18,
      // and of the 32 digits they are summed in fewer than 15 are left.
      const double digits = std::abs(truth) < 1e-15 ? 14.5 : 15;
      EXPECT_TRUE(Agrees(truth, figure.of(group), digits)) << key << " " << figure.name;
      EXPECT_TRUE(Agrees(truth, figure.of(frame), digits))
          << key << " " << figure.name << ", frame";
    }
  }
}

TEST(Moments, PairsMatchExactArithmetic) {
  const nlohmann::json reference = testing::ReadJson("describe_exact.json");
  for (const auto& [key, exact] : reference["bivariate"].items()) {
    const std::vector<double> y = Column(key, 1), x = Column(key, 2);
    FrameXY group, frame;
    for (size_t i = 0; i < y.size(); ++i) {
      group.Add({y[i], x[i]});
      frame.Add({1e13 + static_cast<double>(i * i), -1e9 * static_cast<double>(i % 5)});
    }
    for (size_t i = 0; i < y.size(); ++i) {
      frame.Add({y[i], x[i]});
      frame.Remove({1e13 + static_cast<double>(i * i), -1e9 * static_cast<double>(i % 5)});
      (void)frame.Summarise();
    }
    for (const CoFigure& figure : kCoFigures) {
      const double truth = std::stod(exact[figure.name].get<std::string>());
      EXPECT_TRUE(Agrees(truth, figure.of(group.Summarise()), 15)) << key << " " << figure.name;
      EXPECT_TRUE(Agrees(truth, figure.of(frame.Summarise()), 15)) << key << " " << figure.name;
    }
  }
}

TEST(Moments, MatchR) {
  // tests/reference/describe_r.R: R 4.2 and e1071.
  const auto reference = testing::ReadJson("describe_r.json");
  for (const auto& [key, r] : reference["univariate"].items()) {
    const CentralSums group = AsGroup(Column(key, 1));
    for (const Figure& figure : kFigures) {
      if (!r.contains(figure.name)) continue;
      if (r[figure.name].is_null()) {
        EXPECT_TRUE(std::isnan(figure.of(group)));
      } else if (std::abs(r[figure.name].get<double>()) > 1e-9) {  // R's own rounding about 0
        EXPECT_TRUE(Agrees(r[figure.name].get<double>(), figure.of(group), 10))
            << key << " " << figure.name;
      }
    }
  }
  for (const auto& [key, r] : reference["bivariate"].items()) {
    const std::vector<double> y = Column(key, 1), x = Column(key, 2);
    FrameXY frame;
    for (size_t i = 0; i < y.size(); ++i) frame.Add({y[i], x[i]});
    for (const CoFigure& figure : kCoFigures) {
      if (!r.contains(figure.name)) continue;
      EXPECT_TRUE(Agrees(r[figure.name].get<double>(), figure.of(frame.Summarise()), 10))
          << key << " " << figure.name;
    }
  }
}

// Moments by the definition, in two passes, the first of which finds the mean. Differences from the
// first row are exact in long double, and small, so that the mean is good to its last digits.
struct TwoPass {
  long double yy = 0, xx = 0, xy = 0, y3 = 0, y4 = 0;
  TwoPass(const Pair* rows, size_t n) {
    const long double first_y = rows[0].y, first_x = rows[0].x;
    long double mean_y = 0, mean_x = 0;
    for (size_t i = 0; i < n; ++i) {
      mean_y += (rows[i].y - first_y) / static_cast<long double>(n);
      mean_x += (rows[i].x - first_x) / static_cast<long double>(n);
    }
    for (size_t i = 0; i < n; ++i) {
      const long double y = rows[i].y - first_y - mean_y, x = rows[i].x - first_x - mean_x;
      yy += y * y;
      xx += x * x;
      xy += x * y;
      y3 += y * y * y;
      y4 += y * y * y * y;
    }
  }
};

struct Drift {
  const char* name;
  size_t frame;
  size_t rows;
  size_t spike;       // the row that is 1e6 away; none if beyond the rows
  size_t asked_from;  // the first row whose frame is looked at
};

TEST(Moments, MovingFramesDoNotDrift) {
  constexpr Drift kCases[] = {
      {"a million steps, no spike", 100, 1000000, 1000000, 0},
      {"a million steps, a spike half way", 100, 1000000, 500000, 0},
      {"the first row is the spike", 100, 5000, 0, 0},
      {"a spike in the first frame", 100, 5000, 50, 0},
      {"a spike that ends the first frame", 100, 5000, 100, 0},
      {"a frame of five rows", 5, 5000, 700, 0},
      {"a long frame", 5000, 30000, 9000, 0},
      {"a frame that is asked late, as with rows following", 20000, 45000, 3, 20000},
  };
  for (const Drift& c : kCases) {
    std::mt19937_64 random(42);
    std::normal_distribution<double> noise(0, 1e-3);
    std::vector<Pair> rows(c.rows);
    for (size_t i = 0; i < c.rows; ++i) {
      const double common = noise(random);
      rows[i] = {1e9 + common + noise(random), 1e9 + common + noise(random)};
      if (i == c.spike) rows[i] = {rows[i].y + 1e6, rows[i].x - 1e6};
    }
    Frame4 frame;
    FrameXY pairs;
    double least = 99, least_higher = 99;
    for (size_t i = 0; i < c.rows; ++i) {
      frame.Add(rows[i].y);
      pairs.Add(rows[i]);
      if (i >= c.frame) {
        frame.Remove(rows[i - c.frame].y);
        pairs.Remove(rows[i - c.frame]);
      }
      if (i < c.asked_from) continue;
      const CentralSums s = frame.Summarise();
      const CentralCoSums co = pairs.Summarise();
      const size_t n = std::min(i + 1, c.frame);
      const bool telling =
          i % 997 == 0 || (i >= c.spike && i < c.spike + 3 * c.frame && i % 7 == 0);
      if (n < 4 || !telling) continue;
      const TwoPass truth(&rows[i + 1 - n], n);
      const auto digits = [](long double a, long double b) {
        return static_cast<double>(-std::log10(std::abs(a - b) / std::abs(b) + 1e-30L));
      };
      const auto count = static_cast<long double>(n);
      least = std::min({least, digits(VarianceSamp(s), truth.yy / (count - 1)),
                        digits(CovariancePop(co), truth.xy / count),
                        digits(RegressionSxx(co), truth.xx)});
      const long double sd = std::sqrt(truth.yy / count);
      // A skewness near 0 is measured against 1.
      const long double g1 = truth.y3 / count / (sd * sd * sd);
      const double g1_digits = static_cast<double>(
          -std::log10(std::abs(SkewnessPop(s) - g1) / std::max(std::abs(g1), 1.0L) + 1e-30L));
      least_higher =
          std::min({least_higher, g1_digits,
                    digits(ExcessKurtosisPop(s) + 3, truth.y4 * count / (truth.yy * truth.yy)),
                    digits(Correlation(co), truth.xy / std::sqrt(truth.xx * truth.yy))});
    }
    std::printf("%-52s %.1f digits, higher moments %.1f\n", c.name, least, least_higher);
    EXPECT_GE(least, 12) << c.name;
    EXPECT_GE(least_higher, 8) << c.name;
  }
}

TEST(Moments, FramesThatDoNotHoldTheirFirstRowsRecoverWhenThoseHaveLeft) {
  // More rows than a group may hold before it is asked.
  constexpr size_t kRows = 3 * Frame2::kGroupRows;
  std::mt19937_64 random(1);
  std::vector<Pair> rows(kRows);
  for (size_t i = 0; i < kRows; ++i)
    rows[i].y = 1e9 + std::normal_distribution<double>(0, 1e-3)(random);
  rows[10].y += 1e6;
  Frame4 frame;
  for (size_t i = 0; i < kRows - 2000; ++i) frame.Add(rows[i].y);
  for (size_t i = 0; i < kRows - 2000; ++i) {
    frame.Remove(rows[i].y);
    if (i < 2000) frame.Add(rows[kRows - 2000 + i].y);
    if (i < 2000 || i % 9973 != 0) continue;
    const size_t n = kRows - 1 - i;
    const TwoPass truth(&rows[i + 1], n);
    const double variance = static_cast<double>(truth.yy / (static_cast<long double>(n) - 1));
    EXPECT_TRUE(Agrees(variance, VarianceSamp(frame.Summarise()), 12)) << i;
    const double kurtosis = ExcessKurtosisPop(frame.Summarise());
    EXPECT_TRUE(std::isnan(kurtosis)) << "a figure without a sound digit is not given";
  }
  const TwoPass truth(&rows[kRows - 2000], 2000);
  EXPECT_TRUE(Agrees(static_cast<double>(truth.y4 * 2000 / (truth.yy * truth.yy)),
                     ExcessKurtosisPop(frame.Summarise()) + 3, 12));
}

TEST(Moments, AFrameThatTurnsConstantHasNoSpread) {
  Frame4 frame;
  FrameXY pairs;
  for (const double x : {3.7, 1e6, 0.1, 0.1, 0.1}) {
    frame.Add(x);
    pairs.Add({x, x});
  }
  frame.Remove(3.7);
  frame.Remove(1e6);
  pairs.Remove({3.7, 3.7});
  pairs.Remove({1e6, 1e6});
  EXPECT_EQ(VarianceSamp(frame.Summarise()), 0);
  EXPECT_EQ(Mean(frame.Summarise()), 0.1);
  EXPECT_TRUE(std::isnan(Skewness(frame.Summarise())));
  EXPECT_EQ(RegressionSxy(pairs.Summarise()), 0);
  EXPECT_TRUE(std::isnan(Correlation(pairs.Summarise())));
}

TEST(Moments, FiguresFollowTheUnitExactly) {
  // Powers of two change the unit and nothing else: every figure must keep every bit.
  const std::vector<double> x = testing::ReadCsvColumn("boxcox/trees.csv", "Volume");
  const CentralSums plain = AsGroup(x);
  for (const int k : {-1000, -500, -101, 101, 500, 1000}) {
    std::vector<double> scaled;
    for (const double v : x) scaled.push_back(std::ldexp(v, k));
    const CentralSums s = AsGroup(scaled);
    EXPECT_EQ(Mean(s), std::ldexp(Mean(plain), k)) << k;
    EXPECT_EQ(StdDevSamp(s), std::ldexp(StdDevSamp(plain), k)) << k;
    EXPECT_EQ(Skewness(s), Skewness(plain)) << k;
    EXPECT_EQ(ExcessKurtosis(s), ExcessKurtosis(plain)) << k;
    EXPECT_EQ(VarianceSamp(s), std::ldexp(VarianceSamp(plain), 2 * k)) << k;
    FrameXY pairs, plain_pairs;
    for (size_t i = 0; i < x.size(); ++i) {
      pairs.Add({scaled[i], std::ldexp(static_cast<double>(i * i), -k)});
      plain_pairs.Add({x[i], static_cast<double>(i * i)});
    }
    EXPECT_EQ(Correlation(pairs.Summarise()), Correlation(plain_pairs.Summarise())) << k;
    EXPECT_EQ(CovarianceSamp(pairs.Summarise()), CovarianceSamp(plain_pairs.Summarise())) << k;
  }
}

TEST(Moments, ValuesAtTheEndsOfTheRange) {
  constexpr double kMost = std::numeric_limits<double>::max();
  const CentralSums ends = AsGroup({-kMost, kMost, kMost});
  EXPECT_TRUE(Agrees(kMost / 3, Mean(ends), 15));
  EXPECT_EQ(Sum(ends), kMost);
  EXPECT_EQ(VarianceSamp(ends), kInfinity);
  // Deviations in thirds of kMost: -4, 2, 2, so that g1 = -16/3 / (24/3)^1.5 = -1/√2.
  EXPECT_TRUE(Agrees(-std::sqrt(0.5), SkewnessPop(ends), 15));
  EXPECT_EQ(Sum(AsGroup({kMost, kMost})), kInfinity);
  EXPECT_EQ(Sum(AsGroup({1e300, 1e300, 1e300})), 3e300);

  // The smallest numbers there are: 1, 2 and 3 times 2^-1074.
  const CentralSums tiny = AsGroup({0x1p-1074, 0x2p-1074, 0x3p-1074});
  EXPECT_EQ(StdDevSamp(tiny), 0x1p-1074);
  EXPECT_EQ(Skewness(tiny), 0);

  // Tiny rows, then a huge one that leaves again.
  Frame4 frame;
  for (const double x : {1e-300, 2e-300, 1e300, 3e-300, 7e-300}) frame.Add(x);
  EXPECT_TRUE(Agrees(1e300 / std::sqrt(5.0), StdDevSamp(frame.Summarise()), 15));
  for (const double x : {1e-300, 2e-300, 1e300}) frame.Remove(x);
  EXPECT_TRUE(Agrees(std::sqrt(8.0) * 1e-300, StdDevSamp(frame.Summarise()), 15));
  EXPECT_EQ(VarianceSamp(frame.Summarise()), 0) << "8e-600 is no double";
}

TEST(Moments, EdgeCases) {
  struct Edge {
    const char* name;
    std::vector<double> rows;
    double mean, var_samp, var_pop, skewness, kurtosis_pop;
  };
  const Edge edges[] = {
      {"empty", {}, kNaN, kNaN, kNaN, kNaN, kNaN},
      {"one row", {0.3}, 0.3, kNaN, 0, kNaN, kNaN},
      {"two rows", {1, 3}, 2, 2, 1, kNaN, -2},
      {"constant", {0.1, 0.1, 0.1, 0.1}, 0.1, 0, 0, kNaN, kNaN},
      {"NaN", {1, kNaN, 2, 3}, kNaN, kNaN, kNaN, kNaN, kNaN},
      {"infinity", {1, kInfinity, 2, 3}, kNaN, kNaN, kNaN, kNaN, kNaN},
      {"both infinities", {kInfinity, -kInfinity}, kNaN, kNaN, kNaN, kNaN, kNaN},
  };
  const auto same = [](double a, double b) { return a == b || (std::isnan(a) && std::isnan(b)); };
  for (const Edge& edge : edges) {
    const CentralSums s = AsGroup(edge.rows);
    EXPECT_TRUE(same(Mean(s), edge.mean)) << edge.name;
    EXPECT_TRUE(same(VarianceSamp(s), edge.var_samp)) << edge.name;
    EXPECT_TRUE(same(VariancePop(s), edge.var_pop)) << edge.name;
    EXPECT_TRUE(same(Skewness(s), edge.skewness)) << edge.name;
    EXPECT_TRUE(same(ExcessKurtosisPop(s), edge.kurtosis_pop)) << edge.name;
    FrameXY pairs;
    for (const double x : edge.rows) pairs.Add({x, 2 * x});
    EXPECT_TRUE(same(CovarianceSamp(pairs.Summarise()), 2 * edge.var_samp)) << edge.name;
    EXPECT_TRUE(same(RegressionAverageY(pairs.Summarise()), edge.mean)) << edge.name;
  }
  // What made the figures undefined has left the frame.
  Frame4 frame;
  for (const double x : {kNaN, kInfinity, 1.0, 2.0, 4.0}) frame.Add(x);
  frame.Remove(kNaN);
  EXPECT_TRUE(std::isnan(Mean(frame.Summarise())));
  frame.Remove(kInfinity);
  EXPECT_TRUE(Agrees(7.0 / 3, Mean(frame.Summarise()), 15));
  for (const double x : {1.0, 2.0, 4.0}) frame.Remove(x);
  EXPECT_EQ(frame.Summarise().n, 0);
  EXPECT_TRUE(std::isnan(Mean(frame.Summarise())));
  frame.Add(5);
  EXPECT_EQ(Mean(frame.Summarise()), 5);
}

TEST(Moments, RegressionRulesOfTheStandard) {
  // ISO/IEC 9075-2, 10.9 <aggregate function>: with x flat all three are null; with y flat alone
  // REGR_R2 is 1.
  FrameXY flat_y, flat_x, both;
  for (const double v : {1.0, 2.0, 4.0}) {
    flat_y.Add({0.1, v});
    flat_x.Add({v, 0.1});
    both.Add({0.1, 0.3});
  }
  EXPECT_EQ(RegressionR2(flat_y.Summarise()), 1);
  EXPECT_EQ(RegressionSlope(flat_y.Summarise()), 0);
  EXPECT_EQ(RegressionIntercept(flat_y.Summarise()), 0.1);
  EXPECT_TRUE(std::isnan(Correlation(flat_y.Summarise())));
  for (FrameXY* frame : {&flat_x, &both}) {
    EXPECT_TRUE(std::isnan(RegressionR2(frame->Summarise())));
    EXPECT_TRUE(std::isnan(RegressionSlope(frame->Summarise())));
    EXPECT_TRUE(std::isnan(RegressionIntercept(frame->Summarise())));
    EXPECT_TRUE(std::isnan(Correlation(frame->Summarise())));
  }
}

}  // namespace
}  // namespace ladderline
