#include "core/regression/chosen_rows.h"

#include <algorithm>
#include <utility>

namespace ladderline {

ChosenRows::ChosenRows(const RowSource& source, std::vector<Index> rows)
    : source_(source),
      rows_(std::move(rows)),
      whole_(static_cast<Index>(source.columns().size())),
      group_(kBlockRows) {}

void ChosenRows::Fill(Index block, RowBlock& out) const {
  const Index columns = static_cast<Index>(out.x.size());
  const Index first = block * kBlockRows;
  const Index n = std::min(kBlockRows, static_cast<Index>(rows_.size()) - first);
  double* const y = out.Scratch(columns);
  double* const w = has_weights() ? out.Scratch(columns + 1) : nullptr;
  for (Index done = 0; done < n;) {
    const Index from = rows_[first + done] / kBlockRows;
    Index end = done;
    while (end < n && rows_[first + end] / kBlockRows == from) ++end;
    source_.Fill(from, whole_);
    const auto gather = [&](const auto* values, auto* target) {
      for (Index i = done; i < end; ++i) target[i] = values[rows_[first + i] - from * kBlockRows];
    };
    for (Index j = 0; j < columns; ++j) gather(whole_.x[j], out.Scratch(j));
    gather(whole_.y, y);
    if (w != nullptr) gather(whole_.w, w);
    if (whole_.group != nullptr) gather(whole_.group, group_.data());
    done = end;
  }
  out.rows = n;
  for (Index j = 0; j < columns; ++j) {
    out.x[j] = out.Scratch(j);
    out.x_low[j] = nullptr;
  }
  out.y = y;
  out.w = w;
  out.group = groups() == 0 ? nullptr : group_.data();
}

}  // namespace ladderline
