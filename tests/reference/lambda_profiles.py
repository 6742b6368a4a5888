#!/usr/bin/env python3
"""Writes tests/reference/lambda_profiles.json: profile likelihoods of λ for plain columns.

  python3 tests/reference/lambda_profiles.py > tests/reference/lambda_profiles.json

Textbook formulas on the raw values at 160 digits, no scaling: z = (x^λ-1)/λ (Box-Cox without the
constant -1/λ, which would bury 300 orders of magnitude), log-likelihood -n/2 (1 + ln 2π) - n/2 ln(Σ(z-z̄)²/n) + (λ-1) Σ ln x, and Yeo & Johnson's likewise;
λ is the root of its derivative. Needs mpmath (1.2.1 was used) and SciPy (1.10.1), whose
log-likelihoods, short of the constants, stand beside as a second witness. Takes some minutes.
"""
import csv
import json
import os
import sys

import mpmath
import numpy
import scipy
from mpmath import erfc, log, mp, mpf, pi, sqrt
from scipy import stats

from roots import false_position

mp.dps = 160
HERE = os.path.dirname(os.path.abspath(__file__))
LEVEL = mpf(0.95)
QUANTILE = mpmath.findroot(lambda q: mpmath.erf(sqrt(q / 2)) - LEVEL, 3.84)


def transform(family, xs):
    """Functions of λ: all z and all dz/dλ; and Σ of the Jacobian's logarithms."""
    def power(l, p, one=1):  # (b^p - 1)/p and its derivative in p; l is ln b
        if abs(p) < mpf(10) ** -70:  # two terms of the series; to 1e-130
            return l + p * l * l / 2, l * l / 2 + p * l ** 3 / 3
        raised = mpmath.exp(p * l)
        value = (raised - one) / p
        return value, (raised * l - value) / p

    if family == "box_cox":
        logs = [log(x) for x in xs]
        return (lambda lam: [power(l, lam, one=0) for l in logs]), mpmath.fsum(logs)
    logs = [log(1 + abs(x)) for x in xs]

    def both(lam):
        rows = []
        for x, l in zip(xs, logs):
            if x >= 0:
                rows.append(power(l, lam))
            else:
                value, slope = power(l, 2 - lam)
                rows.append((-value, slope))
        return rows
    return both, mpmath.fsum(l if x >= 0 else -l for x, l in zip(xs, logs))


class Likelihood:
    def __init__(self, family, values):
        self.n = len(values)
        self.rows, self.jacobian = transform(family, [mpf(v) for v in values])

    def both(self, lam):
        """Log-likelihood and score."""
        rows = self.rows(mpf(lam))
        n = self.n
        mean = mpmath.fsum(z for z, _ in rows) / n
        squares = mpmath.fsum((z - mean) ** 2 for z, _ in rows)
        mean_slope = mpmath.fsum(slope for _, slope in rows) / n
        cross = mpmath.fsum((z - mean) * (slope - mean_slope) for z, slope in rows)
        value = -mpf(n) / 2 * (1 + log(2 * pi) + log(squares / n)) + (lam - 1) * self.jacobian
        return value, self.jacobian - n * cross / squares

    def value(self, lam):
        return self.both(lam)[0]

    def score(self, lam):
        return self.both(lam)[1]

    def curvature(self, lam):
        h = mpf(10) ** -25
        return (self.score(lam + h) - self.score(lam - h)) / (2 * h)


def root(f, low, high):
    return false_position(f, low, high, 35)


def column(path, name):
    with open(os.path.join(HERE, path)) as file:
        return [float(row[name]) for row in csv.DictReader(file)]


def odds(n):
    """The odds of n equally spaced shares, shuffled, plus 1: in doubles the same everywhere."""
    ks = [(k * 7919) % n for k in range(n)]
    return [1.0 + (2 * k + 1) / (2 * n - 2 * k - 1) for k in ks]


DARWIN = [6.1, -8.4, 1.0, 2.0, 0.7, 2.9, 3.5, 5.1, 1.8, 3.6, 7.0, 3.0, 9.3, 7.5, -6.0]
TEN = [-0.174865, -0.312804, -1.06157, 1.20795, 0.573458, 0.0566415, 0.0481339, 1.98065, -0.196412,
       -0.464189]
WIDE = [1e-150, 3e-120, 1e-80, 2e-30, 5e-3, 7.0, 4e25, 1e60, 2e90, 1e150]
WIDEST = [5e-324, 1e-200, 1e-9, 2.0, 1e11, 1e250, 1.7976931348623157e308]
DECAY = [1.0 + 2.0 ** -k for k in range(1, 40)]
CASES = []


def case(family, name, values, **where):
    CASES.append((family, name, values, where or {"values": values}))


def from_file(family, path, name, keep=lambda v: True, factor=1):
    values = [factor * v for v in column(path, name) if keep(v)]
    case(family, f"{path} {name}" + (" negated" if factor < 0 else ""), values, file=path,
         column=name, factor=factor)


