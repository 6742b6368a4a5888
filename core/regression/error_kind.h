// Which errors a result speaks of; one kind governs a whole result.
#ifndef LADDERLINE_CORE_REGRESSION_ERROR_KIND_H_
#define LADDERLINE_CORE_REGRESSION_ERROR_KIND_H_

#include <array>
#include <cstddef>
#include <optional>
#include <string_view>

namespace ladderline {

enum class ErrorKind { kClassical, kHc0, kHc1, kHc2, kHc3, kCluster };
inline constexpr std::array<std::string_view, 6> kErrorKindNames = {"classical", "hc0", "hc1",
                                                                    "hc2",       "hc3", "cluster"};
inline constexpr std::size_t kErrorKinds = kErrorKindNames.size();

constexpr std::optional<ErrorKind> ErrorKindFromName(std::string_view name) {
  for (std::size_t i = 0; i < kErrorKinds; ++i) {
    if (kErrorKindNames[i] == name) return static_cast<ErrorKind>(i);
  }
  return std::nullopt;
}

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_ERROR_KIND_H_
