#include <boost/math/special_functions/beta.hpp>
#include <boost/math/special_functions/gamma.hpp>
#include <cmath>
#include <limits>

#include "core/rates/binomial.h"
#include "core/rates/poisson.h"
#include "core/rates/rate_ratio.h"
#include "core/rates/tails.h"
#include "core/support/math_policy.h"
#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using ladderline::testing::Agrees;
using ladderline::testing::ReadCsvText;

// The rows of one kind in the reference file; there are some.
nlohmann::json Rows(const char* kind) {
  nlohmann::json rows = ladderline::testing::ReadJson("rates.json").at(kind);
  EXPECT_GT(rows.size(), 20U);
  return rows;
}

constexpr double kInf = std::numeric_limits<double>::infinity();
constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

// tests/reference/rates.py, mpmath 1.2.1, 40 digits: 0 to 1e15 events, fractional counts, levels
// from 1e-9 to 1 - 2^-53.
TEST(Rates, LimitsKeepThirteenDigits) {
  for (const auto& row : Rows("rates")) {
    const double k = row["events"], level = row["level"];
    EXPECT_TRUE(Agrees(row["low"], RateLow(k, 1, 1, level), k > 0 && k < 0.1 ? 11.5 : 13)) << row;
    EXPECT_TRUE(Agrees(row["high"], RateHigh(k, 1, 1, level), 13)) << row;
  }
}

TEST(Shares, LimitsKeepThirteenDigits) {
  for (const auto& row : Rows("shares")) {
    const double part = row["part"], whole = row["whole"], level = row["level"];
    EXPECT_TRUE(Agrees(row["low"], PercentLow(part, whole, level), 13)) << row;
    EXPECT_TRUE(Agrees(row["high"], PercentHigh(part, whole, level), 13)) << row;
  }
}

TEST(RateRatios, LimitsKeepThirteenDigits) {
  for (const auto& row : Rows("ratios")) {
    const double e1 = row["e1"], b1 = row["b1"], e2 = row["e2"], b2 = row["b2"];
    const double level = row["level"];
    EXPECT_TRUE(Agrees(row["low"], RateRatioLow(e1, b1, e2, b2, level), 13)) << row;
    const double high = RateRatioHigh(e1, b1, e2, b2, level);
    if (row["high"].is_null()) {
      EXPECT_TRUE(std::isnan(high)) << row;
    } else {
      EXPECT_TRUE(Agrees(row["high"], high, 13)) << row;
    }
  }
}

// The same script: exact sums of fractions up to 4000 events, ties included; 40-digit tails beyond.
TEST(RateRatios, PValueKeepsElevenDigitsInTheTail) {
  for (const auto& row : Rows("p_values"))
    EXPECT_TRUE(Agrees(row["p"], RateRatioP(row["e1"], row["b1"], row["e2"], row["b2"]), 11))
        << row;
}

// tests/reference/rates.R: poisson.test and binom.test of R 4.2.2. R finds p-values and limits by
// its own root finders, good to about ten digits.
TEST(Rates, AgreeWithR) {
  const auto columns = ReadCsvText("rates_r.csv");
  const auto number = [&](const char* column, size_t i) {
    const std::string& text = columns.at(column)[i];
    return text == "Inf" ? kInf : std::stod(text);
  };
  const size_t rows = columns.at("kind").size();
  ASSERT_GT(rows, 100U);
  for (size_t i = 0; i < rows; ++i) {
    const std::string& kind = columns.at("kind")[i];
    const double a = number("a", i), b = number("b", i), c = number("c", i), d = number("d", i);
    const double level = number("level", i);
    double estimate, low, high, p = 1;
    if (kind == "rate") {
      estimate = RatePer(a, b, 1);
      low = RateLow(a, b, 1, level);
      high = RateHigh(a, b, 1, level);
    } else if (kind == "share") {
      estimate = PercentOf(a, b) / 100;
      low = PercentLow(a, b, level) / 100;
      high = PercentHigh(a, b, level) / 100;
    } else {
      estimate = RateRatio(a, b, c, d);
      low = RateRatioLow(a, b, c, d, level);
      high = RateRatioHigh(a, b, c, d, level);
      p = RateRatioP(a, b, c, d);
    }
    EXPECT_TRUE(Agrees(number("estimate", i), estimate, 14)) << kind << " " << i;
    EXPECT_TRUE(Agrees(number("low", i), low, 12)) << kind << " " << i;
    EXPECT_TRUE(Agrees(number("high", i), high, 12)) << kind << " " << i;
    EXPECT_TRUE(Agrees(number("p", i), p, 11)) << kind << " " << i;
  }
}

