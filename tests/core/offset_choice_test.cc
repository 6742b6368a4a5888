#include "core/profile/offset_choice.h"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <string>
#include <vector>

#include "core/describe/shape.h"
#include "core/elementary/elementary.h"
#include "tests/reference/reference.h"

namespace ladderline {
namespace {

using testing::ReadCsvColumn;
using testing::ReadJson;

std::string WhyNone(std::vector<double> values) {
  const Result<double> offset = ChooseLogOffset(std::move(values));
  return offset.ok() ? "there is one" : offset.error();
}

std::vector<double> Values(const nlohmann::json& record) {
  if (record.contains("values")) return record["values"].get<std::vector<double>>();
  std::vector<double> values = ReadCsvColumn(record["file"], record["column"]);
  for (double& v : values) v *= record["factor"].get<double>();
  return values;
}

// tests/reference/log_offsets.py: the definition at 700 digits, on open data and at the edges.
TEST(OffsetChoice, AgreesWithTheDefinitionInHighPrecision) {
  const nlohmann::json file = ReadJson("log_offsets.json");
  for (const nlohmann::json& record : file["cases"]) {
    SCOPED_TRACE(record["name"]);
    const std::vector<double> values = Values(record);
    ASSERT_EQ(values.size(), record["rows"].get<size_t>());
    const Result<double> offset = ChooseLogOffset(values);
    if (record["offset"].is_null()) {
      EXPECT_FALSE(offset.ok()) << offset.value();
      continue;
    }
    ASSERT_TRUE(offset.ok()) << offset.error();
    const double expected = record["offset"], excess = record["least_plus_offset"];
    const auto [least, largest] = std::minmax_element(values.begin(), values.end());
    const double straightness = std::max(1.0, excess / 2 / (*largest / 2 - *least / 2));
    const double rounding = std::nextafter(std::abs(expected), INFINITY) - std::abs(expected);
    EXPECT_NEAR(offset.value(), expected, 1e-11 * straightness * excess + rounding);
    EXPECT_GT(*least + offset.value(), 0);
  }
}

TEST(OffsetChoice, SaysWhyThereIsNone) {
  EXPECT_EQ(WhyNone({}), "there are no values");
  EXPECT_EQ(WhyNone({5}), "all values are 5");
  EXPECT_EQ(WhyNone({-0.0, 0.0, 0.0}), "all values are 0");
  EXPECT_EQ(WhyNone({1e300, 1e300}), "all values are 1e+300");
  EXPECT_EQ(WhyNone({1, 2}),
            "there are only two values, 1 and 2, which any offset leaves as skewed as they are");
  EXPECT_EQ(WhyNone({0, 0, 0, 7}),
            "there are only two values, 0 and 7, which any offset leaves as skewed as they are");
  EXPECT_EQ(WhyNone({0, 0, 3, 9}),
            "half of the values or more are 0, which leaves every logarithm skewed to the right");
  EXPECT_EQ(WhyNone({-9, -2, -1, 0}),
            "the values are not skewed to the right, and every logarithm is skewed to the left");
  EXPECT_EQ(WhyNone({1, 2, 3}),
            "the values are not skewed to the right, and every logarithm is skewed to the left");
  // 10¹⁶ and its neighbours are 2 apart; the root lies 0.0101 above −10¹⁶ (c = a²/(b − 2a)).
  EXPECT_EQ(WhyNone({1e16, 1e16 + 2, 1e16 + 400}),
            "the offset would lie nearer -1e+16 than numbers can tell");
  // The root of {0, a, 1} is a²/(1 − 2a), here 1e-400.
  EXPECT_EQ(WhyNone({0, 1e-200, 1}), "the offset would lie nearer 0 than numbers can tell");
  EXPECT_EQ(WhyNone({0, 5e-324, 5e-323}), "the offset would lie nearer 0 than numbers can tell");
}

// Of {0, a, b} the middle logarithm must lie halfway: (a + c)² = c (b + c), c = a²/(b − 2a).
TEST(OffsetChoice, ThreeValuesHaveAClosedForm) {
  const Result<double> offset = ChooseLogOffset({5, 0, 1});
  ASSERT_TRUE(offset.ok());
  EXPECT_NEAR(offset.value(), 1.0 / 3, 1e-12);
  EXPECT_NEAR(ChooseLogOffset({-7, -6, 93}).value(), 7 + 1.0 / 98, 1e-14);
}

TEST(OffsetChoice, DependsNeitherOnOrderNorOnWhereAndHowXIsMeasured) {
  std::vector<double> values = ReadCsvColumn("boxcox/journals.csv", "citations");
  const double offset = ChooseLogOffset(values).value();
  std::vector<double> changed(values.rbegin(), values.rend());
  EXPECT_EQ(ChooseLogOffset(changed).value(), offset);
  for (double& x : changed) x = 1024 * x;
  EXPECT_NEAR(ChooseLogOffset(changed).value(), 1024 * offset, 1e-9 * 1024);
  for (double& x : changed) x = x / 1024 - 4096;
  EXPECT_NEAR(ChooseLogOffset(changed).value(), offset + 4096, 1e-9);
}

// More rows than a search starts on without a sample: e^z of a symmetric z, less 2.
TEST(OffsetChoice, LongColumns) {
  std::vector<double> values;
  for (int i = -100000; i <= 100000; ++i) {
    const double share = i * 7919 % 100001 / 100001.0;
    values.push_back(Exp(3 * share * share * share) - 2);
  }
  EXPECT_NEAR(ChooseLogOffset(values).value(), 2, 1e-10);
}

TEST(OffsetChoice, LeavesNoSkewness) {
  std::vector<double> values = ReadCsvColumn("boxcox/ornstein.csv", "interlocks");
  const double offset = ChooseLogOffset(values).value();
  for (double& x : values) x = Log(x + offset);
  std::sort(values.begin(), values.end());
  EXPECT_NEAR(ShapeOfColumn(values).skewness, 0, 1e-12);
}

}  // namespace
}  // namespace ladderline
