// Chebyshev's polynomials are cosines, T_k(cos t) = cos kt; everything else follows from them.
#include "core/model/polynomial_basis.h"

#include <gtest/gtest.h>

#include <cmath>
#include <vector>

#include "core/model/design.h"
#include "core/model/fit.h"
#include "core/regression/collinearity.h"
#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::Agrees;

TEST(PolynomialBasis, IsChebyshevsOverTheRange) {
  const PolynomialBasis basis(2000, 2020, 20, true);
  for (const double t : {0.0, 0.5, 1.25, 2.0, 3.0}) {
    const double x = 2010 + 10 * std::cos(t);
    std::vector<double> values(20);
    basis.Values(x, values.data());
    for (int k = 1; k <= 20; ++k) {
      // x is rounded to 2^-42; T_k changes by up to k² times that over 10.
      EXPECT_NEAR(values[static_cast<size_t>(k - 1)], std::cos(k * std::acos((x - 2010) / 10)),
                  1e-11);
      EXPECT_EQ(basis.Value(x, k), values[static_cast<size_t>(k - 1)]);
    }
  }
}

TEST(PolynomialBasis, WithoutAnInterceptEveryColumnIsZeroAtZero) {
  const PolynomialBasis basis(3, 9, 6, false);
  for (int k = 1; k <= 6; ++k) EXPECT_EQ(basis.Value(0, k), 0);
  EXPECT_EQ(basis.Value(9, 1), 1);
  EXPECT_EQ(basis.Value(9, 6), 1);                  // T_5(1)
  EXPECT_NEAR(basis.Value(3, 6), -1.0 / 3, 1e-15);  // 3/9 T_5(−1)
}

TEST(PolynomialBasis, IsWrittenInThatOfAnotherRange) {
  for (const bool intercept : {true, false}) {
    const PolynomialBasis wide(1900, 2100, 8, intercept), narrow(1951.25, 2019.5, 8, intercept);
    const auto share = wide.In(narrow);
    for (const double x : {1951.25, 1960.0, 2000.5, 2019.5}) {
      for (int j = 1; j <= 8; ++j) {
        DoubleDouble sum = share[static_cast<size_t>(j)][0];
        for (int k = 1; k <= j; ++k)
          sum += share[static_cast<size_t>(j)][static_cast<size_t>(k)] * narrow.ValueExtended(x, k);
        EXPECT_NEAR(sum.value(), wide.Value(x, j), 1e-13) << j;
      }
    }
  }
}

TEST(PolynomialBasis, ExtendedColumnsRefineThePlainOnes) {
  for (const bool intercept : {true, false}) {
    const PolynomialBasis basis(-0.7, 12.3, 12, intercept);
    const std::vector<double> x = {-0.7, 0, 1.1, 5.8, 12.3};
    std::vector<std::vector<double>> plain(12, std::vector<double>(5)), high = plain, low = plain;
    std::vector<double*> p, h, l;
    for (size_t k = 0; k < 12; ++k) {
      p.push_back(plain[k].data());
      h.push_back(high[k].data());
      l.push_back(low[k].data());
    }
    basis.Fill(x.data(), 5, p.data());
    basis.FillExtended(x.data(), 5, h.data(), l.data());
    const auto powers = basis.InPowers();
    for (size_t k = 0; k < 12; ++k) {
      for (size_t i = 0; i < 5; ++i) {
        EXPECT_NEAR(plain[k][i], high[k][i], 1e-13);
        EXPECT_LE(std::abs(low[k][i]), 0x1p-53 * std::abs(high[k][i]));
        // The same number by Horner's rule from the coefficients of powers.
        const DoubleDouble unit = std::ldexp(x[i], -basis.unit_exponent());
        DoubleDouble value;
        for (size_t power = 13; power-- > 0;) value = value * unit + powers[k + 1][power];
        const DoubleDouble slip = value - DoubleDouble(high[k][i], low[k][i]);
        EXPECT_NEAR(slip.value(), 0, 1e-22);
      }
    }
  }
}

TEST(PolynomialBasis, TheTwoTablesAreEachOthersInverse) {
  for (const bool intercept : {true, false}) {
    for (const auto& [low, high] : {std::pair{-9.0, -3.0}, {0.0, 1e-12}, {-1.0, 1.0}, {5.0, 5.0}}) {
      const PolynomialBasis basis(low, high, 7, intercept);
      const auto in = basis.InPowers(), of = basis.OfPowers();
      for (size_t i = 0; i <= 7; ++i) {
        for (size_t j = 0; j <= 7; ++j) {
          DoubleDouble sum;
          double size = 1;
          for (size_t k = 0; k <= 7; ++k) {
            sum += of[i][k] * in[k][j];
            size += std::abs(of[i][k].hi * in[k][j].hi);
          }
          EXPECT_NEAR(sum.value() / size, (i == j ? 1 : 0) / size, 1e-28) << low << ' ' << i << j;
        }
      }
    }
  }
}

// R 4.2 (roles.R): singular values of the raw powers' columns, scaled to unit length.
TEST(RawColumns, ConditionNumberIsThatOfTheRawPowers) {
  const nlohmann::json r = testing::ReadJson("roles.json")["models"];
  for (const bool intercept : {true, false}) {
    std::vector<Label> labels;
    for (const char* text :
         {"Volume", intercept ? "Girth | polynomial 3" : "Girth | polynomial 2", "Height"})
      labels.push_back(ReadLabel(text).value());
    Result<ColumnSet> made = ColumnSet::Make(std::move(labels));
    ColumnSet set = std::move(made).value();
    set.Decide(2, Wanted::kNumber, "");
    const auto girth = testing::ReadCsvColumn("boxcox/trees.csv", "Girth"),
               height = testing::ReadCsvColumn("boxcox/trees.csv", "Height"),
               volume = testing::ReadCsvColumn("boxcox/trees.csv", "Volume");
    for (size_t i = 0; i < girth.size(); ++i) {
      std::vector<Cell> cells;
      for (const double x : {volume[i], girth[i], height[i]})
        cells.push_back({.kind = Cell::Kind::kNumber, .number = x});
      ASSERT_FALSE(set.Add(cells));
    }
    FitOptions options;
    options.intercept = intercept;
    const Model model = FitOls(set, options).value();
    const double condition =
        ConditionNumber(model.basis.fit, MakeRawColumns(model.columns, model.terms, {}));
    EXPECT_TRUE(
        Agrees(r[intercept ? "trees_cubic" : "trees_origin"]["condition_number"].get<double>(),
               condition, 9));
  }
}

}  // namespace
}  // namespace ladderline
