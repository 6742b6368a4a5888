#include "core/regression/least_squares.h"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <cstdio>
#include <numeric>
#include <random>
#include <string>
#include <vector>

#include "core/regression/covariance.h"
#include "tests/core/regression_cases.h"
#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::Agrees;
using testing::DigitsAgreed;
using testing::ReadCsvColumn;
using testing::ReadJson;

using testing::Column;
using testing::Map;
using testing::Noise;

LeastSquares Fit(bool intercept, const std::vector<Column>& x, const Column& y,
                 const Column& w = {}, Extended extended = Extended::kMeasured) {
  return FitLeastSquares(ColumnSource(intercept, {x.begin(), x.end()}, y, w), extended);
}

Column ClassicalErrors(const LeastSquares& fit) {
  return StandardErrors(fit.basis, CovarianceOf(ErrorKind::kClassical, fit, {}));
}

// --- NIST StRD linear regression sets ----------------------------------------------------------

struct NistSet {
  bool intercept;
  std::vector<Column> x;  // powers are formed in doubles
  Column y;
  Column coefficients, standard_errors;
  double residual_sd;
};

double Number(const nlohmann::json& text) { return std::stod(text.get<std::string>()); }

NistSet ReadNist(const std::string& name) {
  const nlohmann::json set = ReadJson("nist/certified.json")["sets"][name];
  const std::string file = "nist/" + name + ".csv";
  NistSet out;
  out.intercept = set["model"]["intercept"];
  out.y = ReadCsvColumn(file, "y");
  if (name == "Longley") {
    for (const char* column : {"x1", "x2", "x3", "x4", "x5", "x6"})
      out.x.push_back(ReadCsvColumn(file, column));
  } else {
    const Column x = ReadCsvColumn(file, "x");
    for (int power = 1; power <= set["model"]["polynomial_degree"]; ++power)
      out.x.push_back(Map(x, [=](double value) { return std::pow(value, power); }));
  }
  for (const auto& term : set["coefficients"]) {
    out.coefficients.push_back(Number(term["estimate"]));
    out.standard_errors.push_back(Number(term["std_dev"]));
  }
  out.residual_sd = Number(set["residual_sd"]);
  return out;
}

double FewestDigits(const Column& truth, const Column& values) {
  double fewest = 15;
  for (std::size_t i = 0; i < truth.size(); ++i)
    fewest = std::min(fewest, DigitsAgreed(truth[i], values.at(i)));
  return fewest;
}

// Certified values: NIST StRD (tests/reference/nist). `wanted` lies a little below what exact
// arithmetic on the data rounded to doubles can reach (the last two columns of
// tests/reference/nist/reference_lre.md: 13.2 and 13.5 for two sets, 7.6 for Filip). Certified
// errors of the exact fits are 0: their digits are those of the absolute error.
TEST(LeastSquares, NistSetsReachTheDigitsOfDoubleData) {
  struct Case {
    const char* name;
    double coefficients, standard_errors;
  };
  const Case cases[] = {
      {"Norris", 14.0, 13.8},   {"Pontius", 13.4, 13.7},  {"NoInt1", 14.6, 14.9},
      {"NoInt2", 14.9, 14.7},   {"Longley", 14.5, 14.8},  {"Filip", 7.5, 7.5},
      {"Wampler1", 14.9, 14.9}, {"Wampler2", 13.1, 14.9}, {"Wampler3", 14.9, 14.4},
      {"Wampler4", 14.9, 14.4}, {"Wampler5", 14.9, 14.4}};
  std::printf("%-9s | %-30s | %-30s\n", "", "extended where measured", "plain pass only");
  std::printf("%-9s | %10s %8s %10s | %10s %8s\n", "set", "coeff.", "errors", "taken", "coeff.",
              "errors");
  for (const Case& wanted : cases) {
    const NistSet set = ReadNist(wanted.name);
    const LeastSquares fit = Fit(set.intercept, set.x, set.y);
    const LeastSquares plain = Fit(set.intercept, set.x, set.y, {}, Extended::kNever);
    const double coefficients = FewestDigits(set.coefficients, RawCoefficients(fit.basis));
    const double errors = FewestDigits(set.standard_errors, ClassicalErrors(fit));
    std::printf("%-9s | %10.1f %8.1f %10s | %10.1f %8.1f\n", wanted.name, coefficients, errors,
                fit.basis.extended ? "yes" : "no",
                FewestDigits(set.coefficients, RawCoefficients(plain.basis)),
                FewestDigits(set.standard_errors, ClassicalErrors(plain)));
    EXPECT_GE(coefficients, wanted.coefficients) << wanted.name;
    EXPECT_GE(errors, wanted.standard_errors) << wanted.name;
    EXPECT_TRUE(fit.dropped.empty()) << wanted.name;
    if (set.residual_sd == 0) {
      EXPECT_LT(fit.residual_sd(), 1e-9) << wanted.name;
    } else {
      EXPECT_TRUE(Agrees(set.residual_sd, fit.residual_sd(), wanted.name[0] == 'F' ? 9.5 : 13.7))
          << wanted.name;
    }
    EXPECT_EQ(fit.exact, set.residual_sd == 0) << wanted.name;
  }
}

