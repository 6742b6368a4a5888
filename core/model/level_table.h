// Distinct texts, numbered, and how many rows have each: the levels of a category, the clusters.
//
// Codes count from 0 in order of arrival; the code of a text without rows goes to the next new one,
// so that a moving frame holds the texts of its rows and no more.
//   memory  about 48 bytes per text, and its bytes where they are more than 15
//   cost    a row costs one hash and about one comparison
#ifndef LADDERLINE_CORE_MODEL_LEVEL_TABLE_H_
#define LADDERLINE_CORE_MODEL_LEVEL_TABLE_H_

#include <cstdint>
#include <limits>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace ladderline {

// Code: an unsigned type, which bounds how many texts there can be.
template <class Code>
class TextTable {
 public:
  static constexpr std::size_t kMostCodes = std::numeric_limits<Code>::max();

  // One more row with this text: its code; nullopt when kMostCodes others have rows.
  std::optional<Code> Enter(std::string_view text);
  // One row less, of those that entered. Takes no memory.
  void Leave(Code code);

  // Codes ever used at once.
  std::size_t codes() const { return texts_.size(); }
  // Texts with rows.
  std::size_t size() const { return texts_.size() - free_.size(); }
  const std::string& text(std::size_t code) const { return texts_[code]; }  // empty without rows
  std::int64_t rows(std::size_t code) const { return rows_[code]; }
  // The code of a text with rows.
  Code CodeOf(std::string_view text) const;

 private:
  std::size_t Slot(std::string_view text) const;  // where it is, or where it would go
  void Grow();

  std::vector<std::string> texts_;
  std::vector<std::int64_t> rows_;
  std::vector<Code> free_;   // codes without rows; has room for all
  std::vector<Code> slots_;  // 1 + code, 0: free; a power of two, at least twice size()
};

extern template class TextTable<std::uint16_t>;
extern template class TextTable<std::uint32_t>;

// The levels of a category: more than a model takes, so that a moving frame may hold too many for a
// while.
using LevelTable = TextTable<std::uint16_t>;
using ClusterTable = TextTable<std::uint32_t>;

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_LEVEL_TABLE_H_
