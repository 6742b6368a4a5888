// The rule of merged_levels.h, by hand.
#include "core/release/merged_levels.h"

#include <gtest/gtest.h>

namespace ladderline {
namespace {

ModelColumn Category(std::vector<CategoryLevel> levels, int reference) {
  ModelColumn column;
  column.name = "trade";
  column.kind = ColumnKind::kCategory;
  column.levels = std::move(levels);
  column.reference = reference;
  column.reference_given = true;
  return column;
}

std::string Told(const ModelColumn& column) {
  std::string text;
  for (const CategoryLevel& level : column.levels)
    text += level.text + " " + std::to_string(level.rows) + ", ";
  return text;
}

TEST(MergedLevels, NothingMovesWhereEveryLevelHasRowsEnough) {
  const auto merged = MergeLevels(Category({{"Damp", 9}, {"Locks", 5}}, 0), 5);
  ASSERT_TRUE(merged.has_value());
  EXPECT_EQ(Told(merged->column), "Damp 9, Locks 5, ");
  EXPECT_EQ(merged->column.merged, -1);
  EXPECT_EQ(merged->place, (std::vector<int>{0, 1}));
}

TEST(MergedLevels, ThoseOfFewRowsGoTogetherAndTakeTheNextSmallestWhereTheyMust) {
  const auto enough = MergeLevels(
      Category({{"Chimneys", 3}, {"Damp", 90}, {"Glazing", 4}, {"Locks", 6}, {"rails", 40}}, 1), 5);
  EXPECT_EQ(Told(enough->column), "Damp 90, Locks 6, other levels 7, rails 40, ");
  EXPECT_EQ(enough->column.merged, 2);
  EXPECT_EQ(enough->place, (std::vector<int>{2, 0, 2, 1, 3}));
  EXPECT_EQ(enough->column.reference, 0);
  EXPECT_TRUE(enough->column.reference_given);

  const auto alone =
      MergeLevels(Category({{"Chimneys", 3}, {"Damp", 90}, {"Locks", 6}, {"Roofing", 6}}, 1), 5);
  EXPECT_EQ(Told(alone->column), "Damp 90, Roofing 6, other levels 9, ");
  EXPECT_EQ(alone->place, (std::vector<int>{2, 0, 2, 1}));
}

TEST(MergedLevels, AReferenceOfFewRowsGivesWayToTheCommonestThatStandsForItself) {
  const auto merged = MergeLevels(
      Category({{"Chimneys", 4}, {"Damp", 5}, {"Glazing", 3}, {"Locks", 6}, {"Roofing", 6}}, 0), 5);
  EXPECT_EQ(Told(merged->column), "Damp 5, Locks 6, Roofing 6, other levels 7, ");
  EXPECT_EQ(merged->column.reference, 1);
  EXPECT_FALSE(merged->column.reference_given);
}

// Six of 4 at a floor of 5 are 24, the most that six can be; with a level of 5 besides, which is
// not above the 5 that stands, 29 still is; with both, 34 is below 6 · 4 + 2 · 90.
TEST(MergedLevels, ASumThatGivesItsPartsAwayTakesAnother) {
  const auto together = [](std::vector<std::int64_t> rows, std::int64_t floor) {
    std::vector<CategoryLevel> levels;
    for (const std::int64_t n : rows)
      levels.push_back({std::string(1, static_cast<char>('a' + levels.size())), n});
    const auto merged = MergeLevels(Category(std::move(levels), -1), floor);
    return merged ? merged->column.levels[static_cast<size_t>(merged->column.merged)].rows : -1;
  };
  EXPECT_EQ(together({4, 4, 4, 4, 4, 4, 5, 5, 90}, 5), 34);
  EXPECT_EQ(together({4, 4, 4, 4, 4, 4, 7, 90}, 5), 31);
  EXPECT_EQ(together({2, 2, 2, 2, 9, 90}, 3), 17);
  EXPECT_EQ(together({1, 1, 1, 1, 1, 1, 9, 90}, 5), 15);
  EXPECT_EQ(together({4, 4, 4, 4, 4, 3, 9, 90}, 5), 23);
  EXPECT_EQ(together({4, 4, 4, 90}, 5), -1);
}

TEST(MergedLevels, TheNameOfAnotherLevelIsNotTaken) {
  const auto merged = MergeLevels(Category({{"Damp", 3}, {"Locks", 3}, {"other levels", 8}}, 2), 5);
  EXPECT_EQ(Told(merged->column), "other levels 8, other levels (merged) 6, ");
  EXPECT_EQ(merged->column.reference, 0);

  ModelColumn again = merged->column;
  again.levels.push_back({"rails", 2});
  const auto twice = MergeLevels(again, 5);
  EXPECT_EQ(Told(twice->column), "other levels 8, other levels (merged) 8, ");
}

TEST(MergedLevels, OneLevelIsNoCategory) {
  EXPECT_FALSE(MergeLevels(Category({{"Damp", 3}, {"Locks", 4}}, 0), 5).has_value());
  EXPECT_FALSE(MergeLevels(Category({{"Damp", 3}, {"Locks", 400}}, 0), 5).has_value());
}

}  // namespace
}  // namespace ladderline
