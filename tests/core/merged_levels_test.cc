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
      Category({{"Chimneys", 4}, {"Damp", 5}, {"Glazing", 4}, {"Locks", 6}, {"Roofing", 6}}, 0), 5);
  EXPECT_EQ(Told(merged->column), "Damp 5, Locks 6, Roofing 6, other levels 8, ");
  EXPECT_EQ(merged->column.reference, 1);
  EXPECT_FALSE(merged->column.reference_given);
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
