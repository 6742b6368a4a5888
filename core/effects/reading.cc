#include "core/effects/reading.h"

#include "core/elementary/elementary.h"

namespace ladderline {

bool IsStraight(const Transform& transform) {
  switch (transform.kind()) {
    case TransformKind::kIdentity:
    case TransformKind::kZScore:
    case TransformKind::kRescale:
    case TransformKind::kCenter:
    case TransformKind::kDateDays:
      return true;
    case TransformKind::kPowerOf:
    case TransformKind::kBoxCox:
    case TransformKind::kYeoJohnson:
      return transform.arguments()[0] == 1;
    default:
      return false;
  }
}

std::optional<LogForm> LogFormOf(const Transform& transform) {
  const auto arguments = transform.arguments();
  switch (transform.kind()) {
    case TransformKind::kLogOffset:
      // A base left out is e by its double, whose logarithm is 1.
      return LogForm{.factor = Log(arguments[1]), .edge = 0 - arguments[0]};
    case TransformKind::kBoxCox:
      if (arguments[0] != 0) return std::nullopt;
      return LogForm{.edge = 0 - arguments[1]};
    case TransformKind::kLogReflected:
      return LogForm{.factor = -1, .edge = arguments[0], .sign = -1};
    default:
      return std::nullopt;
  }
}

}  // namespace ladderline
