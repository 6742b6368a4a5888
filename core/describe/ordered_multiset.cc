#include "core/describe/ordered_multiset.h"

#include <algorithm>
#include <bit>
#include <cassert>

namespace ladderline {

OrderedMultiset::OrderedMultiset(const std::vector<double>& in_order) : size_(in_order.size()) {
  // Half full, so that neither insertions nor removals split or join blocks at once.
  constexpr size_t kFilled = kMostInBlock / 2;
  for (size_t at = 0; at < size_; at += kFilled) {
    const auto begin = in_order.begin() + static_cast<std::ptrdiff_t>(at);
    blocks_.emplace_back(begin, begin + static_cast<std::ptrdiff_t>(std::min(kFilled, size_ - at)));
    tops_.push_back(blocks_.back().back());
  }
  Reindex();
}

size_t OrderedMultiset::BlockOf(double x) const {
  const auto found = std::lower_bound(tops_.begin(), tops_.end(), x);
  return std::min(static_cast<size_t>(found - tops_.begin()), tops_.size() - 1);
}

void OrderedMultiset::Insert(double x) {
  if (blocks_.empty()) {
    *this = OrderedMultiset(std::vector<double>{x});
    return;
  }
  const size_t b = BlockOf(x);
  std::vector<double>& block = blocks_[b];
  block.insert(std::upper_bound(block.begin(), block.end(), x), x);
  tops_[b] = block.back();
  Resize(b, 1);
  if (block.size() < kMostInBlock) return;
  // All that can fail for want of memory comes before anything changes.
  blocks_.reserve(blocks_.size() + 1);
  tops_.reserve(tops_.size() + 1);
  counts_.reserve(counts_.size() + 1);
  std::vector<double>& full = blocks_[b];
  const auto middle = full.begin() + kMostInBlock / 2;
  std::vector<double> upper(middle, full.end());
  full.erase(middle, full.end());
  tops_[b] = full.back();
  tops_.insert(tops_.begin() + static_cast<std::ptrdiff_t>(b) + 1, upper.back());
  blocks_.insert(blocks_.begin() + static_cast<std::ptrdiff_t>(b) + 1, std::move(upper));
  Reindex();
}

void OrderedMultiset::Erase(double x) {
  const size_t b = BlockOf(x);
  std::vector<double>& block = blocks_[b];
  const auto found = std::lower_bound(block.begin(), block.end(), x);
  assert(found != block.end() && *found == x);
  block.erase(found);
  Resize(b, -1);
  if (!block.empty()) tops_[b] = block.back();
  if (block.size() > kMostInBlock / 8) return;

  // Join a thin block with the one before it, where both together stay well below a full one.
  if (b > 0 && blocks_[b - 1].size() + block.size() <= kMostInBlock / 2) {
    blocks_[b - 1].insert(blocks_[b - 1].end(), block.begin(), block.end());
    tops_[b - 1] = blocks_[b - 1].back();
  } else if (!block.empty()) {
    return;
  }
  blocks_.erase(blocks_.begin() + static_cast<std::ptrdiff_t>(b));
  tops_.erase(tops_.begin() + static_cast<std::ptrdiff_t>(b));
  Reindex();
}

double OrderedMultiset::operator[](size_t rank) const {
  assert(rank < size_);
  size_t block = 0;  // blocks known to lie wholly below the rank
  for (size_t step = std::bit_floor(counts_.size() - 1); step > 0; step /= 2) {
    if (block + step < counts_.size() && counts_[block + step] <= rank) {
      block += step;
      rank -= counts_[block];
    }
  }
  return blocks_[block][rank];
}

std::vector<double> OrderedMultiset::Values() const {
  std::vector<double> values;
  values.reserve(size_);
  for (const std::vector<double>& block : blocks_)
    values.insert(values.end(), block.begin(), block.end());
  return values;
}

void OrderedMultiset::Resize(size_t block, std::ptrdiff_t change) {
  size_ += static_cast<size_t>(change);
  for (size_t node = block + 1; node < counts_.size(); node += node & (~node + 1))
    counts_[node] += static_cast<size_t>(change);
}

void OrderedMultiset::Reindex() {
  counts_.assign(blocks_.size() + 1, 0);
  for (size_t node = 1; node < counts_.size(); ++node) {
    counts_[node] += blocks_[node - 1].size();
    const size_t parent = node + (node & (~node + 1));
    if (parent < counts_.size()) counts_[parent] += counts_[node];
  }
}

}  // namespace ladderline
