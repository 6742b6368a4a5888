// Double-double arithmetic: a number as the unevaluated sum hi + lo, |lo| <= ulp(hi)/2, about 106
// bits.
//
// Used wherever cancellation can eat digits: sums that move, cross-products of nearly dependent
// columns, the way back from a centred basis. Every function is exact or errs by a few 2^-104
// relative. Nothing here relies on a fused multiply-add, so that all machines give the same bits;
// the project is compiled with -ffp-contract=off.
//   domain  products need |a|, |b| < 2^996 and a product above 2^-969: outside, the low part is
//           lost or NaN. Callers scale their columns first.
//   source  Dekker, "A floating-point technique for extending the available precision",
//           Numer. Math. 18 (1971); Knuth, TAOCP 2, 4.2.2 (two-sum).
#ifndef LADDERLINE_CORE_SUPPORT_DOUBLE_DOUBLE_H_
#define LADDERLINE_CORE_SUPPORT_DOUBLE_DOUBLE_H_

#include <cmath>

namespace ladderline {

struct DoubleDouble {
  double hi = 0;
  double lo = 0;

  constexpr DoubleDouble() = default;
  constexpr DoubleDouble(double h) : hi(h) {}  // NOLINT(google-explicit-constructor)
  constexpr DoubleDouble(double h, double l) : hi(h), lo(l) {}
  constexpr double value() const { return hi + lo; }
};

// a + b exactly.
inline DoubleDouble TwoSum(double a, double b) {
  const double s = a + b;
  const double t = s - a;
  return {s, (a - (s - t)) + (b - t)};
}

// a + b exactly, where |a| >= |b| or a is 0.
inline DoubleDouble QuickTwoSum(double a, double b) {
  const double s = a + b;
  return {s, b - (s - a)};
}

// a · b exactly (Veltkamp splitting).
inline DoubleDouble TwoProduct(double a, double b) {
  constexpr double kSplit = 134217729.0;  // 2^27 + 1 halves a 53-bit significand
  const double ca = kSplit * a, cb = kSplit * b;
  const double a_hi = ca - (ca - a), b_hi = cb - (cb - b);
  const double a_lo = a - a_hi, b_lo = b - b_hi;
  const double p = a * b;
  return {p, ((a_hi * b_hi - p) + a_hi * b_lo + a_lo * b_hi) + a_lo * b_lo};
}

inline DoubleDouble operator-(DoubleDouble a) { return {-a.hi, -a.lo}; }

inline DoubleDouble operator+(DoubleDouble a, DoubleDouble b) {
  DoubleDouble s = TwoSum(a.hi, b.hi);
  const DoubleDouble t = TwoSum(a.lo, b.lo);
  s = QuickTwoSum(s.hi, s.lo + t.hi);
  return QuickTwoSum(s.hi, s.lo + t.lo);
}
inline DoubleDouble operator-(DoubleDouble a, DoubleDouble b) { return a + (-b); }

inline DoubleDouble operator+(DoubleDouble a, double b) {
  const DoubleDouble s = TwoSum(a.hi, b);
  return QuickTwoSum(s.hi, s.lo + a.lo);
}
inline DoubleDouble operator-(DoubleDouble a, double b) { return a + (-b); }

inline DoubleDouble operator*(DoubleDouble a, DoubleDouble b) {
  const DoubleDouble p = TwoProduct(a.hi, b.hi);
  return QuickTwoSum(p.hi, p.lo + (a.hi * b.lo + a.lo * b.hi));
}
inline DoubleDouble operator*(DoubleDouble a, double b) {
  const DoubleDouble p = TwoProduct(a.hi, b);
  return QuickTwoSum(p.hi, p.lo + a.lo * b);
}

inline DoubleDouble operator/(DoubleDouble a, DoubleDouble b) {
  const double q1 = a.hi / b.hi;
  DoubleDouble r = a - b * q1;
  const double q2 = r.hi / b.hi;
  r = r - b * q2;
  const double q3 = r.hi / b.hi;
  return QuickTwoSum(q1, q2) + q3;
}

inline DoubleDouble operator/(DoubleDouble a, double b) {
  const double q1 = a.hi / b;
  const DoubleDouble r = a - TwoProduct(q1, b);
  const double q2 = r.hi / b;
  return QuickTwoSum(q1, q2);
}

inline DoubleDouble& operator+=(DoubleDouble& a, DoubleDouble b) { return a = a + b; }
inline DoubleDouble& operator-=(DoubleDouble& a, DoubleDouble b) { return a = a - b; }
inline DoubleDouble& operator+=(DoubleDouble& a, double b) { return a = a + b; }
inline DoubleDouble& operator-=(DoubleDouble& a, double b) { return a = a - b; }

// √a for a ≥ 0 (one Newton step from the double root); NaN below 0.
inline DoubleDouble Sqrt(DoubleDouble a) {
  if (a.hi == 0) return {};
  const double r = std::sqrt(a.hi);
  const DoubleDouble e = a - TwoProduct(r, r);
  return QuickTwoSum(r, e.hi / (2 * r));
}

}  // namespace ladderline

#endif  // LADDERLINE_CORE_SUPPORT_DOUBLE_DOUBLE_H_
