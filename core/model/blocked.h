// A column of values in blocks: grows without copying, drops rows from its front.
//
// Rows are counted from the oldest one still held. Every block but the first and the last holds
// kBlockRows values; a first block that is also the last grows as it needs, so that small groups
// stay small. Columns that grow and shrink together have their blocks in step.
#ifndef LADDERLINE_CORE_MODEL_BLOCKED_H_
#define LADDERLINE_CORE_MODEL_BLOCKED_H_

#include <cstddef>
#include <deque>
#include <span>
#include <vector>

namespace ladderline {

template <class T>
class Blocked {
 public:
  static constexpr std::size_t kBlockRows = 1024;

  std::size_t size() const { return size_; }
  std::size_t blocks() const { return blocks_.size(); }
  std::span<const T> block(std::size_t b) const {
    const std::vector<T>& values = blocks_[b];
    const std::size_t skip = b == 0 ? front_ : 0;
    return {values.data() + skip, values.size() - skip};
  }
  const T& operator[](std::size_t i) const {
    const std::size_t at = i + front_;
    return blocks_[at / kBlockRows][at % kBlockRows];
  }

  void Push(T value) {
    if (blocks_.empty() || blocks_.back().size() == kBlockRows) [[unlikely]] {
      blocks_.emplace_back();
      if (blocks_.size() > 1) blocks_.back().reserve(kBlockRows);
    }
    blocks_.back().push_back(value);
    ++size_;
  }
  // Drops the oldest row; there must be one.
  void PopFront() {
    --size_;
    if (++front_ == kBlockRows || size_ == 0) {
      blocks_.pop_front();
      front_ = 0;
    }
  }

 private:
  std::deque<std::vector<T>> blocks_;
  std::size_t front_ = 0;  // dropped rows at the head of the first block
  std::size_t size_ = 0;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_BLOCKED_H_
