#!/usr/bin/env python3
"""Writes tests/reference/log_offsets.json: the offset that leaves ln(x + offset) without skewness.

  python3 tests/reference/log_offsets.py > tests/reference/log_offsets.json

The definition as it stands, at 700 digits: Σ (y - ȳ)³ of y = ln(x + offset), taken from below 0 to
above 0 by false position in ln(offset + least value). Whether there is a root is seen from the sign
e^1500 times below the range, and from the exact sign of Σ (x - x̄)³. Needs mpmath (1.2.1 was used).
"""
import csv
import json
import os
import sys
from fractions import Fraction

import mpmath
from mpmath import log, mp, mpf

from roots import false_position

mp.dps = 700
HERE = os.path.dirname(os.path.abspath(__file__))
CASES = []


def column(path, name):
    with open(os.path.join(HERE, path)) as file:
        return [float(row[name]) for row in csv.DictReader(file)]


def from_file(path, name, factor=1):
    values = [factor * v for v in column(path, name)]
    CASES.append((f"{path} {name}" + (" negated" if factor < 0 else ""), values,
                  {"file": path, "column": name, "factor": factor}))


def case(name, values):
    CASES.append((name, values, {"values": values}))


for path, name in [("boxcox/trees.csv", "Volume"), ("boxcox/trees.csv", "Height"),
                   ("boxcox/wool.csv", "cycles"), ("boxcox/poisons.csv", "time"),
                   ("boxcox/cuyahoga_tds.csv", "TDS"), ("boxcox/cuyahoga_tds.csv", "Q"),
                   ("boxcox/journals.csv", "subs"), ("boxcox/journals.csv", "price"),
                   ("boxcox/journals.csv", "citations"), ("boxcox/ornstein.csv", "assets"),
                   ("boxcox/ornstein.csv", "interlocks"), ("boxcox/bondyield.csv", "Y"),
                   ("boxcox/bondyield.csv", "RAARUS"), ("nist/Michelso.csv", "y"),
                   ("nist/Mavro.csv", "y"), ("nist/NumAcc3.csv", "y"), ("nist/Longley.csv", "y")]:
    from_file(path, name)
from_file("boxcox/trees.csv", "Volume", -1)
from_file("boxcox/bondyield.csv", "Y", -1)
case("zeros and a long tail", [0.0, 0.0, 0.0, 35.0, 60.0, 80.0, 120.0, 180.0, 210.0, 390.0, 2400.0])
case("negatives only", [-100.0, -99.5, -99.0, -97.0, -96.5, -80.0, -42.0])
case("large values, small differences", [1e9 + v for v in (1.0, 1.5, 2.0, 4.0, 9.0, 30.0)])
case("300 orders", [1e-150, 3e-120, 1e-80, 2e-30, 5e-3, 7.0, 4e25, 1e60, 2e90, 1e150, 1e155, 1e156])
case("1e300 of both signs", [-1e300, -9e299, -9e299, -5e299, 0.0, 2e300, 8e300])
case("a range beyond the largest double", [-1.5e308, -1.5e308, -1.2e308, -1e308, -4e307, 1e307, 1.7e308])
case("1e-300", [1e-300, 1.5e-300, 2e-300, 4e-300, 2e-299])
case("hardly skewed", [1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 7.0625])
case("three rows", [0.0, 1.0, 5.0])
case("nearly half at the least value", [2.0] * 7 + [3.0, 4.0, 5.0, 6.0, 7.0, 9.0, 12.0, 30.0])
case("half at the least value", [2.0] * 4 + [3.0, 4.0, 9.0, 30.0])
case("most at the least value", [0.0] * 8 + [1.0, 5.0, 90.0])
case("left tail", [1.0, 30.0, 50.0, 58.0, 60.0, 61.0, 61.5, 62.0, 62.25, 62.5])
case("even steps", [1.0, 2.0, 3.0, 4.0, 5.0])
case("two rows", [1.0, 2.0])
case("two values", [1.0, 1.0, 1.0, 2.0, 1.0])


def cubes(xs, t):
    c, least = mpmath.exp(t), min(xs)
    ys = [log(x - least + c) for x in xs]
    mean = mpmath.fsum(ys) / len(ys)
    return mpmath.fsum((y - mean) ** 3 for y in ys)


def is_skewed_to_the_right(values):
    xs = [Fraction(v) for v in values]
    mean = sum(xs) / len(xs)
    return sum((x - mean) ** 3 for x in xs) > 0


def root(f, low, high):
    """Halving, then false position with the Illinois rule; ln c to 1e-40."""
    if f(low) >= 0:
        return None
    assert f(high) > 0
    while high - low > 1:
        middle = (low + high) / 2
        if f(middle) < 0:
            low = middle
        else:
            high = middle
    return false_position(f, low, high, 40)


out = []
for name, values, where in CASES:
    print(name, file=sys.stderr)
    xs = [mpf(v) for v in values]
    t = None
    if len(set(values)) > 2 and is_skewed_to_the_right(values):
        scale = log(max(xs) - min(xs))
        t = root(lambda t: cubes(xs, t), scale - 1500, scale + 200)
    excess = None if t is None else mpmath.exp(t)
    out.append({"name": name, **where, "rows": len(values),
                "offset": None if t is None else float(excess - min(xs)),
                "least_plus_offset": None if t is None else float(excess)})

json.dump({"about": "Written by tests/reference/log_offsets.py at 700 digits; null: there is none.",
           "mpmath": mpmath.__version__, "cases": out}, sys.stdout, indent=1)
print()