// Where the double-double pass is skipped, the prediction must not promise more than was reached.
TEST(LeastSquares, PredictedErrorCoversThePlainPass) {
  for (const char* name : {"Norris", "Pontius", "NoInt1", "Longley", "Filip", "Wampler1",
                           "Wampler2", "Wampler3", "Wampler4", "Wampler5"}) {
    const NistSet set = ReadNist(name);
    const LeastSquares best = Fit(set.intercept, set.x, set.y, {}, Extended::kAlways);
    const LeastSquares plain = Fit(set.intercept, set.x, set.y, {}, Extended::kNever);
    const Column truth = RawCoefficients(best.basis), reached = RawCoefficients(plain.basis);
    const Column errors = ClassicalErrors(best);
    for (std::size_t j = 0; j < truth.size(); ++j) {
      EXPECT_LE(std::abs(reached[j] - truth[j]),
                plain.predicted_error * std::max(std::abs(truth[j]), 0.01 * errors[j]))
          << name << ' ' << j;
    }
  }
}

// Low parts restore what rounding the powers of Filip took: 14.0 digits is what exact arithmetic on
// x rounded to doubles reaches (reference_lre.md).
class FilipPowers : public RowSource {
 public:
  FilipPowers()
      : x_(ReadCsvColumn("nist/Filip.csv", "x")), y_(ReadCsvColumn("nist/Filip.csv", "y")) {
    columns_[0].intercept = true;
  }
  std::int64_t rows() const override { return static_cast<std::int64_t>(x_.size()); }
  std::span<const DesignColumn> columns() const override { return columns_; }
  void Fill(Index, RowBlock& out) const override {
    out.rows = static_cast<Index>(x_.size());
    for (Index power = 0; power <= 10; ++power) {
      double* high = out.Scratch(power);
      double* low = out.Scratch(11 + power);
      for (std::size_t i = 0; i < x_.size(); ++i) {
        DoubleDouble product = 1;
        for (Index factor = 0; factor < power; ++factor) product = product * x_[i];
        high[i] = product.hi;
        low[i] = product.lo;
      }
      out.x[power] = high;
      out.x_low[power] = out.wants_low ? low : nullptr;
    }
    out.y = y_.data();
  }

 private:
  std::vector<DesignColumn> columns_{11};
  Column x_, y_;
};

TEST(LeastSquares, PowersFormedInDoubleDoubleReachTheDigitsOfTheirBase) {
  const NistSet set = ReadNist("Filip");
  const LeastSquares fit = FitLeastSquares(FilipPowers());
  EXPECT_GE(FewestDigits(set.coefficients, RawCoefficients(fit.basis)), 13.9);
  EXPECT_GE(FewestDigits(set.standard_errors, ClassicalErrors(fit)), 13.9);
}

// --- Rank
// ------------------------------------------------------------------------------------------

Column Coefficients(const DroppedColumn& dropped) {
  Column coefficients;
  for (const Repeat& repeat : dropped.repeats) coefficients.push_back(repeat.coefficient);
  return coefficients;
}

std::vector<Index> Columns(const DroppedColumn& dropped) {
  std::vector<Index> columns;
  for (const Repeat& repeat : dropped.repeats) columns.push_back(repeat.column);
  return columns;
}

