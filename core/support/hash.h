// Hashes with the same value on every machine.
#ifndef LADDERLINE_CORE_SUPPORT_HASH_H_
#define LADDERLINE_CORE_SUPPORT_HASH_H_

#include <algorithm>
#include <bit>
#include <cstddef>
#include <cstdint>
#include <cstring>
#include <string_view>

namespace ladderline {

// A bijection of 64 bits that spreads every input bit over all output bits (Steele, Lea & Flood,
// "Fast splittable pseudorandom number generators", OOPSLA 2014: the finaliser of SplitMix64).
inline std::uint64_t Mix(std::uint64_t x) {
  x = (x ^ (x >> 30)) * 0xBF58476D1CE4E5B9ULL;
  x = (x ^ (x >> 27)) * 0x94D049BB133111EBULL;
  return x ^ (x >> 31);
}

// Eight bytes at a time; the tail padded with zeros, the length mixed in.
inline std::uint64_t HashBytes(std::string_view text) {
  std::uint64_t hash = Mix(text.size() + 0x9E3779B97F4A7C15ULL);
  while (!text.empty()) {
    std::uint64_t word = 0;
    const std::size_t n = std::min<std::size_t>(8, text.size());
    if (n == 8 && std::endian::native == std::endian::little) {
      std::memcpy(&word, text.data(), 8);
    } else {
      for (std::size_t i = 0; i < n; ++i)  // byte order fixed
        word |= static_cast<std::uint64_t>(static_cast<unsigned char>(text[i])) << (8 * i);
    }
    hash = Mix(hash ^ word);
    text.remove_prefix(n);
  }
  return hash;
}

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SUPPORT_HASH_H_
