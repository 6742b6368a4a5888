// Evenly spaced rows, for figures that need no more than some thousands of them.
//
// Of n rows, `most` are taken: those numbered ⌊j n / most⌋, j = 0 … most − 1, counted from 0 in the
// order they came. All of them when there are no more than that. The same rows each time, none
// twice, each n/most rows (rounded down or up) after the last; rows that repeat a pattern at just
// that distance are not a fair choice.
#ifndef LADDERLINE_CORE_SUPPORT_SYSTEMATIC_SAMPLE_H_
#define LADDERLINE_CORE_SUPPORT_SYSTEMATIC_SAMPLE_H_

#include <algorithm>
#include <cstdint>
#include <span>
#include <vector>

namespace ladderline {

inline std::vector<double> SystematicSample(std::span<const double> values, std::size_t most) {
  const std::size_t taken = std::min(values.size(), most);
  std::vector<double> sample(taken);
  for (std::uint64_t j = 0; j < taken; ++j) sample[j] = values[j * values.size() / taken];
  return sample;
}

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SUPPORT_SYSTEMATIC_SAMPLE_H_