class Rank : public ::testing::TestWithParam<std::size_t> {
 protected:
  // Expects that the last column is dropped, and what it is said to repeat.
  void ExpectRepeat(bool intercept, std::vector<Column> x, std::vector<Index> columns,
                    Column coefficients, const Column& w = {}, double digits = 12) {
    const LeastSquares fit = Fit(intercept, x, y_, w, Extended::kNever);
    ASSERT_EQ(fit.dropped.size(), 1u);
    EXPECT_EQ(fit.dropped[0].column, static_cast<Index>(x.size()) - !intercept);
    EXPECT_EQ(Columns(fit.dropped[0]), columns);
    for (std::size_t i = 0; i < coefficients.size(); ++i)
      EXPECT_TRUE(Agrees(coefficients[i], Coefficients(fit.dropped[0])[i], digits)) << i;
    EXPECT_EQ(fit.rank(), fit.basis.columns - 1);
    EXPECT_TRUE(std::isnan(RawCoefficients(fit.basis)[fit.dropped[0].column]));
  }
  void ExpectFull(bool intercept, const std::vector<Column>& x) {
    EXPECT_TRUE(Fit(intercept, x, y_, {}, Extended::kNever).dropped.empty());
  }

  const std::size_t n_ = GetParam();
  const Column y_ = Noise(n_, 1);
  const Column age_ = Map(Noise(n_, 2), [](double v) { return 50 + 10 * v; });
  const Column size_ = Map(Noise(n_, 3), [](double v) { return std::exp(4 * v); });
  const Column visits_ = Map(Noise(n_, 4), [](double v) { return std::floor(std::abs(5 * v)); });
};

INSTANTIATE_TEST_SUITE_P(AnyNumberOfRows, Rank, ::testing::Values(30, 1000, 1000000));

TEST_P(Rank, RepeatsAndSumsAreNamed) {
  ExpectRepeat(true, {age_, size_, age_}, {1}, {1});
  Column total(n_), mixed(n_);
  for (std::size_t i = 0; i < n_; ++i) {
    total[i] = age_[i] + size_[i] + visits_[i];
    mixed[i] = 0.1 * age_[i] - 0.7 * size_[i] + 1e3 * visits_[i] + 17;
  }
  ExpectRepeat(true, {age_, size_, visits_, total}, {1, 2, 3}, {1, 1, 1});
  ExpectRepeat(false, {age_, size_, visits_, total}, {0, 1, 2}, {1, 1, 1});
  ExpectRepeat(true, {age_, size_, visits_, mixed}, {0, 1, 2, 3}, {17, 0.1, -0.7, 1e3});
  ExpectRepeat(true, {age_, size_, visits_, total}, {1, 2, 3}, {1, 1, 1},
               Map(Noise(n_, 5), [](double v) { return std::exp(3 * v); }));
}

TEST_P(Rank, ChangesOfUnitAreRepeats) {
  ExpectRepeat(true, {age_, Map(age_, [](double v) { return v * 1.8 + 32; })}, {0, 1}, {32, 1.8});
  ExpectRepeat(true,
               {Map(size_, [](double v) { return std::log(v); }),
                Map(size_, [](double v) { return std::log10(v * v); })},
               {1}, {2 / std::log(10)});
}

TEST_P(Rank, ConstantsRepeatTheInterceptAndZerosNothing) {
  ExpectRepeat(true, {age_, Column(n_, 0.1)}, {0}, {0.1});
  ExpectRepeat(true, {age_, Column(n_, 0.1)}, {0}, {0.1},
               Map(Noise(n_, 5), [](double v) { return std::exp(3 * v); }));
  ExpectRepeat(true, {age_, Column(n_, 0.0)}, {}, {});
  ExpectFull(false, {age_, Column(n_, 0.1)});
}

TEST_P(Rank, FullSetOfIndicatorsRepeatsTheIntercept) {
  std::vector<Column> level(3, Column(n_));
  for (std::size_t i = 0; i < n_; ++i) level[i % 3][i] = 1;
  ExpectRepeat(true, {level[0], level[1], level[2]}, {0, 1, 2}, {1, -1, -1});
  ExpectFull(false, {level[0], level[1], level[2]});
}

TEST_P(Rank, SmallSpreadFarFromZeroIsNoConstant) {
  const Column noise = Noise(n_, 6);
  const Column far = Map(noise, [](double v) { return 1e9 + 1e-3 * v; });
  ExpectFull(true, {age_, far});
  // The spread that far carries is all that a second copy has to be measured by.
  ExpectRepeat(true, {far, Map(far, [](double v) { return v - 1e9; })}, {0, 1}, {-1e9, 1});
  // Added to 1e9, age keeps 7 decimals: the sum repeats it as far as doubles can tell.
  ExpectRepeat(true, {age_, Map(age_, [](double v) { return 1e9 + v; })}, {0, 1}, {1e9, 1}, {}, 7);
}

