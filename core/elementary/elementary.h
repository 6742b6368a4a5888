// Elementary functions that give the same bits on every machine.
//
// A system's mathematical library picks its kernels by the processor it runs on, so that the last
// bit of exp(x) can differ between two machines that share one database file. Expression indexes
// need better; these are written in plain double arithmetic with one order of operations.
//   accuracy  within 0.6 ulp (relative error below 0.6 · 2^-52 in the normal range) unless a line
//             says otherwise
//   specials  NaN in, NaN out; poles, overflow and underflow as IEEE 754 recommends; no errno
//   blocks    out[i] is bit for bit the scalar result; x == out is allowed; n may be 0
//   cost      exp and the logarithms 3 to 6 ns a value, the others 50 to 100
#ifndef LADDERLINE_CORE_ELEMENTARY_ELEMENTARY_H_
#define LADDERLINE_CORE_ELEMENTARY_ELEMENTARY_H_

#include <cstddef>

namespace ladderline {

double Exp(double x);
double Expm1(double x);
double Log(double x);    // NaN below 0, -inf at 0
double Log1p(double x);  // NaN below -1, -inf at -1
double Sinh(double x);
double Asinh(double x);
// x^p for x >= 0 (NaN below 0, whatever p): within 1 ulp. 0^p is 0, 1 or inf by the sign of p.
double Pow(double x, double p);

void ExpBlock(const double* x, double* out, std::size_t n);
void LogBlock(const double* x, double* out, std::size_t n);
void Log1pBlock(const double* x, double* out, std::size_t n);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_ELEMENTARY_ELEMENTARY_H_
