// A response on the Box–Cox or Yeo–Johnson ladder of powers: its logarithms, taken once, from which
// the values at any λ follow with one exponential each.
//
// Both families are s φ(ν s), φ(t) = (e^t − 1)/t, of a signed logarithm s:
//   Box–Cox               s = ln x            ν = λ
//   Yeo–Johnson, x >= 0   s = ln(1 + x)       ν = λ
//   Yeo–Johnson, x <= 0   s = −ln(1 − x)      ν = λ − 2
// Where one ν serves all rows, s is counted from its mean. That is Box & Cox's division by the
// geometric mean, a linear map of the transformed response which a fit with an intercept does not
// see (one without would need the constant that it takes off), and it keeps small differences
// between large values. Where e^(ν s) would overflow, all values are divided by the largest. The
// log-Jacobian is that of the values as given out, so that
//
//   log-likelihood(λ) = −n/2 (1 + ln 2π) − n/2 ln(RSS / n) + log_jacobian,
//
// RSS being their residual sum of squares, is the full one on the original scale.
//   source  Box & Cox, J. R. Statist. Soc. B 26 (1964), sections 3 and 4; Yeo & Johnson, Biometrika
//           87 (2000), section 3
#ifndef LADDERLINE_CORE_PROFILE_POWER_RESPONSE_H_
#define LADDERLINE_CORE_PROFILE_POWER_RESPONSE_H_

#include <cstddef>
#include <vector>

namespace ladderline {

enum class PowerFamily { kBoxCox, kYeoJohnson };

class PowerResponse {
 public:
  static constexpr size_t kBlock = 256;
  // Of up to kBlock rows: the transformed value, its first and its second derivative in λ.
  struct Block {
    double value[kBlock], slope[kBlock], curvature[kBlock];
  };

  // The response at one λ, any finite number. It refers to the PowerResponse it came from.
  class Transformed {
   public:
    double log_jacobian() const { return log_jacobian_; }
    double log_jacobian_slope() const { return source_.log_sum_; }  // in λ
    // Rows first … first + kBlock − 1, or up to the last; returns their number.
    size_t Fill(size_t first, Block& out) const;

   private:
    friend class PowerResponse;
    enum class Formula { kClosed, kSeries, kByRow };
    struct Point {
      double value, slope, curvature;
    };
    Transformed(const PowerResponse& source, double lambda);
    double Power(double log) const { return log < 0 ? power_below_ : power_; }
    Point Closed(double log, double exponential) const;
    Point Series(double log, double exponential) const;
    Point At(double log, double exponential) const;

    const PowerResponse& source_;
    double power_, power_below_;            // ν of rows with s >= 0, and with s < 0
    double reciprocal_, reciprocal_below_;  // of the two
    double shift_ = 0, unit_ = 1;           // all exponentials are scaled by unit = e^−shift
    Formula formula_ = Formula::kClosed;
    Point centre_{0, 0, 0};  // taken off every row
    double log_jacobian_;
  };

  // Takes the logarithms in place: 8 bytes a row.
  //   domain  finite values; > 0 for Box–Cox
  //   cost    O(n); 8 to 12 ns a row
  PowerResponse(PowerFamily family, std::vector<double> values);

  size_t rows() const { return logs_.size(); }
  PowerFamily family() const { return family_; }
  // No rows, one distinct value, or Yeo–Johnson values that differ by less than 1e-75: no λ is
  // better than another.
  bool IsConstant() const;
  // Root mean square of the logarithms: the likelihood changes its shape over λ of one over this.
  double spread() const { return spread_; }
  Transformed At(double lambda) const { return Transformed(*this, lambda); }
  // Rows 0, stride, 2 stride, …
  PowerResponse Thinned(size_t stride) const;

 private:
  PowerResponse() = default;
  void TakeCentredLogs(double one, double least, double largest);
  void TakeSignedLogs();
  void Negate();
  void Summarise();

  PowerFamily family_ = PowerFamily::kBoxCox;
  std::vector<double> logs_;  // s − centre_
  double centre_ = 0;         // 0 where both signs occur
  // ν = λ − power_offset_ (of rows with s >= 0 where both signs occur; the others have λ − 2).
  double power_offset_ = 0;
  bool both_signs_ = false;
  double log_sum_ = 0, spread_ = 0, least_ = 0, largest_ = 0;  // of logs_
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_PROFILE_POWER_RESPONSE_H_