TEST_P(Rank, NearRepeatsThatDataCanTellApartStay) {
  Column near = age_;
  const Column noise = Noise(n_, 7);
  for (std::size_t i = 0; i < n_; ++i) near[i] += 1e-11 * noise[i];
  ExpectFull(true, {age_, near});
  std::vector<Column> powers;
  for (int power = 1; power <= 10; ++power)
    powers.push_back(Map(noise, [=](double v) { return std::pow(-6 + 1.5 * v, power); }));
  ExpectFull(true, powers);
  ExpectFull(false, powers);
}

TEST_P(Rank, OneIndicatedRowIsEnough) {
  Column rare(n_);
  rare[n_ / 2] = 1;
  ExpectFull(true, {age_, rare});
  Column outlier = Noise(n_, 8);
  outlier[3] = 1e12;
  ExpectFull(true, {outlier, age_});
}

TEST(LeastSquares, SeveralDroppedColumnsAreEachNamedByKeptOnes) {
  const Column a = Noise(40, 1), b = Noise(40, 2), y = Noise(40, 3);
  Column sum(40), difference(40);
  for (int i = 0; i < 40; ++i) {
    sum[i] = a[i] + b[i];
    difference[i] = a[i] - b[i];
  }
  const LeastSquares fit = Fit(true, {a, sum, b, difference}, y);
  ASSERT_EQ(fit.dropped.size(), 2u);
  EXPECT_EQ(fit.basis.kept, (std::vector<Index>{0, 1, 2}));
  EXPECT_EQ(Columns(fit.dropped[0]), (std::vector<Index>{1, 2}));
  EXPECT_TRUE(Agrees(-1, Coefficients(fit.dropped[0])[0], 13));
  EXPECT_TRUE(Agrees(1, Coefficients(fit.dropped[0])[1], 13));
  EXPECT_TRUE(Agrees(2, Coefficients(fit.dropped[1])[0], 13));
  EXPECT_TRUE(Agrees(-1, Coefficients(fit.dropped[1])[1], 13));
  // What is kept is fitted as if the rest had never been there.
  const LeastSquares alone = Fit(true, {a, sum}, y);
  EXPECT_TRUE(Agrees(alone.residual_ss, fit.residual_ss, 14));
  EXPECT_TRUE(Agrees(RawCoefficients(alone.basis)[2], RawCoefficients(fit.basis)[2], 13));
}

// --- Invariances ---------------------------------------------------------------------------------

TEST(LeastSquares, RowOrderChangesNothingButTheLastDigits) {
  const std::size_t n = 5000;
  Column a = Noise(n, 1), b = Noise(n, 2), y(n);
  const Column noise = Noise(n, 3);
  for (std::size_t i = 0; i < n; ++i) y[i] = 3 + a[i] - 2 * b[i] + noise[i];
  const Column before = RawCoefficients(Fit(true, {a, b}, y, {}, Extended::kNever).basis);
  std::vector<std::size_t> order(n);
  std::iota(order.begin(), order.end(), 0);
  std::shuffle(order.begin(), order.end(), std::mt19937(9));
  Column sa(n), sb(n), sy(n);
  for (std::size_t i = 0; i < n; ++i) {
    sa[i] = a[order[i]];
    sb[i] = b[order[i]];
    sy[i] = y[order[i]];
  }
  const Column after = RawCoefficients(Fit(true, {sa, sb}, sy, {}, Extended::kNever).basis);
  for (int j = 0; j < 3; ++j) EXPECT_TRUE(Agrees(before[j], after[j], 13.5)) << j;
}