// Boost.Math 1.74 as an independent computation where it keeps its digits.
TEST(Tails, AgreeWithTheIncompleteGammaAndBetaFunctions) {
  const MathPolicy policy;
  for (const double k : {0.02, 0.7, 1.0, 3.0, 12.5, 80.0, 390.0, 410.0, 2000.0, 20000.5}) {
    for (const double z : {-6.0, -3.0, -1.0, 0.0}) {
      const double low = k * std::exp(z / std::sqrt(k)),
                   high = (k + 1) * std::exp(-z / std::sqrt(k));
      EXPECT_TRUE(Agrees(boost::math::gamma_p(k, low, policy),
                         std::exp(PoissonLaw(k).AtLeast(low).log_p), 11))
          << k << " " << low;
      EXPECT_TRUE(Agrees(boost::math::gamma_q(k + 1, high, policy),
                         std::exp(PoissonLaw(k).AtMost(high).log_p), 11))
          << k << " " << high;
      for (const double m : {0.0, 0.3, 1.0, 6.5, 399.0, 5000.0}) {
        const double odds = k / (m + 1) * std::exp(z * std::sqrt(1 / k + 1 / (m + 1)));
        EXPECT_TRUE(Agrees(
            boost::math::ibeta(k, m + 1, odds / (1 + odds), policy),
            std::exp(BinomialLaw(k, m).AtLeast(odds / (1 + odds), 1 / (1 + odds)).log_p), 11))
            << k << " " << m << " " << odds;
      }
    }
  }
}

TEST(Tails, SlopeIsTheDerivativeOfTheLogTail) {
  const auto check = [&](const auto& tail, double at) {
    const double h = 3e-7;
    const double difference =
        (tail(at * std::exp(h)).log_p - tail(at * std::exp(-h)).log_p) / (2 * h);
    EXPECT_NEAR(tail(at).slope, difference, 1e-6 * std::abs(difference)) << at;
  };
  for (const double k : {0.5, 4.0, 700.0, 1e7}) {
    const PoissonLaw law(k);
    check([&](double x) { return law.AtLeast(x); }, k - std::sqrt(k) / 2);
    check([&](double x) { return law.AtMost(x); }, k + std::sqrt(k));
    for (const double m : {0.0, 0.5, 3.0, 1e6}) {
      const BinomialLaw share(k, m);
      check([&](double odds) { return share.AtLeast(odds / (1 + odds), 1 / (1 + odds)); },
            k / (m + 1) / 2);
    }
  }
}

// With no event the limits have a closed form: e^-mean = (1 - level)/2, (1 - p)^n = (1 - level)/2.
TEST(Rates, NoEventsHaveClosedForms) {
  for (const double level : {0.5, 0.95, 1 - 0x1p-50}) {
    const double tail = (1 - level) / 2;
    EXPECT_EQ(RateLow(0, 50, 1000, level), 0);
    EXPECT_TRUE(Agrees(-std::log(tail) * 20, RateHigh(0, 50, 1000, level), 14));
    EXPECT_EQ(PercentLow(0, 7, level), 0);
    EXPECT_TRUE(Agrees(-100 * std::expm1(std::log(tail) / 7), PercentHigh(0, 7, level), 14));
    EXPECT_EQ(PercentHigh(7, 7, level), 100);
    EXPECT_TRUE(Agrees(100 * std::pow(tail, 1.0 / 7), PercentLow(7, 7, level), 14));
  }
}

TEST(Rates, EstimateLiesBetweenItsLimitsWhichWidenWithTheLevel) {
  for (const double k : {0.0, 0.4, 1.0, 33.0, 1e5, 1e14}) {
    double low = RatePer(k, 7, 100), high = low;
    for (const double level : {0.8, 0.9, 0.95, 0.999, 1 - 1e-12}) {
      EXPECT_LE(RateLow(k, 7, 100, level), low) << k;
      EXPECT_GE(RateHigh(k, 7, 100, level), high) << k;
      low = RateLow(k, 7, 100, level);
      high = RateHigh(k, 7, 100, level);
    }
  }
}

TEST(RateRatios, SwappingTheTwoInvertsTheRatioAndKeepsP) {
  for (const double e1 : {1.0, 8.0, 3000.0}) {
    for (const double e2 : {2.0, 8.0, 1e9}) {
      EXPECT_TRUE(
          Agrees(1 / RateRatioHigh(e2, 5, e1, 3, 0.9), RateRatioLow(e1, 3, e2, 5, 0.9), 14));
      EXPECT_TRUE(Agrees(RateRatioP(e2, 5, e1, 3), RateRatioP(e1, 3, e2, 5), 14));
    }
  }
}

// With equal bases the binomial law is symmetric: every division has a twin exactly as likely.
TEST(RateRatios, TiesCountOnBothSides) {
  for (const double n : {1.0, 10.0, 1001.0, 1e6, 1e11}) {
    for (const double step : {0.0, 1.0, 5.0, 40.0}) {
      const double e1 = std::floor(n / 2) - step, e2 = n - e1;
      if (e1 < 0) continue;
      const double one_side = std::exp(BinomialLaw(e2, e1).AtLeast(1, 1).log_p);
      EXPECT_TRUE(Agrees(std::min(1.0, 2 * one_side), RateRatioP(e1, 3, e2, 3), 12)) << n << step;
    }
  }
}

TEST(RateRatios, PIsOneAtTheLikeliestDivision) {
  EXPECT_EQ(RateRatioP(100, 7, 100, 7), 1);
  EXPECT_EQ(RateRatioP(0, 3, 0, 4), 1);
  EXPECT_EQ(RateRatioP(3e9, 3, 1e9, 1), 1);
  EXPECT_EQ(RateRatioP(1, 1e-9, 0, 1e-9), 1);
}

