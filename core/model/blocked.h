// A column of values in blocks: grows without copying, drops rows from its front.
//
// Rows are counted from the oldest one still held. Every block but the first and the last holds
// kBlockRows values; a first block that is also the last grows as it needs, so that small groups
// stay small. Columns that grow and shrink together have their blocks in step.
#ifndef LADDERLINE_CORE_MODEL_BLOCKED_H_
#define LADDERLINE_CORE_MODEL_BLOCKED_H_

#include <algorithm>
#include <array>
#include <cstddef>
#include <memory>
#include <span>
#include <vector>

namespace ladderline {

template <class T>
class Blocked {
 public:
  static constexpr std::size_t kBlockRows = 1024;

  Blocked() = default;
  Blocked(Blocked&&) noexcept = default;
  Blocked& operator=(Blocked&&) noexcept = default;

  std::size_t size() const { return End() - front_; }
  std::size_t blocks() const { return blocks_.size(); }
  std::span<const T> block(std::size_t b) const {
    const T* first = blocks_[b].get() + (b == 0 ? front_ : 0);
    const T* last = b + 1 == blocks_.size() ? next_ : blocks_[b].get() + kBlockRows;
    return {first, last};
  }
  const T& operator[](std::size_t i) const { return At(i + front_); }
  // All rows in one piece.
  std::vector<T> Copy() const {
    std::vector<T> rows;
    rows.reserve(size());
    for (std::size_t b = 0; b < blocks(); ++b) {
      const std::span<const T> part = block(b);
      rows.insert(rows.end(), part.begin(), part.end());
    }
    return rows;
  }

  void Push(T value) {
    if (next_ == limit_) [[unlikely]] {
      Grow();
    }
    *next_++ = value;
  }
  // Drops the oldest row; there must be one.
  void PopFront() {
    if (++front_ == kBlockRows) {
      blocks_.erase(blocks_.begin());  // one pointer moves per block held, once in kBlockRows rows
      front_ = 0;
      if (blocks_.empty()) next_ = limit_ = nullptr;
    }
  }

 private:
  static constexpr std::size_t kFirstRows = 16;

  const T& At(std::size_t place) const { return blocks_[place / kBlockRows][place % kBlockRows]; }

  // Rows in the blocks, the dropped ones of the first included.
  std::size_t End() const {
    if (blocks_.empty()) return 0;
    return (blocks_.size() - 1) * kBlockRows +
           static_cast<std::size_t>(next_ - blocks_.back().get());
  }

  // Room for one more row: a larger first block, or another block.
  [[gnu::noinline]] void Grow() {
    const std::size_t end = End(), used = end % kBlockRows;
    const std::size_t rows = end >= kBlockRows ? kBlockRows : std::max(kFirstRows, 2 * end);
    std::unique_ptr<T[]> block(new T[rows]);
    if (used > 0) {
      std::copy_n(blocks_.back().get(), used, block.get());
      blocks_.back() = std::move(block);
    } else {
      blocks_.push_back(std::move(block));
    }
    next_ = blocks_.back().get() + used;
    limit_ = blocks_.back().get() + rows;
  }

  // No deque: moving one takes memory, and a column set must move without failing.
  std::vector<std::unique_ptr<T[]>> blocks_;
  T* next_ = nullptr;  // where the next row goes, up to limit_
  T* limit_ = nullptr;
  std::size_t front_ = 0;  // dropped rows at the head of the first block
};

// Values first .. first+n−1 of a blocked column: in place where they lie in one block, else copied
// to `scratch`.
template <class T>
const T* Gather(const Blocked<T>& column, std::size_t first, std::size_t n, T* scratch) {
  const std::span<const T> head = column.block(0);
  // Blocks after the first are full; a first block shortened at its front shifts all others.
  std::size_t b = 0, at = first;
  if (first >= head.size()) {
    at = first - head.size();
    b = 1 + at / Blocked<T>::kBlockRows;
    at %= Blocked<T>::kBlockRows;
  }
  if (at + n <= column.block(b).size()) return column.block(b).data() + at;
  for (std::size_t done = 0; done < n; ++b, at = 0) {
    const std::span<const T> block = column.block(b);
    for (; at < block.size() && done < n; ++at) scratch[done++] = block[at];
  }
  return scratch;
}

// Calls f(values) for runs of kBlockRows values from the oldest row held, the last one shorter.
// What is summed run by run then does not depend on rows that were dropped before.
template <class T, class F>
void ForEachRun(const Blocked<T>& column, F f) {
  std::array<T, Blocked<T>::kBlockRows> scratch;
  for (std::size_t first = 0; first < column.size(); first += scratch.size()) {
    const std::size_t n = std::min(scratch.size(), column.size() - first);
    f(std::span<const T>(Gather(column, first, n, scratch.data()), n));
  }
}

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_BLOCKED_H_