// Multiples of 2^-20 below 2^10 stay exact when 2^30 is added, so that slopes and errors must not
// move; the intercept moves by exactly the shift times the slope.
TEST(LeastSquares, ShiftByABillionKeepsSlopesAndErrors) {
  const std::size_t n = 4000;
  const Column x = Map(Noise(n, 1), [](double v) { return std::floor(v * 0x1p20) * 0x1p-20; });
  const Column noise = Noise(n, 2);
  Column y(n);
  for (std::size_t i = 0; i < n; ++i) y[i] = std::floor((0.5 * x[i] + noise[i]) * 0x1p20) * 0x1p-20;
  const LeastSquares near = Fit(true, {x}, y);
  const LeastSquares far = Fit(true, {Map(x, [](double v) { return v + 0x1p30; })},
                               Map(y, [](double v) { return v + 0x1p30; }));
  const Column b = RawCoefficients(near.basis), shifted = RawCoefficients(far.basis);
  EXPECT_TRUE(Agrees(b[1], shifted[1], 14));
  EXPECT_TRUE(Agrees(b[0] + 0x1p30 * (1 - b[1]), shifted[0], 14));
  EXPECT_TRUE(Agrees(ClassicalErrors(near)[1], ClassicalErrors(far)[1], 14));
  EXPECT_TRUE(Agrees(near.residual_ss, far.residual_ss, 14));
  EXPECT_TRUE(Agrees(near.total_ss, far.total_ss, 14));
  EXPECT_TRUE(Agrees(near.y_mean + 0x1p30, far.y_mean, 15));
}

TEST(LeastSquares, PowersOfTwoAsUnitsChangeNoBit) {
  const Column x = Noise(200, 1), y = Noise(200, 2),
               w = Map(Noise(200, 3), [](double v) { return std::exp(v); });
  const LeastSquares fit = Fit(true, {x}, y, w);
  for (int power : {-900, -30, 500}) {
    const auto scale = [=](double v) { return std::ldexp(v, power); };
    const LeastSquares scaled = Fit(true, {Map(x, scale)}, Map(y, [](double v) { return v * 4; }),
                                    Map(w, [](double v) { return v * 0x1p40; }));
    EXPECT_EQ(std::ldexp(RawCoefficients(fit.basis)[1], 2 - power),
              RawCoefficients(scaled.basis)[1]);
    EXPECT_EQ(4 * RawCoefficients(fit.basis)[0], RawCoefficients(scaled.basis)[0]);
    EXPECT_EQ(16 * 0x1p40 * fit.residual_ss, scaled.residual_ss);
    EXPECT_EQ(std::ldexp(ClassicalErrors(fit)[1], 2 - power), ClassicalErrors(scaled)[1]);
  }
}

TEST(LeastSquares, GivenCentresChangeNothingButTheBasis) {
  const Column x = Map(Noise(100, 1), [](double v) { return 20 + v; }), y = Noise(100, 2);
  std::vector<DesignColumn> columns(2);
  columns[0].intercept = true;
  columns[1].centre = 19.5;
  const LeastSquares given =
      FitLeastSquares(ColumnSource(columns, {std::span<const double>(), x}, y));
  const LeastSquares found = Fit(true, {x}, y);
  EXPECT_EQ(given.basis.centre[1], 19.5);
  for (int j = 0; j < 2; ++j) {
    EXPECT_TRUE(Agrees(RawCoefficients(found.basis)[j], RawCoefficients(given.basis)[j], 13));
    EXPECT_TRUE(Agrees(ClassicalErrors(found)[j], ClassicalErrors(given)[j], 13));
  }
}

// A weight of 3 is the same as the row given three times, but for the degrees of freedom.
TEST(LeastSquares, WholeWeightsAreRepeatedRows) {
  const Column x = Noise(30, 1), y = Noise(30, 2);
  Column w(30), long_x, long_y;
  for (int i = 0; i < 30; ++i) {
    w[i] = 1 + i % 4;
    for (int copy = 0; copy < w[i]; ++copy) {
      long_x.push_back(x[i]);
      long_y.push_back(y[i]);
    }
  }
  const LeastSquares weighted = Fit(true, {x}, y, w), repeated = Fit(true, {long_x}, long_y);
  for (int j = 0; j < 2; ++j)
    EXPECT_TRUE(Agrees(RawCoefficients(repeated.basis)[j], RawCoefficients(weighted.basis)[j], 13));
  EXPECT_TRUE(Agrees(repeated.residual_ss, weighted.residual_ss, 14));
  EXPECT_TRUE(Agrees(repeated.total_ss, weighted.total_ss, 14));
  EXPECT_TRUE(Agrees(repeated.y_mean, weighted.y_mean, 14));
  EXPECT_EQ(weighted.weight_sum, static_cast<double>(long_x.size()));
  double logs = 0;
  for (double weight : w) logs += std::log(weight);
  EXPECT_TRUE(Agrees(logs, weighted.log_weight_sum, 14));
}

