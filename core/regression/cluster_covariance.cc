#include "core/regression/cluster_covariance.h"

#include <algorithm>
#include <array>
#include <cassert>
#include <cmath>
#include <limits>
#include <vector>

#include "core/regression/triangle_solve.h"

namespace ladderline {
namespace {

// s_g of as many clusters at a time as the memory is for. The sums are those of e √w d, which
// R^-T takes to coordinates; Number is DoubleDouble where the basis is.
template <class Number>
class ClusterSums {
 public:
  ClusterSums(const RowSource& source, const LeastSquares& fit, std::span<const double> residuals,
              const Clusters& clusters)
      : source_(source),
        basis_(fit.basis),
        rank_(fit.rank()),
        residuals_(residuals),
        clusters_(clusters),
        of_group_(static_cast<std::size_t>(source.groups())),
        meat_(static_cast<std::size_t>(PackedSize(rank_))) {
    for (Index j = 0; j < rank_; ++j) {
      const int group = source.columns()[basis_.kept[j]].group;
      // A column that belongs to a group is measured from 0 and is 0 in the rows of all others.
      if (group == DesignColumn::kEveryGroup || basis_.centre[j] != 0) {
        everywhere_.push_back(j);
      } else {
        of_group_[static_cast<std::size_t>(group)].push_back(j);
      }
    }
  }

  std::vector<double> Meat() {
    constexpr std::int64_t kLeastNumbers = 1 << 16;  // half a megabyte is always there
    const auto numbers = std::max(kLeastNumbers, source_.rows() * std::int64_t{sizeof(double)} /
                                                     static_cast<std::int64_t>(sizeof(Number)));
    const std::int64_t at_once = std::max<std::int64_t>(1, numbers / std::max<Index>(1, rank_));
    for (first_ = 0; first_ < clusters_.count; first_ += at_once) {
      sums_.assign(std::min(at_once, clusters_.count - first_) * rank_, Number());
      ReadRows();
      AddClusters();
    }
    std::vector<double> meat;
    for (const DoubleDouble& entry : meat_) meat.push_back(entry.value());
    return meat;
  }

 private:
  void ReadRows() {
    RowBlock block(basis_.columns);
    block.wants_low = basis_.extended;
    std::array<double, kBlockRows> scaled;
    std::array<std::int64_t, kBlockRows> place;  // of the row's cluster in sums_, −1: not at work
    const auto end = static_cast<std::int64_t>(sums_.size());
    for (Index b = 0; b < source_.block_count(); ++b) {
      source_.Fill(b, block);
      const Index row = b * kBlockRows;
      for (Index i = 0; i < block.rows; ++i) {
        const double e = residuals_[row + i];
        scaled[i] = block.w == nullptr ? e : e * std::sqrt(block.w[i]);
        place[i] = (std::int64_t{clusters_.of_row[row + i]} - first_) * rank_;
        if (place[i] >= end) place[i] = -1;
      }
      const auto add = [&](Index j, Index i) {
        if (place[i] >= 0) sums_[place[i] + j] += Share(block, j, i, scaled[i]);
      };
      for (const Index j : everywhere_)
        for (Index i = 0; i < block.rows; ++i) add(j, i);
      if (block.group == nullptr) continue;
      for (Index i = 0; i < block.rows; ++i)
        for (const Index j : of_group_[block.group[i]]) add(j, i);
    }
  }

  Number Share(const RowBlock& block, Index j, Index i, double scaled) const {
    const Index column = basis_.kept[j];
    const double x = block.x[column][i], centre = basis_.centre[j];
    if constexpr (std::is_same_v<Number, double>) {
      return scaled * (x - centre);
    } else {
      const double* low = block.x_low[column];
      return ((DoubleDouble(x) - centre) + (low == nullptr ? 0.0 : low[i])) * scaled;
    }
  }

  void AddClusters() {
    std::vector<Number> factor;
    for (const DoubleDouble& entry : basis_.factor) {
      if constexpr (std::is_same_v<Number, double>) {
        factor.push_back(entry.value());
      } else {
        factor.push_back(entry);
      }
    }
    for (std::size_t at = 0; at < sums_.size(); at += rank_) {
      Number* s = sums_.data() + at;
      SolveTransposed(factor, rank_, s);
      for (Index c = 0; c < rank_; ++c)
        for (Index r = 0; r <= c; ++r) meat_[PackedIndex(r, c)] += s[r] * s[c];
    }
  }

  const RowSource& source_;
  const CentredBasis& basis_;
  Index rank_;
  std::span<const double> residuals_;
  const Clusters& clusters_;
  std::vector<Index> everywhere_;  // basis columns that every row can have something of
  std::vector<std::vector<Index>> of_group_;
  std::int64_t first_ = 0;  // the first cluster at work
  std::vector<Number> sums_;
  std::vector<DoubleDouble> meat_;
};

}  // namespace

Covariance ClusterCovariance(const RowSource& source, const LeastSquares& fit,
                             const ResidualSummary& summary, std::span<const double> residuals,
                             const Clusters& clusters) {
  assert(clusters.of_row.size() == residuals.size());
  Covariance covariance;
  if (clusters.count < 2 || fit.residual_df() <= 0) {
    covariance.scale = std::numeric_limits<double>::quiet_NaN();
    return covariance;
  }
  const auto count = static_cast<double>(clusters.count), rows = static_cast<double>(fit.rows);
  covariance.scale = count / (count - 1) * ((rows - 1) / static_cast<double>(fit.residual_df()));
  covariance.matrix = fit.basis.extended
                          ? ClusterSums<DoubleDouble>(source, fit, residuals, clusters).Meat()
                          : ClusterSums<double>(source, fit, residuals, clusters).Meat();
  covariance.unknown = summary.decided_alone;
  return covariance;
}

}  // namespace ladderline
