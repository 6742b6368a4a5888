// Thresholds by hand, and a search of all small tables for a hidden count that can be recovered.
#include "core/release/suppression.h"

#include <gtest/gtest.h>

#include <functional>
#include <map>
#include <random>
#include <set>
#include <tuple>
#include <vector>

namespace ladderline {
namespace {

using Counts = std::vector<std::int64_t>;

std::int64_t ThresholdOf(const Counts& counts, std::int64_t floor) {
  CountTable table;
  for (const std::int64_t count : counts) table.Add(count);
  return table.Threshold(floor).value_or(-1);
}

// The header's rule, worked by hand.
TEST(Suppression, RaisesTheFloorOnlyAsFarAsItMust) {
  EXPECT_EQ(ThresholdOf({5, 12, 30}, 5), 5);       // nothing to hide
  EXPECT_EQ(ThresholdOf({2, 3, 12, 30}, 5), 5);    // two hidden, 5 together
  EXPECT_EQ(ThresholdOf({2, 2, 12, 30}, 5), 30);   // 4 together, so the 12 goes too
  EXPECT_EQ(ThresholdOf({3, 12, 30}, 5), 30);      // one alone would be total less the others
  EXPECT_EQ(ThresholdOf({0, 3, 12, 30}, 5), 30);   // a zero hides nothing
  EXPECT_EQ(ThresholdOf({0, 12, 30, 31}, 5), 31);  // nor does a zero beside one other
  EXPECT_EQ(ThresholdOf({3, 12, 12, 30}, 5), 30);  // equal counts go together
  EXPECT_EQ(ThresholdOf({4, 4, 30}, 5), 30);       // under 5 and 8 together: both would be 4
  EXPECT_EQ(ThresholdOf({4, 4, 5, 30}, 5), 30);    // shown as the least, the 5 says the same
  EXPECT_EQ(ThresholdOf({1, 1, 7, 30}, 2), 30);    // neither 0 and 2 together: both 1
  EXPECT_EQ(ThresholdOf({4, 3, 30}, 5), 5);
  EXPECT_EQ(ThresholdOf({0, 7, 8}, 1), 8 + 7 + 1);  // all hidden
  EXPECT_EQ(ThresholdOf({3}, 5), 4);
  EXPECT_EQ(ThresholdOf({0, 0}, 5), 1);
  EXPECT_EQ(ThresholdOf({}, 5), -1);
}

TEST(Suppression, HugeCountsStayInRange) {
  constexpr std::int64_t kEnd = std::numeric_limits<std::int64_t>::max();
  EXPECT_EQ(ThresholdOf({1, kMostCount}, 5), kMostCount + 2);
  EXPECT_EQ(ThresholdOf(Counts(2000, kMostCount), kMostCount), kMostCount);
  Counts many(2000, kMostCount - 1);  // all just under the floor: every one is known
  EXPECT_EQ(ThresholdOf(many, kMostCount), kEnd);
}

TEST(Suppression, ACountThatLeavesIsAsIfItHadNotBeen) {
  std::mt19937 random(7);
  CountTable table;
  Counts in;
  for (int step = 0; step < 4000; ++step) {
    if (in.size() < 12) {
      in.push_back(random() % 9);
      table.Add(in.back());
    } else {
      table.Remove(in.front());
      in.erase(in.begin());
    }
    ASSERT_EQ(table.Threshold(4).value_or(-1), ThresholdOf(in, 4));
  }
}

// ---- Someone who knows all but what is hidden ----

constexpr std::int64_t kHidden = -1;

// What is public: the total, the counts shown in their places, the threshold.
using Published = std::tuple<std::int64_t, Counts, std::int64_t>;

Published Publish(const Counts& counts, std::int64_t floor) {
  const std::int64_t threshold = ThresholdOf(counts, floor);
  std::int64_t total = 0;
  Counts shown;
  for (const std::int64_t count : counts) {
    total += count;
    shown.push_back(count < threshold ? kHidden : count);
  }
  return {total, shown, threshold};
}

// All tables of so many counts and a total of at most `left`.
void ForEachTable(size_t cells, std::int64_t left, Counts& counts,
                  const std::function<void(const Counts&)>& body) {
  if (counts.size() == cells) return body(counts);
  for (std::int64_t count = 0; count <= left; ++count) {
    counts.push_back(count);
    ForEachTable(cells, left - count, counts, body);
    counts.pop_back();
  }
}

// All tables of up to 6 counts and of totals up to a bound, sorted by what is public about them:
// among those that publish the same, every hidden place has at least two values.
TEST(Suppression, NoHiddenCountFollowsFromWhatIsPublic) {
  std::int64_t hidden_cells = 0, raised = 0;
  struct Size {
    size_t cells;
    std::int64_t most;  // total
  };
  for (const Size& size : {Size{2, 40}, {3, 30}, {4, 24}, {5, 17}, {6, 13}}) {
    for (std::int64_t floor = 1; floor <= 7; ++floor) {
      std::map<Published, std::vector<std::set<std::int64_t>>> fitting;
      Counts table;
      ForEachTable(size.cells, size.most, table, [&](const Counts& counts) {
        auto& values = fitting[Publish(counts, floor)];
        values.resize(size.cells);
        for (size_t i = 0; i < size.cells; ++i) values[i].insert(counts[i]);
      });
      for (const auto& [published, values] : fitting) {
        const auto& [total, shown, threshold] = published;
        if (total == 0) continue;  // the total alone says it
        for (size_t i = 0; i < size.cells; ++i) {
          if (shown[i] != kHidden) continue;
          ++hidden_cells;
          raised += threshold > floor ? 1 : 0;
          ASSERT_GE(values[i].size(), 2u)
              << "floor " << floor << ", threshold " << threshold << ", total " << total
              << ", place " << i << " of " << ::testing::PrintToString(shown);
        }
      }
    }
  }
  EXPECT_GT(hidden_cells, 10000);
  EXPECT_GT(raised, 1000);
}

// What is said not to be guarded: the total of one count, and of zeros alone.
TEST(Suppression, OneCountOrNothingButZerosAreHiddenWhole) {
  for (std::int64_t count = 0; count < 5; ++count) EXPECT_GT(ThresholdOf({count}, 5), count);
  EXPECT_GT(ThresholdOf({0, 0, 0}, 1), 0);
}

// Larger tables at random: shown are only counts from the floor on, and what is hidden is not
// decided by its sum and its bounds.
TEST(Suppression, LargeTablesHideASumThatLeavesRoom) {
  std::mt19937 random(11);
  for (int round = 0; round < 20000; ++round) {
    Counts counts(1 + random() % 40);
    const std::int64_t most = 1 + random() % 60, floor = 1 + random() % 12;
    for (std::int64_t& count : counts) count = random() % most;
    const std::int64_t threshold = ThresholdOf(counts, floor);
    ASSERT_GE(std::max(threshold, floor), floor);
    std::int64_t hidden = 0, sum = 0, not_zero = 0;
    for (const std::int64_t count : counts) {
      if (count >= threshold) {
        ASSERT_GE(count, floor);
        continue;
      }
      ++hidden;
      sum += count;
      not_zero += count > 0 ? 1 : 0;
    }
    if (hidden == 0 || hidden == static_cast<std::int64_t>(counts.size())) continue;
    ASSERT_GE(not_zero, 2);
    ASSERT_GE(sum, floor);
    ASSERT_LT(sum, hidden * (threshold - 1));
  }
}

}  // namespace
}  // namespace ladderline
