#include "core/regression/fold_rows.h"

#include <algorithm>
#include <cmath>
#include <span>

#include "core/regression/centred_basis.h"
#include "core/regression/householder.h"
#include "core/regression/rows_by_group.h"
#include "core/regression/triangle_fold.h"

namespace ladderline {
namespace {

using Scaling = ColumnScaling::Column;

// √(scaled weight) of a block's rows; null without weights.
class RootWeights {
 public:
  explicit RootWeights(double weight_factor) : weight_factor_(weight_factor) {}
  const double* Of(const RowBlock& block) {
    if (block.w == nullptr) return nullptr;
    for (Index i = 0; i < block.rows; ++i) roots_[i] = std::sqrt(block.w[i] * weight_factor_);
    return roots_;
  }

 private:
  double weight_factor_;
  double roots_[kBlockRows];
};

void WriteColumn(const double* x, const Scaling& scaling, const double* root_weight, Index n,
                 double* out) {
  const double centre = scaling.centre, factor = scaling.factor;
  if (root_weight == nullptr) {
    for (Index i = 0; i < n; ++i) out[i] = (x[i] - centre) * factor;
  } else {
    for (Index i = 0; i < n; ++i) out[i] = (x[i] - centre) * factor * root_weight[i];
  }
}

// The same for chosen rows; x null: ones.
void GatherColumn(const double* x, const Scaling& scaling, const double* root_weight,
                  std::span<const Index> rows, double* out) {
  const double centre = scaling.centre, factor = scaling.factor;
  const Index n = static_cast<Index>(rows.size());
  if (x == nullptr) {
    std::fill_n(out, n, (1 - centre) * factor);
  } else {
    for (Index i = 0; i < n; ++i) out[i] = (x[rows[i]] - centre) * factor;
  }
  if (root_weight == nullptr) return;
  for (Index i = 0; i < n; ++i) out[i] *= root_weight[rows[i]];
}

std::vector<double> FoldDense(const RowSource& source, const ColumnScaling& scaling) {
  const Index k = static_cast<Index>(scaling.x.size());
  TriangleFold fold(k + 1, source.rows());
  RowBlock block(k);
  RootWeights roots(scaling.weight_factor);
  for (Index b = 0; b < source.block_count(); ++b) {
    source.Fill(b, block);
    const double* root_weight = roots.Of(block);
    for (Index first = 0; first < block.rows;) {
      const Index n = std::min(block.rows - first, fold.room());
      for (Index j = 0; j < k; ++j)
        WriteColumn(block.x[j] + first, scaling.x[j], root_weight, n, fold.column(j));
      WriteColumn(block.y + first, scaling.y, root_weight, n, fold.column(k));
      fold.Take(n);
      first += n;
      if (root_weight != nullptr) root_weight += n;
    }
  }
  return fold.Finish();
}

// One triangle per group, of the group's own columns, the common ones, and the response. The rows
// of its own columns meet no other group's and are final; only what is left of the common columns
// is merged. In the end everything is put into the order of the design.
class GroupFold {
 public:
  GroupFold(const RowSource& source, const ColumnScaling& scaling)
      : source_(source), scaling_(scaling), own_(source.groups()) {
    const std::span<const DesignColumn> columns = source.columns();
    for (Index j = 0; j < static_cast<Index>(columns.size()); ++j) {
      const int group = columns[j].group;
      (group == DesignColumn::kEveryGroup ? common_ : own_[group]).push_back(j);
    }
    // Together the buffers should not outgrow the second-level cache by much.
    constexpr Index kBufferedNumbers = 1 << 17;
    for (const std::vector<Index>& own : own_) {
      const Index width = static_cast<Index>(own.size() + common_.size()) + 1;
      const Index fair_share = kBufferedNumbers / (source.groups() * width);
      folds_.emplace_back(width, std::max<Index>(fair_share, 4 * width));
    }
  }

  std::vector<double> Run() {
    RowBlock block(static_cast<Index>(scaling_.x.size()));
    block.may_omit_indicators = true;
    RootWeights roots(scaling_.weight_factor);
    RowsByGroup by_group(source_.groups());
    for (Index b = 0; b < source_.block_count(); ++b) {
      source_.Fill(b, block);
      const double* root_weight = roots.Of(block);
      by_group.Sort(block);
      for (std::size_t g = 0; g < folds_.size(); ++g) Add(block, root_weight, by_group.rows(g), g);
    }
    return Assemble();
  }

 private:
  void Add(const RowBlock& block, const double* root_weight, std::span<const Index> rows,
           std::size_t group) {
    TriangleFold& fold = folds_[group];
    while (!rows.empty()) {
      const auto now = rows.first(std::min(rows.size(), static_cast<std::size_t>(fold.room())));
      Index position = 0;
      for (const std::vector<Index>* columns : {&own_[group], &common_})
        for (Index j : *columns)
          GatherColumn(block.x[j], scaling_.x[j], root_weight, now, fold.column(position++));
      GatherColumn(block.y, scaling_.y, root_weight, now, fold.column(position));
      fold.Take(static_cast<Index>(now.size()));
      rows = rows.subspan(now.size());
    }
  }

  std::vector<double> Assemble() {
    const Index width = static_cast<Index>(scaling_.x.size()) + 1;
    const Index common_width = static_cast<Index>(common_.size()) + 1;
    std::vector<double> all(width * width);
    std::vector<std::vector<double>> rest;
    Index next_row = 0;
    const auto place = [&](const std::vector<Index>& own, const std::vector<double>& triangle,
                           Index rows) {
      const Index own_width = static_cast<Index>(own.size());
      for (Index c = 0; c < own_width + common_width; ++c) {
        const Index common = c - own_width;
        const Index column = c < own_width               ? own[c]
                             : common < common_width - 1 ? common_[common]
                                                         : width - 1;
        for (Index r = 0; r <= std::min(c, rows - 1); ++r)
          all[column * width + next_row + r] = triangle[PackedIndex(r, c)];
      }
      next_row += rows;
    };
    for (std::size_t g = 0; g < folds_.size(); ++g) {
      const Index own_width = static_cast<Index>(own_[g].size());
      const std::vector<double> triangle = folds_[g].Finish();
      place(own_[g], triangle, own_width);
      std::vector<double>& corner = rest.emplace_back();
      for (Index c = own_width; c < own_width + common_width; ++c)
        for (Index r = own_width; r <= c; ++r) corner.push_back(triangle[PackedIndex(r, c)]);
    }
    place({}, MergeAll(common_width, std::move(rest)), common_width);

    Triangularise(width, width, all.data(), width);
    std::vector<double> packed;
    for (Index c = 0; c < width; ++c)
      packed.insert(packed.end(), all.begin() + c * width, all.begin() + c * width + c + 1);
    return packed;
  }

  const RowSource& source_;
  const ColumnScaling& scaling_;
  std::vector<std::vector<Index>> own_;  // columns of each group
  std::vector<Index> common_;            // columns of every group
  std::vector<TriangleFold> folds_;
};

}  // namespace

std::vector<double> FoldRows(const RowSource& source, const ColumnScaling& scaling) {
  return RowsByGroup::Pays(source) ? GroupFold(source, scaling).Run() : FoldDense(source, scaling);
}

}  // namespace ladderline