// Up to 2^53 events, where neighbouring counts are the last that differ, the search for the other
// side ends. mpmath 1.2.1: erfc(5e8/sqrt((2^53 - 1e9)/2)), the normal tails, right to 1e-7 here.
TEST(RateRatios, TheSearchEndsAtTheLargestCounts) {
  const double half = 0x1p52;
  EXPECT_TRUE(Agrees(5.85083984053e-26, RateRatioP(half, 1, half - 1e9, 1), 6));
  EXPECT_EQ(RateRatioP(0x1p53, 1, 0, 1), 0);
}

TEST(RateRatios, ExtremeBasesDoNotOverflow) {
  EXPECT_TRUE(Agrees(RateRatioP(5, 2, 9, 3), RateRatioP(5, 2e300, 9, 3e300), 13));
  EXPECT_TRUE(Agrees(RateRatioP(5, 2, 9, 3), RateRatioP(5, 2e-300, 9, 3e-300), 13));
  EXPECT_EQ(RateRatio(4, 2e300, 2, 1e300), 1);
  // Quotients whose parts leave the range of a double.
  EXPECT_TRUE(Agrees(1e200, RateRatio(1e-200, 1e-200, 1, 1e200), 15));
  EXPECT_TRUE(Agrees(1e-200, RateRatio(1, 1e200, 1e-200, 1e-200), 15));
  EXPECT_TRUE(std::isinf(RateRatio(5, 1e-300, 1, 1e300)));
  for (const double unit : {1e-250, 1e250}) {
    EXPECT_TRUE(
        Agrees(RateRatioLow(5, 2, 9, 3, 0.9), RateRatioLow(5, 2 * unit, 9, 3 * unit, 0.9), 14));
    EXPECT_TRUE(
        Agrees(RateRatioHigh(5, 2, 9, 3, 0.9), RateRatioHigh(5, 2 * unit, 9, 3 * unit, 0.9), 14));
  }
}

TEST(Rates, OutsideTheDomainIsNaN) {
  for (const double bad : {-1.0, kNaN}) {
    EXPECT_TRUE(std::isnan(RatePer(bad, 1, 1)));
    EXPECT_TRUE(std::isnan(RateLow(bad, 1, 1, 0.95)));
    EXPECT_TRUE(std::isnan(RateHigh(bad, 1, 1, 0.95)));
    EXPECT_TRUE(std::isnan(PercentOf(bad, 1)));
    EXPECT_TRUE(std::isnan(PercentLow(bad, 1, 0.95)));
    EXPECT_TRUE(std::isnan(RateRatio(bad, 1, 1, 1)));
    EXPECT_TRUE(std::isnan(RateRatio(1, 1, bad, 1)));
    EXPECT_TRUE(std::isnan(RateRatioLow(bad, 1, 1, 1, 0.95)));
    EXPECT_TRUE(std::isnan(RateRatioP(1, 1, bad, 1)));
  }
  for (const double base : {0.0, -2.0, kNaN}) {
    EXPECT_TRUE(std::isnan(RatePer(1, base, 1)));
    EXPECT_TRUE(std::isnan(RateHigh(1, base, 1, 0.95)));
    EXPECT_TRUE(std::isnan(PercentOf(0, base)));
    EXPECT_TRUE(std::isnan(RateRatio(1, base, 1, 1)));
    EXPECT_TRUE(std::isnan(RateRatioHigh(1, 1, 1, base, 0.95)));
    EXPECT_TRUE(std::isnan(RateRatioP(1, base, 1, 1)));
  }
  for (const double level : {0.0, 1.0, -1.0, 95.0, kNaN}) {
    EXPECT_TRUE(std::isnan(RateLow(1, 1, 1, level)));
    EXPECT_TRUE(std::isnan(PercentHigh(1, 2, level)));
    EXPECT_TRUE(std::isnan(RateRatioLow(1, 1, 1, 1, level)));
  }
  EXPECT_TRUE(std::isnan(PercentOf(3, 2)));
  EXPECT_TRUE(std::isnan(RateRatio(1, 1, 0, 1)));
  EXPECT_TRUE(std::isnan(RateRatioHigh(1, 1, 0, 1, 0.95)));
  EXPECT_FALSE(std::isnan(RateRatioLow(1, 1, 0, 1, 0.95)));
  EXPECT_TRUE(std::isnan(RateRatioP(1.5, 1, 2, 1)));
  EXPECT_TRUE(std::isnan(RateRatioP(1e16, 1, 2, 1)));
}

TEST(Rates, WholeNumbersStayWhole) {
  EXPECT_EQ(RatePer(3, 1000, 1000), 3);
  EXPECT_EQ(RatePer(7, 100, 100), 7);
  EXPECT_EQ(PercentOf(29, 100), 29);
  EXPECT_EQ(RatePer(1e300, 1e300, 1e20), 1e20);
}

}  // namespace
}  // namespace ladderline
