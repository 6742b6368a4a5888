// The re-expressions of a measure, each with its way back, as one value type.
//
// With x the raw value and z the re-expressed one (arguments in this order; `=` marks a default):
//
//   identity                              z = x
//   log_offset [offset=0 [base=e]]        log_base(x + offset)        x + offset > 0
//   sqrt_offset [offset=0]                √(x + offset)               x + offset ≥ 0; back: z ≥ 0
//   square                                x²                          back: √z ≥ 0
//   power_of p                            x^p                         x > 0 (x ≥ 0 for p > 0)
//   reciprocal                            1/x                         x ≠ 0
//   negative_reciprocal                   −1/x                        x ≠ 0
//   log_reflected top                     −ln(top − x)                x < top
//   box_cox lambda [offset=0]             ((x + offset)^λ − 1)/λ, ln at λ = 0    x + offset > 0
//   yeo_johnson lambda                    box_cox of 1 + x with λ for x ≥ 0, of 1 − x with 2 − λ
//                                         and both signs turned for x < 0        all x
//   asinh_scaled theta                    asinh(θx)/θ                 all x
//   logit [low=0 high=1 [inset=0]]        ln(q/(1 − q)), q = inset + (1 − 2 inset)(x − low)/(high −
//                                         low)                        0 < q < 1
//   z_score mean sd                       (x − mean)/sd               all x
//   rescale old_low old_high [new_low=0 new_high=1]    linear         all x
//   center middle                         x − middle                  all x
//   date_days                             x itself: a count of days; its text form is calendar.h's
//
//   accuracy  forward within 4 ulp (rescale: scaled by its conditioning); back within 4 ulp scaled
//             by the conditioning of the way back in z and in the offset; λ at or near 0 included
//   numbers   a NaN or an infinity in, a value outside the domain, and a result too large for a
//             double give NaN; a result too small becomes 0
//   bits      the same on every machine: core/elementary, no libm
//   source    Box & Cox, J. R. Stat. Soc. B 26 (1964); Yeo & Johnson, Biometrika 87 (2000)
#ifndef LADDERLINE_CORE_TRANSFORM_TRANSFORM_H_
#define LADDERLINE_CORE_TRANSFORM_TRANSFORM_H_

#include <array>
#include <cstddef>
#include <optional>
#include <span>
#include <string>
#include <string_view>

#include "core/support/double_double.h"
#include "core/support/result.h"

namespace ladderline {

enum class TransformKind : unsigned char {
  kIdentity,
  kLogOffset,
  kSqrtOffset,
  kSquare,
  kPowerOf,
  kReciprocal,
  kNegativeReciprocal,
  kLogReflected,
  kBoxCox,
  kYeoJohnson,
  kAsinhScaled,
  kLogit,
  kZScore,
  kRescale,
  kCenter,
  kDateDays
};

struct SpecReading;

// Immutable and cheap to copy.
class Transform {
 public:
  Transform() = default;  // identity

  // Defaults are filled in. Errors in words (`base must be above 0 and other than 1, got 1`): a
  // number of arguments that the kind does not take, one that is not finite, power_of with p = 0,
  // log_offset with a base ≤ 0 or 1, asinh_scaled with theta ≤ 0, z_score with sd ≤ 0, logit with
  // an inset outside [0, 0.5), and ranges whose two ends are equal or infinitely far apart.
  static Result<Transform> Make(TransformKind kind, std::span<const double> arguments);
  // The same where no words are needed: nullopt for whatever Make refuses.
  static std::optional<Transform> TryMake(TransformKind kind, std::span<const double> arguments);

  // Whether the kind can be given so many arguments.
  static bool Takes(TransformKind kind, std::size_t count);

  // Reads a spec text: the word, then its arguments, separated by blanks: `log_offset 1`. The
  // second form takes it already split: the word, then the arguments. Errors in words: unknown word
  // (the known ones are listed), wrong number of arguments, an argument that is no number, and
  // what Make refuses. See SpecReading for specs whose arguments are to be estimated.
  static Result<SpecReading> ReadSpec(std::string_view spec);
  static Result<SpecReading> ReadSpec(std::span<const std::string_view> words);

