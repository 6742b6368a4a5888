#!/usr/bin/env python3
"""Writes core/elementary/elementary_tables.h: the constants of exp and log.

  python3 tests/reference/elementary_tables.py > core/elementary/elementary_tables.h

Needs mpmath (1.2.1 was used); 60 digits, so that every double printed is the nearest one.
"""
import struct

from mpmath import floor, log, mp, mpf, nint

mp.dps = 60
CELLS = 128


def from_bits(bits):
    return struct.unpack("<d", struct.pack("<Q", bits))[0]


def hexfloat(value):
    return float(value).hex()


def head_and_tail(value, unit):
    """value as (a multiple of unit, the nearest double to the rest)."""
    head = nint(value / unit) * unit
    return head, value - head


print("""// Constants of exp and log, written by tests/reference/elementary_tables.py; do not edit.
#ifndef LADDERLINE_CORE_ELEMENTARY_ELEMENTARY_TABLES_H_
#define LADDERLINE_CORE_ELEMENTARY_ELEMENTARY_TABLES_H_

namespace ladderline::elementary {

// clang-format off""")

unit = mpf(2) ** -42
step_hi, step_lo = head_and_tail(log(2) / CELLS, unit)
print(f"""// ln 2 / {CELLS}. The head is a multiple of 2^-42, so that its product with a
// whole number below 2^18 is exact.
inline constexpr double kExpStepHi = {hexfloat(step_hi)};
inline constexpr double kExpStepLo = {hexfloat(step_lo)};
inline constexpr double kExpStepsPerUnit = {hexfloat(CELLS / log(2))};

// 2^(j / {CELLS}) = power (1 + tail).
struct ExpCell {{ double power, tail; }};
inline constexpr ExpCell kExpCells[{CELLS}] = {{""")
for j in range(CELLS):
    power = mpf(2) ** (mpf(j) / CELLS)
    print(f"    {{{hexfloat(power)}, {hexfloat(power / mpf(float(power)) - 1)}}},")

ln2_hi, ln2_lo = head_and_tail(log(2), unit)
# The lowest cell starts half a cell below 0.703125, which centres one cell on 1 exactly.
lowest = 0x3FE6800000000000 - (1 << 44)
print(f"""}};

// ln 2. The head is a multiple of 2^-42: times an exponent, and with a cell's head added, exact.
inline constexpr double kLn2Hi = {hexfloat(ln2_hi)};
inline constexpr double kLn2Lo = {hexfloat(ln2_lo)};

// Significands from just below 0.703 to just below 1.406 in {CELLS} cells of equal length in bits,
// the first at kLogLowestBits; one cell is centred on 1. `inverse`, a multiple of 2^-10, is nearly
// one over the cell's centre; -ln(inverse) = log_hi + log_lo, the head a multiple of 2^-42.
inline constexpr unsigned long long kLogLowestBits = {lowest:#x};
struct LogCell {{ double inverse, log_hi, log_lo; }};
inline constexpr LogCell kLogCells[{CELLS}] = {{""")
for i in range(CELLS):
    centre = mpf(from_bits(lowest + (1 << 44) + (i << 45)))
    inverse = floor(1024 / centre + mpf(1) / 2) / 1024
    hi, lo = head_and_tail(-log(inverse), unit)
    print(f"    {{{hexfloat(inverse)}, {hexfloat(hi)}, {hexfloat(lo)}}},")
print("""};
// clang-format on

}  // namespace ladderline::elementary

#endif  // LADDERLINE_CORE_ELEMENTARY_ELEMENTARY_TABLES_H_""")