TEST(LeastSquares, ExtendedPassAgreesWithThePlainOneOnManyRows) {
  const std::size_t n = 20011;  // no multiple of any block
  const Column a = Noise(n, 1), b = Noise(n, 2),
               w = Map(Noise(n, 3), [](double v) { return std::exp(v); });
  Column y = Noise(n, 4);
  for (std::size_t i = 0; i < n; ++i) y[i] += a[i] - b[i] + 5;
  const LeastSquares plain = Fit(true, {a, b}, y, w, Extended::kNever);
  const LeastSquares extended = Fit(true, {a, b}, y, w, Extended::kAlways);
  EXPECT_FALSE(plain.basis.extended);
  EXPECT_TRUE(extended.basis.extended);
  for (int j = 0; j < 3; ++j) {
    EXPECT_TRUE(Agrees(RawCoefficients(extended.basis)[j], RawCoefficients(plain.basis)[j], 13.5));
    EXPECT_TRUE(Agrees(ClassicalErrors(extended)[j], ClassicalErrors(plain)[j], 13.5));
    if (j > 0) {
      EXPECT_TRUE(Agrees(extended.effect[j], plain.effect[j], 13));
    }
  }
  EXPECT_TRUE(Agrees(extended.residual_ss, plain.residual_ss, 13.5));
  EXPECT_TRUE(Agrees(extended.total_ss, plain.total_ss, 13.5));
}

// --- Corners -------------------------------------------------------------------------------------

TEST(LeastSquares, NoRowsDropEverything) {
  const LeastSquares fit = Fit(true, {{}, {}}, {});
  EXPECT_EQ(fit.rank(), 0);
  EXPECT_EQ(fit.dropped.size(), 3u);
  EXPECT_TRUE(fit.dropped[1].repeats.empty());
  EXPECT_TRUE(std::isnan(fit.y_mean));
  EXPECT_TRUE(std::isnan(fit.residual_sd()));
  EXPECT_EQ(fit.residual_ss, 0);
}

TEST(LeastSquares, OneRowIsItsMean) {
  const LeastSquares fit = Fit(true, {{2.0}, {3.0}}, {7.5});
  EXPECT_EQ(fit.basis.kept, (std::vector<Index>{0}));
  EXPECT_EQ(RawCoefficients(fit.basis)[0], 7.5);
  EXPECT_EQ(fit.residual_df(), 0);
  EXPECT_TRUE(std::isnan(fit.residual_sd()));
  EXPECT_EQ(fit.dropped[0].repeats.at(0).coefficient, 2);
  EXPECT_EQ(fit.dropped[1].repeats.at(0).coefficient, 3);
}

TEST(LeastSquares, FewerRowsThanColumnsKeepAsManyAsRows) {
  const LeastSquares fit =
      Fit(true, {Noise(3, 1), Noise(3, 2), Noise(3, 3), Noise(3, 4)}, Noise(3, 5));
  EXPECT_EQ(fit.basis.kept, (std::vector<Index>{0, 1, 2}));
  EXPECT_EQ(fit.residual_df(), 0);
  EXPECT_EQ(fit.residual_ss, 0);
}

TEST(LeastSquares, SaturatedFitGoesThroughItsPoints) {
  const LeastSquares fit = Fit(true, {{1, 2, 4}, {1, 4, 16}}, {5, 3, 8});
  // The parabola through (1, 5), (2, 3), (4, 8) by divided differences: 10 − 6.5 x + 1.5 x².
  const Column b = RawCoefficients(fit.basis);
  EXPECT_TRUE(Agrees(10, b[0], 14));
  EXPECT_TRUE(Agrees(-6.5, b[1], 14));
  EXPECT_TRUE(Agrees(1.5, b[2], 14));
  EXPECT_EQ(fit.residual_df(), 0);
  EXPECT_EQ(fit.residual_ss, 0);
  for (double error : ClassicalErrors(fit)) EXPECT_TRUE(std::isnan(error));
}

