#include "core/support/near_text.h"

#include <algorithm>
#include <numeric>
#include <string>
#include <utility>
#include <vector>

namespace ladderline {
namespace {

constexpr std::string_view kBlanks = " \t\n\r\f\v";

char Lower(char c) { return c >= 'A' && c <= 'Z' ? static_cast<char>(c | 0x20) : c; }

// Lower-case letters, single blanks between words.
std::string Folded(std::string_view text) {
  std::string out;
  for (size_t start = text.find_first_not_of(kBlanks); start != text.npos;) {
    const size_t end = std::min(text.find_first_of(kBlanks, start), text.size());
    if (!out.empty()) out += ' ';
    for (const char c : text.substr(start, end - start)) out += Lower(c);
    start = text.find_first_not_of(kBlanks, end);
  }
  return out;
}

// Letters put in, left out or replaced (Levenshtein), by one row of the table.
size_t Edits(std::string_view a, std::string_view b) {
  std::vector<size_t> row(b.size() + 1);
  std::iota(row.begin(), row.end(), size_t{0});
  for (size_t i = 0; i < a.size(); ++i) {
    size_t diagonal = std::exchange(row[0], i + 1);
    for (size_t j = 0; j < b.size(); ++j) {
      const size_t replaced = diagonal + (a[i] == b[j] ? 0 : 1);
      diagonal = row[j + 1];
      row[j + 1] = std::min({replaced, diagonal + 1, row[j] + 1});
    }
  }
  return row.back();
}

size_t SameFirst(std::string_view a, std::string_view b) {
  size_t n = 0;
  while (n < a.size() && n < b.size() && a[n] == b[n]) ++n;
  return n;
}

}  // namespace

bool EqualButForCase(std::string_view a, std::string_view b) { return Folded(a) == Folded(b); }

std::string_view NearestWord(std::string_view word, std::span<const std::string_view> known) {
  constexpr size_t kFewest = 3, kLongest = 40;
  const std::string given = Folded(word);
  if (given.size() < kFewest || given.size() > kLongest) return {};
  for (const std::string_view candidate : known)
    if (candidate.starts_with(given)) return candidate;
  std::string_view nearest;
  for (size_t best = given.size() < 6 ? 2 : 3; const std::string_view candidate : known) {
    if (const size_t edits = Edits(given, candidate); edits < best) {
      best = edits;
      nearest = candidate;
    }
  }
  if (!nearest.empty()) return nearest;
  for (size_t best = kFewest - 1; const std::string_view candidate : known) {
    if (const size_t same = SameFirst(given, candidate); same > best) {
      best = same;
      nearest = candidate;
    }
  }
  return nearest;
}

}  // namespace ladderline
