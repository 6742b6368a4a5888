#include "core/release/merged_levels.h"

#include <algorithm>
#include <numeric>
#include <string>

#include "core/release/coarse.h"

namespace ladderline {
namespace {

// Whether a level goes, by level.
std::vector<bool> LevelsToMerge(const ModelColumn& column, std::int64_t floor) {
  const std::vector<CategoryLevel>& levels = column.levels;
  std::vector<int> by_rows(levels.size());
  std::iota(by_rows.begin(), by_rows.end(), 0);
  const auto rows = [&](int level) { return levels[static_cast<size_t>(level)].rows; };
  std::stable_sort(by_rows.begin(), by_rows.end(), [&](int a, int b) { return rows(a) < rows(b); });
  std::vector<bool> goes(levels.size(), false);
  if (levels.empty() || rows(by_rows[0]) >= floor) return goes;
  // Together, and the least and most that they could be; as doubles, since only their order counts.
  double together = 0, least = 0, most_of_few = 0, others = 0;
  const auto take = [&](int level) {
    if (goes[static_cast<size_t>(level)]) return;
    goes[static_cast<size_t>(level)] = true;
    together += static_cast<double>(rows(level));
    const bool few = rows(level) < floor;
    least += few ? 1 : static_cast<double>(floor);
    most_of_few += few ? static_cast<double>(floor - 1) : 0;
    others += few ? 0 : 1;
  };
  const auto hidden = [&](int next) {
    return together >= static_cast<double>(floor) && together > least &&
           together < most_of_few + others * static_cast<double>(rows(next));
  };
  if (column.merged >= 0) take(column.merged);
  for (const int level : by_rows) {
    if (goes[static_cast<size_t>(level)]) continue;
    if (rows(level) >= floor && hidden(level)) break;
    take(level);
  }
  return goes;
}

}  // namespace

std::optional<MergedLevels> MergeLevels(const ModelColumn& column, std::int64_t floor) {
  MergedLevels out{column, std::vector<int>(column.levels.size())};
  std::iota(out.place.begin(), out.place.end(), 0);
  const std::vector<bool> goes = LevelsToMerge(column, floor);
  if (std::find(goes.begin(), goes.end(), true) == goes.end()) return out;

  CategoryLevel merged{"other levels", 0};
  std::vector<CategoryLevel> kept;
  for (size_t i = 0; i < goes.size(); ++i) {
    if (goes[i]) {
      merged.rows = SumOfRows(merged.rows, column.levels[i].rows);
    } else {
      kept.push_back(column.levels[i]);
    }
  }
  if (kept.empty()) return std::nullopt;
  const auto at = [&](const std::string& text) {
    return std::lower_bound(
        kept.begin(), kept.end(), text,
        [](const CategoryLevel& level, const std::string& t) { return level.text < t; });
  };
  const auto taken = [&] {
    const auto found = at(merged.text);
    return found != kept.end() && found->text == merged.text;
  };
  while (taken()) merged.text += " (merged)";
  out.column.merged = static_cast<int>(at(merged.text) - kept.begin());
  kept.insert(kept.begin() + out.column.merged, std::move(merged));
  out.column.levels = std::move(kept);
  int next = 0;
  for (size_t i = 0; i < goes.size(); ++i) {
    if (next == out.column.merged) ++next;
    out.place[i] = goes[i] ? out.column.merged : next++;
  }
  if (column.reference >= 0) {
    out.column.reference = out.place[static_cast<size_t>(column.reference)];
    if (out.column.reference == out.column.merged) {
      out.column.reference = -1;
      for (int i = 0; i < static_cast<int>(out.column.levels.size()); ++i) {
        const auto rows = [&](int level) {
          return out.column.levels[static_cast<size_t>(level)].rows;
        };
        if (i != out.column.merged &&
            (out.column.reference < 0 || rows(i) > rows(out.column.reference)))
          out.column.reference = i;
      }
      out.column.reference_given = false;
    }
  }
  return out;
}

}  // namespace ladderline
