#include "core/model/columns.h"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include <cmath>

#include "core/model/column_summary.h"

namespace ladderline {
namespace {

using ::testing::HasSubstr;

Cell Number(double x) { return {.kind = Cell::Kind::kNumber, .number = x}; }
Cell Text(std::string_view text) { return {.kind = Cell::Kind::kText, .text = text}; }
Cell Integer(std::int64_t i) { return {.kind = Cell::Kind::kInteger, .integer = i}; }
const Cell kMissing;

ColumnSet Make(std::initializer_list<const char*> texts) {
  std::vector<Label> labels;
  for (const char* text : texts) {
    Result<Label> label = ReadLabel(text);
    if (!label.ok()) ADD_FAILURE() << label.error();
    labels.push_back(std::move(label).value());
  }
  Result<ColumnSet> set = ColumnSet::Make(std::move(labels));
  if (!set.ok()) ADD_FAILURE() << set.error();
  return std::move(set).value();
}

void Add(ColumnSet& set, std::vector<Cell> cells) {
  const std::optional<Error> error = set.Add(cells);
  EXPECT_FALSE(error) << error->what;
}

TEST(ColumnSet, KeepsCompleteRowsAndCountsTheRestByColumn) {
  ColumnSet set = Make({"y | log_offset", "age | number", "w | weight"});
  Add(set, {Number(1), Number(2), Number(1)});
  Add(set, {kMissing, kMissing, Number(1)});
  Add(set, {Number(0), Number(3), Number(1)});  // ln 0
  Add(set, {Number(2), Number(4), Number(0)});  // weight 0
  Add(set, {Number(-1), kMissing, Number(1)});  // both kinds
  Add(set, {Number(3), Number(5), Number(0.5)});
  EXPECT_EQ(set.rows().offered, 6);
  EXPECT_EQ(set.rows().fitted, 2);
  EXPECT_EQ(set.rows().with_gaps, 2);
  EXPECT_EQ(set.rows().outside, 3);
  EXPECT_EQ(set.column(0).missing, 1);
  EXPECT_EQ(set.column(0).outside, 2);
  EXPECT_EQ(set.column(1).missing, 2);
  EXPECT_EQ(set.column(2).outside, 1);
  EXPECT_EQ(set.OfferedNumber(0), 1);
  EXPECT_EQ(set.OfferedNumber(1), 6);
}

TEST(ColumnSet, MissingKeyDropsNoRow) {
  ColumnSet set = Make({"y", "case | key"});
  Add(set, {Number(1), kMissing});
  Add(set, {Number(2), Text("A-17")});
  Add(set, {Number(3), Integer(1)});
  EXPECT_EQ(set.rows().fitted, 3);
  EXPECT_EQ(set.keys()->At(0), KeyValue());
  EXPECT_EQ(set.keys()->At(1), KeyValue(std::string("A-17")));
  EXPECT_EQ(set.keys()->At(2), KeyValue(std::int64_t{1}));
}

TEST(ColumnSet, LettingRowsGoIsAsIfTheyHadNeverCome) {
  ColumnSet moving = Make({"y | log_offset", "t | category", "k | key"});
  const auto row = [](int i) {
    return std::vector<Cell>{i % 7 == 3 ? kMissing : Number(i % 5), Text(i % 3 == 0 ? "a" : "b"),
                             Integer(i)};
  };
  for (int i = 0; i < 5000; ++i) {
    Add(moving, row(i));
    if (i >= 1500) moving.Remove(row(i - 1500));
  }
  ColumnSet fresh = Make({"y | log_offset", "t | category", "k | key"});
  for (int i = 3500; i < 5000; ++i) Add(fresh, row(i));
  EXPECT_EQ(moving.rows().offered, fresh.rows().offered);
  EXPECT_EQ(moving.rows().fitted, fresh.rows().fitted);
  EXPECT_EQ(moving.rows().with_gaps, fresh.rows().with_gaps);
  EXPECT_EQ(moving.rows().outside, fresh.rows().outside);
  EXPECT_EQ(moving.Digest(), fresh.Digest());
  ASSERT_EQ(moving.column(0).numbers.size(), fresh.column(0).numbers.size());
  for (size_t i = 0; i < fresh.column(0).numbers.size(); ++i) {
    EXPECT_EQ(moving.column(0).numbers[i], fresh.column(0).numbers[i]);
    EXPECT_EQ(moving.keys()->At(i), fresh.keys()->At(i));
    EXPECT_EQ(moving.OfferedNumber(i) - 3500, fresh.OfferedNumber(i));
  }
}

TEST(ColumnSet, DigestIgnoresOrderAndSeesEveryValue) {
  const auto digest = [](std::vector<std::vector<Cell>> rows) {
    ColumnSet set = Make({"y", "k | key", "w | weight"});
    for (const auto& row : rows) Add(set, row);
    return set.Digest();
  };
  const std::vector<Cell> a = {Number(1), Text("x"), Number(1)};
  const std::vector<Cell> b = {Number(2), Text("y"), Number(1)};
  EXPECT_EQ(digest({a, b}), digest({b, a}));
  EXPECT_NE(digest({a, b}), digest({a}));
  EXPECT_NE(digest({a, b}), digest({a, {Number(2), Text("z"), Number(1)}}));
  EXPECT_NE(digest({a, b}), digest({a, {Number(3), Text("y"), Number(1)}}));
  EXPECT_NE(digest({a, b}), digest({a, {Number(2), Text("y"), Number(2)}}));
  EXPECT_NE(digest({a, b}),
            digest({{Number(1), Text("y"), Number(1)}, {Number(2), Text("x"), Number(1)}}));
  EXPECT_EQ(digest({a, b}).size(), 32u);
}

TEST(ColumnSet, MistakesInTheLabelsAreNamed) {
  const auto error = [](std::initializer_list<const char*> texts) {
    std::vector<Label> labels;
    for (const char* text : texts) labels.push_back(ReadLabel(text).value());
    const Result<ColumnSet> set = ColumnSet::Make(std::move(labels));
    return set.ok() ? std::string("(no error)") : set.error();
  };
  EXPECT_THAT(error({}), HasSubstr("needs a response"));
  EXPECT_THAT(error({"y", "y | category"}), HasSubstr("'y' is given twice"));
  EXPECT_THAT(error({"y | weight"}), HasSubstr("is the response"));
  EXPECT_THAT(error({"y", "a | weight", "b | weight"}), HasSubstr("second weight"));
  EXPECT_THAT(error({"y", "a | key", "b | key"}), HasSubstr("second key"));
}

TEST(ColumnSummary, ReferenceIsTheCommonestLevelOrTheGivenOne) {
  ColumnSet chosen = Make({"y", "t | category"}), given = Make({"y", "t | category c"});
  for (const char* level : {"b", "a", "c", "b", "a"}) {
    Add(chosen, {Number(1), Text(level)});
    Add(given, {Number(1), Text(level)});
  }
  const ModelColumn by_count = Summarise(chosen, 1);
  ASSERT_EQ(by_count.levels.size(), 3u);
  EXPECT_EQ(by_count.levels[0].text, "a");  // byte order; a and b tie, so a is the reference
  EXPECT_EQ(by_count.levels[0].rows, 2);
  EXPECT_EQ(by_count.reference, 0);
  EXPECT_FALSE(by_count.reference_given);
  EXPECT_EQ(Summarise(given, 1).reference, 2);
  EXPECT_TRUE(Summarise(given, 1).reference_given);
}

// Twelve values: quartiles, mean and sd by hand. Sorted 1..12 shifted by 1e9: mean 6.5, variance
// (12² − 1)/12 · 12/11 = 13; quartiles at places 3.75, 6.5, 9.25.
TEST(ColumnSummary, NumbersKeepTheirDigitsFarFromZero) {
  ColumnSet set = Make({"y"});
  for (const int i : {7, 1, 12, 3, 5, 9, 2, 11, 4, 10, 6, 8}) Add(set, {Number(1e9 + i)});
  const ModelColumn column = Summarise(set, 0);
  EXPECT_EQ(column.observed_low, 1e9 + 1);
  EXPECT_EQ(column.observed_high, 1e9 + 12);
  EXPECT_EQ(column.lower_quartile, 1e9 + 3.75);
  EXPECT_EQ(column.median, 1e9 + 6.5);
  EXPECT_EQ(column.upper_quartile, 1e9 + 9.25);
  EXPECT_EQ(column.mean, 1e9 + 6.5);
  EXPECT_NEAR(column.sd, std::sqrt(13.0), 1e-15 * 4);
}

TEST(LevelTable, HoldsFiveHundredLevelsAndNoMore) {
  LevelTable table;
  for (int i = 0; i < kMostLevels; ++i)
    EXPECT_EQ(table.CodeOf("level " + std::to_string(i)), static_cast<std::uint16_t>(i));
  EXPECT_EQ(table.CodeOf("one more"), std::nullopt);
  EXPECT_EQ(table.CodeOf("level 123"), std::uint16_t{123});
}

}  // namespace
}  // namespace ladderline
