// The rows of a block, group by group.
#ifndef LADDERLINE_CORE_REGRESSION_ROWS_BY_GROUP_H_
#define LADDERLINE_CORE_REGRESSION_ROWS_BY_GROUP_H_

#include <algorithm>
#include <span>
#include <vector>

#include "core/regression/row_source.h"

namespace ladderline {

class RowsByGroup {
 public:
  // Whether working group by group pays for sorting the rows and gathering their columns: it does
  // where at least four columns can be left out of every row.
  static bool Pays(const RowSource& source) {
    Index grouped = 0;
    for (const DesignColumn& column : source.columns())
      grouped += column.group != DesignColumn::kEveryGroup;
    return source.groups() > 1 && grouped >= 4;
  }

  explicit RowsByGroup(int groups) : end_(static_cast<std::size_t>(groups) + 1) {}

  void Sort(const RowBlock& block) {
    std::fill(end_.begin(), end_.end(), 0);
    for (Index i = 0; i < block.rows; ++i) ++end_[block.group[i] + 1];
    for (std::size_t g = 1; g < end_.size(); ++g) end_[g] += end_[g - 1];
    // end_[g] is where group g begins; filling moves it to where the group ends.
    for (Index i = 0; i < block.rows; ++i) sorted_[end_[block.group[i]]++] = i;
  }

  // Rows of group g in the block last sorted, ascending.
  std::span<const Index> rows(std::size_t g) const {
    const Index begin = g == 0 ? 0 : end_[g - 1];
    return {sorted_ + begin, static_cast<std::size_t>(end_[g] - begin)};
  }
  std::size_t groups() const { return end_.size() - 1; }

 private:
  std::vector<Index> end_;
  Index sorted_[kBlockRows];
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_ROWS_BY_GROUP_H_
