// The rule of merged_levels.h, by hand.
#include "core/release/merged_levels.h"

#include <gtest/gtest.h>

#include <map>
#include <set>

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

// Whoever knows the names of all levels, what is shown, the floor and the rule: for every merged
// level at least two counts fit. All categories of up to six levels of 1 … floor + 4 rows and one
// of
// 30. Merged levels can be exchanged, so that one is known only where all are, and are the same.
TEST(MergedLevels, NoCountFollowsFromWhatIsShown) {
  for (std::int64_t floor = 2; floor <= 5; ++floor) {
    std::map<std::vector<std::int64_t>, std::set<std::int64_t>> fitting;  // by what is shown
    const auto add = [&](const std::vector<std::int64_t>& rows) {
      std::vector<CategoryLevel> levels;
      for (const std::int64_t n : rows)
        levels.push_back({std::string(1, static_cast<char>('a' + levels.size())), n});
      levels.push_back({"z", 30});
      const auto merged = MergeLevels(Category(std::move(levels), -1), floor);
      if (!merged || merged->column.merged < 0) return;
      std::vector<std::int64_t> shown = {static_cast<std::int64_t>(rows.size())};
      const auto& kept = merged->column.levels;
      shown.push_back(kept[static_cast<size_t>(merged->column.merged)].rows);
      for (size_t i = 0; i < kept.size(); ++i)
        if (static_cast<int>(i) != merged->column.merged) shown.push_back(kept[i].rows);
      for (size_t i = 0; i < rows.size(); ++i)
        if (merged->place[i] == merged->column.merged) fitting[shown].insert(rows[i]);
    };
    // Rising counts are all there are, but for the names of equal ones.
    const auto extend = [&](const auto& self, std::vector<std::int64_t>& rows) -> void {
      if (!rows.empty()) add(rows);
      if (rows.size() == 6) return;
      for (std::int64_t n = rows.empty() ? 1 : rows.back(); n <= floor + 4; ++n) {
        rows.push_back(n);
        self(self, rows);
        rows.pop_back();
      }
    };
    std::vector<std::int64_t> rows;
    extend(extend, rows);
    EXPECT_GT(fitting.size(), 100u);
    for (const auto& view : fitting)
      EXPECT_GT(view.second.size(), 1u) << floor << " " << view.first[1];
  }
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