  TransformKind kind() const { return kind_; }
  // All arguments of the kind, defaults included.
  std::span<const double> arguments() const { return {arguments_.data(), count_}; }
  // The text that ReadSpec reads back to this value; numbers in shortest form, defaults left out.
  std::string spec() const;

  // Whether x can be re-expressed: Forward(x) is a finite number.
  bool InDomain(double x) const;
  // What a response has to satisfy: InDomain, and Back(Forward(x)) is x again (`square`: x ≥ 0).
  bool Returns(double x) const {
    return InDomain(x) && (kind_ != TransformKind::kSquare || x >= 0);
  }

  double Forward(double x) const;
  double Back(double z) const;
  // Back for the limits of a fit. A z outside the domain of the way back is held at the domain's
  // edge where that edge has a finite image (sqrt_offset, square, power_of p > 0, box_cox λ > 0:
  // x = −offset or 0), else NaN. A z of (negative_)reciprocal on the other side of zero from
  // `near_z`, the fitted value, is NaN: the limit passed through infinity. A logit with an inset
  // has ways back beyond low and high, which no score can reach: x is held there.
  double BackHeld(double z, double near_z) const;
  // Whether BackHeld may differ from Back where that has a value.
  bool HoldsMore() const {
    return IsReciprocal() || (kind_ == TransformKind::kLogit && arguments_[2] > 0);
  }
  // BackHeld for a response whose raw values lie in low..high: where these have one sign, so has
  // every x that a reciprocal leads back to, the fitted value's included.
  double BackWithin(double low, double high, double z, double near_z) const;
  // dz/dx; may be infinite at the edge of the domain (√ at 0). NaN outside the domain.
  double Slope(double x) const;
  // ln|dz/dx|; −inf where the slope is 0, +inf where it is infinite. NaN outside the domain.
  double LogJacobian(double x) const;
  // The same where z = Forward(x) is at hand, without another logarithm if z is one.
  double LogJacobian(double x, double z) const;
  // Whether z falls as x rises, for positive x where it depends on the sign (square).
  bool Decreasing() const;
  bool IsReciprocal() const {
    return kind_ == TransformKind::kReciprocal || kind_ == TransformKind::kNegativeReciprocal;
  }
  bool is_log() const {
    return kind_ == TransformKind::kLogOffset || kind_ == TransformKind::kLogReflected;
  }

  // Bit for bit the scalars. x == z is allowed.
  void ForwardBlock(const double* x, double* z, std::size_t n) const;
  void BackBlock(const double* z, double* x, std::size_t n) const;

  friend bool operator==(const Transform&, const Transform&) = default;

 private:
  Transform(TransformKind kind, const std::array<double, 4>& arguments, std::size_t count);
  // The four kinds that take a logarithm on the way there, and those logs that return by Exp: kept
  // apart so that blocks can take the logarithms and exponentials together.
  bool BeginsWithLog() const;
  DoubleDouble LogArgument(double x) const;
  double AfterLog(double x, DoubleDouble u, double log_hi) const;
  bool BeginsBackWithExp() const { return is_log() && log_base_ == 1; }
  double ExpArgument(double z) const { return kind_ == TransformKind::kLogReflected ? -z : z; }
  double AfterExp(double z, double exp_z) const;
  double ForwardPlainly(double x) const;
  double BackPlainly(double z) const;
  // A logit's q, 1 − q and 2q − 1, all times |high − low|.
  struct Shares {
    double above, below, difference;
  };
  Shares SharesOf(double x) const;

  TransformKind kind_ = TransformKind::kIdentity;
  unsigned char count_ = 0;
  std::array<double, 4> arguments_{};
  double log_base_ = 1;  // log_offset: ln(base)
};

// A spec as read: a transform, or nullopt where its arguments have to be estimated from data
// (`z_score`, `rescale`, `center`, `box_cox`, `yeo_johnson` without arguments; `log_offset auto`).
struct SpecReading {
  TransformKind kind = TransformKind::kIdentity;
  std::optional<Transform> transform;
  bool needs_estimate() const { return !transform.has_value(); }
};

// The words of specs, in the order of TransformKind.
std::span<const std::string_view> TransformWords();
std::string_view TransformWord(TransformKind kind);
std::optional<TransformKind> TransformOfWord(std::string_view word);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_TRANSFORM_TRANSFORM_H_
