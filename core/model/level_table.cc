#include "core/model/level_table.h"

#include <algorithm>
#include <cassert>

#include "core/support/hash.h"

namespace ladderline {

template <class Code>
std::size_t TextTable<Code>::Slot(std::string_view text) const {
  const std::size_t mask = slots_.size() - 1;
  std::size_t slot = HashBytes(text) & mask;
  while (slots_[slot] != 0 && texts_[slots_[slot] - 1u] != text) slot = (slot + 1) & mask;
  return slot;
}

template <class Code>
Code TextTable<Code>::CodeOf(std::string_view text) const {
  const Code entry = slots_[Slot(text)];
  assert(entry != 0);
  return static_cast<Code>(entry - 1);
}

template <class Code>
void TextTable<Code>::Grow() {
  constexpr std::size_t kFirstSlots = 64;
  slots_.assign(std::max(kFirstSlots, 2 * slots_.size()), 0);
  for (std::size_t code = 0; code < texts_.size(); ++code) {
    if (rows_[code] > 0) slots_[Slot(texts_[code])] = static_cast<Code>(code + 1);
  }
}

template <class Code>
std::optional<Code> TextTable<Code>::Enter(std::string_view text) {
  if (slots_.empty()) Grow();
  std::size_t slot = Slot(text);
  if (slots_[slot] == 0) {
    std::size_t code = texts_.size();
    if (!free_.empty()) {
      code = free_.back();
      texts_[code] = text;
      free_.pop_back();
    } else {
      if (code == kMostCodes) return std::nullopt;
      if (free_.capacity() == code) free_.reserve(2 * code + 16);
      if (rows_.capacity() == code) rows_.reserve(2 * code + 16);
      texts_.emplace_back(text);
      rows_.push_back(0);
    }
    if (2 * size() > slots_.size()) {
      Grow();
      slot = Slot(text);
    }
    slots_[slot] = static_cast<Code>(code + 1);
  }
  const auto code = static_cast<Code>(slots_[slot] - 1);
  ++rows_[code];
  return code;
}

template <class Code>
void TextTable<Code>::Leave(Code code) {
  if (--rows_[code] > 0) return;
  // Those that were put further on because this slot was taken move up.
  const std::size_t mask = slots_.size() - 1;
  std::size_t hole = Slot(texts_[code]);
  for (std::size_t next = (hole + 1) & mask; slots_[next] != 0; next = (next + 1) & mask) {
    const std::size_t home = HashBytes(texts_[slots_[next] - 1u]) & mask;
    if (((next - home) & mask) < ((next - hole) & mask)) continue;
    slots_[hole] = slots_[next];
    hole = next;
  }
  slots_[hole] = 0;
  texts_[code].clear();
  free_.push_back(code);
}

template class TextTable<std::uint16_t>;
template class TextTable<std::uint32_t>;

}  // namespace ladderline
