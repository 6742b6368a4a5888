#include "core/model/group_table.h"

#include <algorithm>

#include "core/support/hash.h"

namespace ladderline {

std::string_view GroupTable::Text(std::uint32_t code) const {
  const std::uint64_t begin = code == 0 ? 0 : ends_[code - 1];
  return std::string_view(texts_).substr(begin, ends_[code] - begin);
}

void GroupTable::Widen() {
  constexpr std::size_t kFirstSlots = 64;
  std::vector<std::uint32_t> slots(std::max(kFirstSlots, 2 * slots_.size()));
  for (std::uint32_t code = 0; code < ends_.size(); ++code) {
    std::size_t slot = HashBytes(Text(code)) % slots.size();
    while (slots[slot] != 0) slot = (slot + 1) % slots.size();
    slots[slot] = code + 1;
  }
  slots_ = std::move(slots);
}

std::uint32_t GroupTable::CodeOf(std::string_view text) {
  if (slots_.size() < 2 * (ends_.size() + 1)) Widen();
  std::size_t slot = HashBytes(text) % slots_.size();
  for (; slots_[slot] != 0; slot = (slot + 1) % slots_.size()) {
    const std::uint32_t code = slots_[slot] - 1;
    if (Text(code) == text) return code;
  }
  const auto code = static_cast<std::uint32_t>(ends_.size());
  texts_.append(text);
  ends_.push_back(texts_.size());
  slots_[slot] = code + 1;
  return code;
}

}  // namespace ladderline
