#include "core/describe/deviations.h"

#include <limits>

namespace ladderline {
namespace {

// Fourth powers of 2^200 and the low parts of their sums over 2^60 rows stay far inside the range
// of a double, and so do those of 2^-100.
constexpr double kFar = 0x1p200;
constexpr int kNearlyOne = 100;
// 2^±1000 and their reciprocals are normal numbers; what is left at the ends of the range, 2^±74,
// needs no scaling.
constexpr int kMostShift = 1000;

// Splitting a number for an exact product overflows from 2^996 on.
constexpr double kHuge = 0x1p900;

// The shift that brings a number of this size into range.
int ShiftFor(double size) {
  const int exponent = std::ilogb(std::max(size, std::numeric_limits<double>::denorm_min()));
  return std::abs(exponent) <= kNearlyOne ? 0 : std::clamp(-exponent, -kMostShift, kMostShift);
}

}  // namespace

Deviations::Deviations(double centre) : centre_(centre), reach_(0) {
  SetShift(std::abs(centre) > kHuge ? ShiftFor(std::abs(centre)) : 0);
}

void Deviations::SetShift(int shift) {
  shift_ = shift;
  scale_ = std::ldexp(1.0, shift);
  scaled_centre_ = centre_ * scale_;
}

int Deviations::Admit(double x) {
  if (reach_ < 0) {
    *this = Deviations(x);
    return 0;
  }
  const double deviation = std::abs(Of(x).hi);
  if (reach_ > 0 && deviation <= kFar) {
    reach_ = deviation;
    return 0;
  }
  const int before = shift_;
  // Halved, so that the distance between the ends of the range does not overflow.
  SetShift(ShiftFor(std::abs(x / 2 - centre_ / 2)));
  reach_ = std::abs(Of(x).hi);
  return shift_ - before;
}

void Judge(double residue, double tolerance, double size, DoubleDouble& figure, bool& sound) {
  constexpr double kWorthless = 0x1p-26;
  if (residue > tolerance * size) sound = false;
  if (residue > kWorthless * size && figure.hi != 0)
    figure = std::numeric_limits<double>::quiet_NaN();
}

}  // namespace ladderline
