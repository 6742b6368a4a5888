#include "core/model/fit_clusters.h"

#include <cmath>
#include <cstddef>
#include <set>
#include <span>
#include <string_view>

namespace ladderline {
namespace {

// The texts of a category's levels that lie in one cluster.
std::set<std::string_view> LevelsOfOneCluster(const ColumnSet::Column& column,
                                              std::span<const std::uint32_t> of_row) {
  constexpr std::int64_t kNone = -1, kSeveral = -2;
  std::vector<std::int64_t> cluster(column.levels.codes(), kNone);
  std::size_t row = 0;
  for (std::size_t b = 0; b < column.codes.blocks(); ++b) {
    for (const std::uint16_t code : column.codes.block(b)) {
      std::int64_t& seen = cluster[code];
      const std::int64_t here = of_row[row++];
      seen = seen == kNone || seen == here ? here : kSeveral;
    }
  }
  std::set<std::string_view> levels;
  for (std::size_t code = 0; code < cluster.size(); ++code)
    if (cluster[code] >= 0) levels.insert(column.levels.text(code));
  return levels;
}

}  // namespace

NumberedClusters NumberClusters(const ColumnSet& set) {
  NumberedClusters clusters;
  if (set.cluster_column() < 0) return clusters;
  constexpr std::uint32_t kNew = 0xFFFFFFFF;
  std::vector<std::uint32_t> number(set.group_count(), kNew);
  clusters.of_row.reserve(set.groups().size());
  for (std::size_t b = 0; b < set.groups().blocks(); ++b) {
    for (const std::uint32_t group : set.groups().block(b)) {
      if (number[group] == kNew) number[group] = static_cast<std::uint32_t>(clusters.count++);
      clusters.of_row.push_back(number[group]);
    }
  }
  return clusters;
}

void NoteLevelsOfOneCluster(const ColumnSet& set, const NumberedClusters& clusters, Model& model) {
  if (clusters.count < 2) return;
  for (std::size_t c = 0; c < model.columns.size(); ++c) {
    const ModelColumn& column = model.columns[c];
    if (column.kind != ColumnKind::kCategory) continue;
    const auto alone = LevelsOfOneCluster(set.column(c), clusters.of_row);
    if (alone.empty()) continue;
    for (ModelTerm& term : model.terms) {
      if (std::isnan(term.standard_error[static_cast<std::size_t>(ErrorKind::kCluster)])) continue;
      for (const Factor& factor : term.factors) {
        if (factor.column != static_cast<int>(c)) continue;
        if (!alone.contains(column.levels[static_cast<std::size_t>(factor.level)].text)) continue;
        term.note += (term.note.empty() ? "" : "; ") +
                     std::string("found in one cluster alone: its cluster error is too small");
      }
    }
  }
}

}  // namespace ladderline
