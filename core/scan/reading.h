// A scan in words: one sentence for the choice, one for each candidate.
#ifndef LADDERLINE_CORE_SCAN_READING_H_
#define LADDERLINE_CORE_SCAN_READING_H_

#include <cstddef>
#include <string>

#include "core/scan/scan.h"

namespace ladderline {

// What the ranking comes to, as a sentence for a note: the choice and what it changes; with
// predictors, whether the spread of the residuals still changes along them; and a heap of equal
// values at one end, which stays one. `measure` is what the values are called.
std::string ScanReading(const ReExpressionScan& scan, const std::string& measure);

// Why candidate i has its place.
std::string CandidateReading(const ReExpressionScan& scan, std::size_t i);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SCAN_READING_H_
