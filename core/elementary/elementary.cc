#include "core/elementary/elementary.h"

#include <algorithm>
#include <bit>
#include <cmath>
#include <cstdint>
#include <cstring>
#include <limits>

#include "core/elementary/elementary_tables.h"
#include "core/support/double_double.h"

// exp: x = (128 k + j) ln2/128 + r, so that e^x = 2^k 2^(j/128) e^r with |r| < 2^-8.5.
// log: x = 2^k z, and with c nearly 1/z from a table ln x = k ln2 - ln c + ln(1 + r), r = z c - 1,
// |r| < 2^-7.8. One term of each sum carries the result and the rest stays below 2^-8 of it, so
// that the one rounding that counts is the last. (Tang, ACM TOMS 15 (1989) and 16 (1990).)
namespace ladderline {
namespace {

using namespace elementary;

constexpr double kInf = std::numeric_limits<double>::infinity();
constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr double kLeastNormal = std::numeric_limits<double>::min();
constexpr double kLargest = std::numeric_limits<double>::max();

// Adding and taking away 1.5 · 2^52 rounds to a whole number, found in the low bits of the sum.
constexpr double kRounder = 0x1.8p52;
// Up to here 2^k is a normal number, above and below as well.
constexpr double kExpPlain = 708.0;
// e^x is infinite above, 0 below; Exp(x) of anything between fits the reduction.
constexpr double kExpCeiling = 709.79;
constexpr double kExpFloor = -745.14;

std::uint64_t Bits(double x) { return std::bit_cast<std::uint64_t>(x); }
double FromBits(std::uint64_t bits) { return std::bit_cast<double>(bits); }
// 2^k, -1022 <= k <= 1023
double PowerOfTwo(std::int64_t k) { return FromBits(static_cast<std::uint64_t>(k + 1023) << 52); }

// (hi + lo) 2^k for hi about 1, rounded once even where the result is subnormal.
double Scaled(DoubleDouble m, std::int64_t k) {
  if (k > 1023) return m.value() * 0x1p1023 * PowerOfTwo(k - 1023);
  if (k >= -1022) return m.value() * PowerOfTwo(k);
  if (k < -1080) return 0;
  // In units of 2^-1022 a subnormal number has 52 bits after the point, as has 1 + m.
  const double unit = PowerOfTwo(k + 1022);
  const DoubleDouble one_more = TwoSum(1.0, m.hi * unit);
  return (one_more.hi + (one_more.lo + m.lo * unit) - 1.0) * kLeastNormal;
}

inline double ExpPlain(double x) {
  const double shifted = x * kExpStepsPerUnit + kRounder;
  const double steps = shifted - kRounder;
  const std::uint64_t whole = Bits(shifted);
  const ExpCell& cell = kExpCells[whole & 127];
  const double scale = FromBits(Bits(cell.power) + ((whole >> 7) << 52));
  const double r = (x - steps * kExpStepHi) - steps * kExpStepLo;
  const double r2 = r * r;
  const double growth =
      (cell.tail + r) + r2 * (0.5 + r * (1.0 / 6)) + (r2 * r2) * (1.0 / 24 + r * (1.0 / 120));
  return scale + scale * growth;
}

// e^x = 2^k (power + rest), power exactly one of the table's.
struct SplitExp {
  double power;
  DoubleDouble rest;
  std::int64_t k;
};

// Relative error of rest about 2^-70; |x| between 2^-400 and 2000.
SplitExp ExpSplit(DoubleDouble x) {
  const double shifted = x.hi * kExpStepsPerUnit + kRounder;
  const double steps = shifted - kRounder;
  const auto whole = static_cast<std::int64_t>(steps);
  const ExpCell& cell = kExpCells[whole & 127];
  const DoubleDouble r = TwoSum(x.hi - steps * kExpStepHi, -(steps * kExpStepLo)) + x.lo;
  const double h = r.hi;
  const DoubleDouble half_square = r * r * 0.5;
  const double higher =
      h * h * h * (1.0 / 6 + h * (1.0 / 24 + h * (1.0 / 120 + h * (1.0 / 720 + h * (1.0 / 5040)))));
  const DoubleDouble growth = r + (half_square + higher);
  return {cell.power, (growth + growth * cell.tail + cell.tail) * cell.power, whole >> 7};
}

double Joined(const SplitExp& e, std::int64_t more = 0) {
  return Scaled(e.rest + e.power, e.k + more);
}

// e^x - 1, for 2^-400 < |x| < 40
DoubleDouble Expm1Split(double x) {
  const SplitExp e = ExpSplit(x);
  const double unit = PowerOfTwo(e.k);
  return TwoSum(e.power * unit, -1.0) + e.rest * unit;
}

struct Significand {
  double z;
  const LogCell& cell;
  double k;
};

inline Significand Reduce(double x) {
  const std::uint64_t bits = Bits(x);
  const std::uint64_t above = bits - kLogLowestBits;
  const std::uint64_t exponent = above & 0xfff0000000000000;
  return {FromBits(bits - exponent), kLogCells[(above >> 45) & 127],
          static_cast<double>(static_cast<std::int64_t>(exponent) >> 52)};
}

// z c - 1 exactly: c has 11 bits, the halves of z 21 and 32.
inline DoubleDouble Residue(const Significand& s) {
  const double z_hi = FromBits(Bits(s.z) & 0xffffffff00000000);
  return QuickTwoSum(z_hi * s.cell.inverse - 1.0, (s.z - z_hi) * s.cell.inverse);
}

// (ln(1 + r) - r + r²/2) / r³, |r| < 2^-7.8
inline double LogTail(double r) {
  return 1.0 / 3 + r * (-1.0 / 4 + r * (1.0 / 5 + r * (-1.0 / 6 + r * (1.0 / 7))));
}

// The sum of ln(1 + r) and the logarithms that the reduction set aside, which are 0 or beyond |r|.
inline double JoinLog(const Significand& s, DoubleDouble r) {
  const DoubleDouble sum = QuickTwoSum(s.k * kLn2Hi + s.cell.log_hi, r.hi);
  const double r2 = r.hi * r.hi;
  const double low = (s.k * kLn2Lo + s.cell.log_lo) + (sum.lo + r.lo);
  return sum.hi + (low + r2 * (-0.5 + r.hi * LogTail(r.hi)));
}

inline double LogPlain(double x) {
  const Significand s = Reduce(x);
  return JoinLog(s, Residue(s));
}

inline double Log1pPlain(double x) {
  const DoubleDouble sum = TwoSum(1.0, x);
  const Significand s = Reduce(sum.hi);
  const double unit = FromBits(Bits(1.0) - (Bits(sum.hi) - Bits(s.z)));  // 2^-k
  const DoubleDouble r = Residue(s);
  const DoubleDouble whole = TwoSum(r.hi, sum.lo * unit * s.cell.inverse);
  return JoinLog(s, {whole.hi, whole.lo + r.lo});
}

// ln((x + e) 2^k), x normal, |e| at most about an ulp of x; relative error about 2^-70.
DoubleDouble LogSplit(double x, double e = 0, double k = 0) {
  const Significand s = Reduce(x);
  const double e_scaled = e == 0 ? 0 : e * (s.z / x);
  const DoubleDouble r = Residue(s) + e_scaled * s.cell.inverse;
  const double h = r.hi;
  const DoubleDouble half_square = r * r * 0.5;
  const double higher =
      h * h * h * (LogTail(h) + (h * h) * (h * h) * h * (-1.0 / 8 + h * (1.0 / 9)));
  const double exponent = s.k + k;
  return (r - half_square) + (exponent * kLn2Hi + s.cell.log_hi) +
         ((exponent * kLn2Lo + s.cell.log_lo) + higher);
}

// Subnormal numbers have no leading bit to reduce by: count them 2^54 times larger.
DoubleDouble LogOfAny(double x) {
  return x < kLeastNormal ? LogSplit(x * 0x1p54, 0, -54) : LogSplit(x);
}

bool ExpIsPlain(double x) { return std::fabs(x) <= kExpPlain; }
bool LogIsPlain(double x) { return x >= kLeastNormal && x <= kLargest; }
// Below 2^-54 the result is x; above 2^1000 the reduction's unit would be subnormal.
bool Log1pIsPlain(double x) { return x > -1 && x <= 0x1p1000 && std::fabs(x) >= 0x1p-54; }

// The plain path over every element, so that it pipelines; the few others are done again.
template <class Plain, class IsPlain, class Any>
inline void Block(const double* x, double* out, std::size_t n, Plain plain, IsPlain is_plain,
                  Any any) {
  constexpr std::size_t kChunk = 128;
  double result[kChunk];
  for (std::size_t start = 0; start < n; start += kChunk) {
    const std::size_t count = std::min(kChunk, n - start);
    const double* in = x + start;
    bool all_plain = true;
    for (std::size_t i = 0; i < count; ++i) {
      result[i] = plain(in[i]);
      all_plain &= is_plain(in[i]);
    }
    if (!all_plain) {
      for (std::size_t i = 0; i < count; ++i)
        if (!is_plain(in[i])) result[i] = any(in[i]);
    }
    std::memcpy(out + start, result, count * sizeof(double));
  }
}

}  // namespace

double Exp(double x) {
  if (ExpIsPlain(x)) return ExpPlain(x);
  if (std::isnan(x)) return x;
  if (x > kExpCeiling) return kInf;
  if (x < kExpFloor) return 0;
  return Joined(ExpSplit(x));
}

double Expm1(double x) {
  const double size = std::fabs(x);
  if (x == 0) return x;  // keeps the sign
  if (size < 0x1p-30) return x + 0.5 * x * x;
  if (x < -40) return -1;  // e^-40 is 0.04 ulp of 1
  if (x < 40) return Expm1Split(x).value();
  return Exp(x);
}

double Sinh(double x) {
  const double size = std::fabs(x);
  if (!(size >= 0x1p-28)) return x;  // x³/6 is below 0.1 ulp; NaN
  double result;
  if (size < 40) {
    const DoubleDouble e = Expm1Split(size);
    result = ((e + e / (e + 1.0)) * 0.5).value();
  } else {
    result = size > 711 ? kInf : Joined(ExpSplit(size), -1);
  }
  return std::copysign(result, x);
}

double Log(double x) {
  if (LogIsPlain(x)) return LogPlain(x);
  if (x == 0) return -kInf;
  if (x < 0) return kNaN;
  if (!(x < kInf)) return x;
  return LogOfAny(x).value();
}

double Log1p(double x) {
  if (Log1pIsPlain(x)) return Log1pPlain(x);
  if (x == -1) return -kInf;
  if (x < -1) return kNaN;
  if (x > 1) return Log(x);
  return x;
}

double Asinh(double x) {
  const double size = std::fabs(x);
  if (!(size >= 0x1p-28 && size < kInf)) return x;  // x³/6 is below 0.1 ulp; NaN
  double result;
  if (size < 0x1p28) {
    // ln(1 + t), t = x + x² / (1 + √(1 + x²))
    const DoubleDouble square = TwoProduct(size, size);
    const DoubleDouble t = square / (Sqrt(square + 1.0) + 1.0) + size;
    const DoubleDouble sum = TwoSum(1.0, t.hi);
    result = LogSplit(sum.hi, sum.lo + t.lo).value();
  } else {
    result = LogSplit(size, 0, 1).value();  // ln 2x; 1/(4x²) is below 2^-58
  }
  return std::copysign(result, x);
}

double Pow(double x, double p) {
  if (std::isnan(x) || std::isnan(p) || x < 0) return kNaN;
  if (p == 0 || x == 1) return 1;
  if (x == 0) return p > 0 ? 0 : kInf;
  if (x == kInf) return p > 0 ? kInf : 0;
  const DoubleDouble log = LogOfAny(x);
  const double rough = p * log.hi;  // infinite for an infinite p
  if (rough > kExpCeiling + 1) return kInf;
  if (rough < kExpFloor - 1) return 0;
  if (std::fabs(rough) < 0x1p-60) return 1;
  return Joined(ExpSplit(log * p));
}

void ExpBlock(const double* x, double* out, std::size_t n) {
  Block(x, out, n, ExpPlain, ExpIsPlain, Exp);
}

void LogBlock(const double* x, double* out, std::size_t n) {
  Block(x, out, n, LogPlain, LogIsPlain, Log);
}

void Log1pBlock(const double* x, double* out, std::size_t n) {
  Block(x, out, n, Log1pPlain, Log1pIsPlain, Log1p);
}

}  // namespace ladderline
