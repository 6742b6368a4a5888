#include "core/regression/row_source.h"

#include <algorithm>
#include <array>
#include <cassert>
#include <utility>

namespace ladderline {
namespace {

constexpr std::array<double, kBlockRows> kOnes = [] {
  std::array<double, kBlockRows> ones{};
  ones.fill(1);
  return ones;
}();

std::vector<DesignColumn> PlainColumns(bool intercept, std::size_t numbers) {
  std::vector<DesignColumn> columns(numbers + intercept);
  if (intercept) columns.front().intercept = true;
  return columns;
}

std::vector<std::span<const double>> WithOnes(bool intercept,
                                              std::vector<std::span<const double>> x) {
  if (intercept) x.insert(x.begin(), std::span<const double>());
  return x;
}

}  // namespace

ColumnSource::ColumnSource(std::vector<DesignColumn> columns,
                           std::vector<std::span<const double>> x, std::span<const double> y,
                           std::span<const double> w)
    : columns_(std::move(columns)), x_(std::move(x)), y_(y), w_(w) {
  assert(columns_.size() == x_.size());
  assert(w_.empty() || w_.size() == y_.size());
}

ColumnSource::ColumnSource(bool intercept, const std::vector<std::span<const double>>& x,
                           std::span<const double> y, std::span<const double> w)
    : ColumnSource(PlainColumns(intercept, x.size()), WithOnes(intercept, x), y, w) {}

void ColumnSource::SetGroups(int groups, std::span<const std::uint16_t> group) {
  assert(group.size() == y_.size());
  groups_ = groups;
  group_ = group;
}

void ColumnSource::Fill(Index block, RowBlock& out) const {
  const std::size_t first = static_cast<std::size_t>(block * kBlockRows);
  out.rows = std::min<Index>(kBlockRows, static_cast<Index>(y_.size() - first));
  for (std::size_t j = 0; j < x_.size(); ++j)
    out.x[j] = columns_[j].intercept ? kOnes.data() : x_[j].data() + first;
  out.y = y_.data() + first;
  out.w = w_.empty() ? nullptr : w_.data() + first;
  out.group = group_.empty() ? nullptr : group_.data() + first;
}

}  // namespace ladderline
