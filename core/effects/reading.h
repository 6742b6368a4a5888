// How a re-expression lets a coefficient be read in raw units: a straight line of the raw value, or
// a logarithm of its distance from an edge.
#ifndef LADDERLINE_CORE_EFFECTS_READING_H_
#define LADDERLINE_CORE_EFFECTS_READING_H_

#include <optional>

#include "core/transform/transform.h"

namespace ladderline {

// Whether dz/dx is the same everywhere: identity, z_score, rescale, center, date_days, and powers
// of 1.
bool IsStraight(const Transform& transform);

// ln u = factor · z, u = sign · (x − edge) > 0: a relative change of u is a step of z.
//   log_offset   u = x + offset, factor = ln base; box_cox with λ = 0 likewise, factor 1
//   log_reflected u = top − x, factor −1
struct LogForm {
  double factor = 1;
  double edge = 0;
  int sign = 1;

  double Distance(double x) const { return sign * (x - edge); }
  double At(double distance) const { return edge + sign * distance; }
};
std::optional<LogForm> LogFormOf(const Transform& transform);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_EFFECTS_READING_H_