for path, name in [("boxcox/trees.csv", "Volume"), ("boxcox/trees.csv", "Girth"),
                   ("boxcox/wool.csv", "cycles"), ("boxcox/poisons.csv", "time"),
                   ("boxcox/cuyahoga_tds.csv", "TDS"), ("boxcox/cuyahoga_tds.csv", "Q"),
                   ("boxcox/journals.csv", "subs"), ("boxcox/journals.csv", "price"),
                   ("boxcox/journals.csv", "citations"), ("boxcox/ornstein.csv", "assets"),
                   ("nist/Lottery.csv", "y"), ("nist/Michelso.csv", "y"), ("nist/Mavro.csv", "y"),
                   ("nist/NumAcc3.csv", "y"), ("nist/NumAcc4.csv", "y"), ("nist/Longley.csv", "y")]:
    from_file("box_cox", path, name, keep=lambda v: v > 0)
case("box_cox", "ten squares", [v * v for v in TEN])
case("box_cox", "300 orders", WIDE)
case("box_cox", "the whole range of doubles", WIDEST)
case("box_cox", "two rows", [1.0, 2.0])
case("box_cox", "two values", [1.0, 1.0, 1.0, 2.0, 1.0])
case("box_cox", "decay to 1", DECAY)
case("box_cox", "negative skewness", [1.0, 30.0, 50.0, 58.0, 60.0, 61.0, 61.5, 62.0, 62.25, 62.5])
case("box_cox", "odds", odds(33013), odds=33013, minus=0)
for path, name, factor in [("nist/Lew.csv", "y", 1), ("nist/PiDigits.csv", "y", 1),
                           ("boxcox/ornstein.csv", "interlocks", 1), ("boxcox/trees.csv", "Volume", 1),
                           ("boxcox/trees.csv", "Volume", -1), ("boxcox/cuyahoga_tds.csv", "Q", -1),
                           ("boxcox/bondyield.csv", "Y", 1), ("boxcox/bondyield.csv", "K", 1),
                           ("nist/Filip.csv", "x", 1), ("nist/NumAcc4.csv", "y", 1)]:
    from_file("yeo_johnson", path, name, factor=factor)
case("yeo_johnson", "darwin", DARWIN)
case("yeo_johnson", "300 orders of both signs", [-v for v in WIDE] + [2 * v for v in WIDE[2:]])
case("yeo_johnson", "shares around zero", [-0.03, 0.0, 0.01, 0.02, 0.02, 0.05, -0.01, 0.3])
case("yeo_johnson", "odds less 3", [v - 3 for v in odds(33013)], odds=33013, minus=3)

AT = [-8.0, -2.5, -1e-3, 0.0, 1e-9, 0.25, 1.0, 1.999, 2.0, 6.5]


def scipy_llf(family, values, lam):
    with numpy.errstate(all="ignore"):
        llf = stats.boxcox_llf if family == "box_cox" else stats.yeojohnson_llf
        found = float(llf(lam, numpy.array(values)))
        return found if numpy.isfinite(found) else None


def number(value):
    return None if value is None else float(value)


out = []
for family, name, values, where in CASES:
    print(name, file=sys.stderr)
    f = Likelihood(family, values)
    ends = f.score(mpf(-5)), f.score(mpf(5))
    at_limit = ends[0] <= 0 or ends[1] >= 0
    lam = mpf(-5) if ends[0] <= 0 else mpf(5) if ends[1] >= 0 else root(f.score, mpf(-5), mpf(5))
    top = f.value(lam)
    limit = lambda l: f.value(l) - (top - QUANTILE / 2)
    low = None if lam == -5 else root(limit, mpf(-5), lam)
    high = None if lam == 5 else root(limit, lam, mpf(5))
    tail = lambda l: erfc(sqrt(max(mpf(0), top - f.value(mpf(l)))))
    points = []
    for at in AT if len(values) < 3000 else [-1e-3, 0.0, 1.0]:
        value, score = f.both(mpf(at))
        points.append({"lambda": at, "log_likelihood": number(value), "score": number(score),
                       "curvature": number(f.curvature(mpf(at)))})
    out.append({"family": family, "name": name, **where, "rows": len(values), "lambda": number(lam),
                "low": number(low), "high": number(high), "level": float(LEVEL),
                "log_likelihood": number(top), "p_identity": number(tail(1)),
                "p_log": number(tail(0)), "at_limit": bool(at_limit), "points": points,
                "scipy_llf_at_one_half": scipy_llf(family, values, 0.5)})

json.dump({"about": "Written by tests/reference/lambda_profiles.py at 160 digits; a null limit lies "
                    "beyond -5..5. scipy_llf_at_one_half lacks the constant n/2 (1 + ln 2 pi).",
           "mpmath": mpmath.__version__, "scipy": scipy.__version__, "cases": out},
          sys.stdout, indent=1)
print()
