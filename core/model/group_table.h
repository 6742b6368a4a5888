// Distinct texts, as many as there are, numbered in the order in which they were first seen.
//
// For the groups that rows belong to, of which there may be as many as rows.
//   memory  the bytes of every distinct text and 16 to 24 more
//   cost    a look-up is one hash and about one comparison
#ifndef LADDERLINE_CORE_MODEL_GROUP_TABLE_H_
#define LADDERLINE_CORE_MODEL_GROUP_TABLE_H_

#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

namespace ladderline {

class GroupTable {
 public:
  // The number of `text`, from 0; a new one when it is new.
  std::uint32_t CodeOf(std::string_view text);
  std::size_t size() const { return ends_.size(); }

 private:
  std::string_view Text(std::uint32_t code) const;
  void Widen();

  std::string texts_;                 // one after the other
  std::vector<std::uint64_t> ends_;   // where each of them ends
  std::vector<std::uint32_t> slots_;  // 1 + code, 0: free; a power of two, at least half free
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_GROUP_TABLE_H_