TEST(LeastSquares, ExactFitIsRecognised) {
  const Column x = Noise(50, 1);
  EXPECT_TRUE(Fit(true, {x}, Map(x, [](double v) { return 0.1 + v / 3; })).exact);
  EXPECT_TRUE(
      Fit(true, {x}, Map(x, [](double v) { return 0.1 + v / 3; }), {}, Extended::kNever).exact);
  Column y = Map(x, [](double v) { return 0.1 + v / 3; });
  y[7] += 1e-13;
  EXPECT_FALSE(Fit(true, {x}, y).exact);
}

TEST(LeastSquares, FlatResponseIsRecognised) {
  const Column x = Noise(50, 1);
  const LeastSquares flat = Fit(true, {x}, Column(50, 0.1));
  EXPECT_TRUE(flat.flat_response);
  EXPECT_TRUE(flat.exact);
  EXPECT_EQ(RawCoefficients(flat.basis)[0], 0.1);
  EXPECT_EQ(RawCoefficients(flat.basis)[1], 0);
  EXPECT_FALSE(Fit(false, {x}, Column(50, 0.1)).flat_response);
  EXPECT_TRUE(Fit(false, {x}, Column(50, 0.0)).flat_response);
  Column y(50, 1e9);
  y[3] += 1e-3;
  EXPECT_FALSE(Fit(true, {x}, y).flat_response);
}

TEST(LeastSquares, HugeAndTinyNumbersNeitherOverflowNorVanish) {
  const Column x = Noise(60, 1), y = Noise(60, 2);
  const double slope = RawCoefficients(Fit(true, {x}, y).basis)[1];
  for (double unit : {1e-290, 1e-150, 1e150, 1e290}) {
    const LeastSquares fit = Fit(true, {Map(x, [=](double v) { return v * unit; })}, y);
    EXPECT_TRUE(Agrees(slope / unit, RawCoefficients(fit.basis)[1], 13.5)) << unit;
    EXPECT_GT(ClassicalErrors(fit)[1], 0) << unit;
  }
  // A range that overflows is measured from 0.
  Column ends(60, -1.5e308);
  for (int i = 0; i < 30; ++i) ends[i] = 1.5e308;
  double difference = 0;
  for (int i = 0; i < 60; ++i) difference += (i < 30 ? y[i] : -y[i]) / 30;
  EXPECT_TRUE(Agrees(difference / 1.5e308 / 2, RawCoefficients(Fit(true, {ends}, y).basis)[1], 11));
}

TEST(CentredBasis, EstimatesAndCoordinatesOfARow) {
  const std::size_t n = 40;
  const Column a = Map(Noise(n, 1), [](double v) { return 1e6 + v; }), b = Noise(n, 2),
               y = Noise(n, 3);
  for (Extended extended : {Extended::kNever, Extended::kAlways}) {
    const LeastSquares fit = Fit(true, {a, b, a}, y, {}, extended);
    EXPECT_EQ(fit.dropped.at(0).column, 3);
    const Column raw = RawCoefficients(fit.basis);
    double leverage_sum = 0, rss = 0;
    for (std::size_t i = 0; i < n; ++i) {
      const Column row = {1, a[i], b[i], std::nan("")};
      Column coordinates(3);
      Coordinates(fit.basis, row, coordinates);
      for (double q : coordinates) leverage_sum += q * q;
      const double estimate = Estimate(fit.basis, row);
      EXPECT_NEAR(estimate, raw[0] + raw[1] * a[i] + raw[2] * b[i], 1e-8);
      rss += (y[i] - estimate) * (y[i] - estimate);
    }
    EXPECT_TRUE(Agrees(3, leverage_sum, 13));
    EXPECT_TRUE(Agrees(fit.residual_ss, rss, 13));
  }
}

TEST(CentredBasis, TermCoordinatesAreThoseOfUnitRows) {
  const Column a = Map(Noise(30, 1), [](double v) { return 7 + v; }), b = Noise(30, 2),
               y = Noise(30, 3);
  for (bool intercept : {true, false}) {
    const LeastSquares fit = Fit(intercept, {a, b}, y);
    const Index k = fit.basis.columns;
    const Column all = TermCoordinates(fit.basis);
    for (Index j = 0; j < k; ++j) {
      Column unit(k), coordinates(k);
      unit[j] = 1;
      Coordinates(fit.basis, unit, coordinates);
      for (Index i = 0; i < k; ++i) EXPECT_NEAR(coordinates[i], all[j * k + i], 1e-14);
    }
  }
}

}  // namespace
}  // namespace ladderline
