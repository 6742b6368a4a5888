"""Tests of normality recomputed from their published formulas at 60 digits (mpmath), and by SciPy,
written to normality_exact.json beside this file. Run: python3 tests/reference/normality_exact.py

Values are taken as the doubles they are. Shapiro-Wilk: W as a squared correlation, AS R94. The
approximations' printed coefficients are exact decimals here. Infinite or tiny figures are text."""
import csv
import json
import os
import random

import mpmath as mp
import numpy as np
import scipy
from scipy import stats

mp.mp.dps = 60
HERE = os.path.dirname(os.path.abspath(__file__))
D = mp.mpf  # of a text: that decimal


def column(file, name):
    with open(os.path.join(HERE, file)) as lines:
        return [float(row[name]) for row in csv.DictReader(lines)]


def poly(x, *rising):
    return sum(D(c) * x ** k for k, c in enumerate(rising))


def upper(z):
    return mp.erfc(z / mp.sqrt(2)) / 2


def quantile(p):
    return mp.sqrt(2) * mp.erfinv(2 * p - 1)


def shapiro_wilk(x):
    x = sorted(map(D, x))
    n = len(x)
    if n == 3:
        half = [mp.sqrt(D("0.5"))]
    else:
        m = [-quantile((i + 1 - D("0.375")) / (n + D("0.25"))) for i in range(n // 2)]
        total = 2 * sum(v * v for v in m)
        u = 1 / mp.sqrt(n)
        a = [poly(u, "0", ".221157", "-.147981", "-2.07119", "4.434685", "-2.706056") + m[0] / mp.sqrt(total)]
        if n > 5:
            a.append(poly(u, "0", ".042981", "-.293762", "-1.752461", "5.682633", "-3.582633") + m[1] / mp.sqrt(total))
        k = len(a)
        fac = mp.sqrt((total - 2 * sum(v * v for v in m[:k])) / (1 - 2 * sum(v * v for v in a)))
        half = a + [v / fac for v in m[k:]]
    weights = [-v for v in half] + [D(0)] * (n % 2) + half[::-1]
    mean = mp.fsum(x) / n
    sxy = mp.fsum(w * (v - mean) for w, v in zip(weights, x))
    w1 = 1 - sxy ** 2 / (mp.fsum(w * w for w in weights) * mp.fsum((v - mean) ** 2 for v in x))
    if n == 3:
        p = 6 / mp.pi * (mp.asin(mp.sqrt(1 - w1)) - mp.asin(mp.sqrt(D("0.75"))))
        return 1 - w1, p
    y, r = mp.log(w1), D(n)
    if n <= 11:
        g = poly(r, "-2.273", ".459")
        z = (-mp.log(g - y) - poly(r, ".544", "-.39978", ".025054", "-6.714e-4")) / mp.exp(
            poly(r, "1.3822", "-.77857", ".062767", "-.0020322"))
    else:
        r = mp.log(r)
        z = (y - poly(r, "-1.5861", "-.31082", "-.083751", ".0038915")) / mp.exp(poly(r, "-.4803", "-.082676", ".0030302"))
    return 1 - w1, upper(z)


def anderson_darling(x):
    x = sorted(map(D, x))
    n = len(x)
    mean = mp.fsum(x) / n
    sd = mp.sqrt(mp.fsum((v - mean) ** 2 for v in x) / (n - 1))
    z = [(v - mean) / sd for v in x]
    lower = [mp.log(upper(-v)) for v in z]
    higher = [mp.log(upper(v)) for v in z]
    a2 = -n - mp.fsum((2 * i + 1) * (lower[i] + higher[n - 1 - i]) for i in range(n)) / n
    a = a2 * (1 + D("0.75") / n + D("2.25") / n ** 2)
    if a < D("0.2"):
        p = 1 - mp.exp(poly(a, "-13.436", "101.14", "-223.73"))
    elif a < D("0.34"):
        p = 1 - mp.exp(poly(a, "-8.318", "42.796", "-59.938"))
    elif a < D("0.6"):
        p = mp.exp(poly(a, "0.9177", "-4.279", "-1.38"))
    elif a < 10:
        p = mp.exp(poly(a, "1.2937", "-5.709", "0.0186"))
    else:
        p = D("3.7e-24")
    return a2, p


def moments(x):
    x = list(map(D, x))
    n = len(x)
    mean = mp.fsum(x) / n
    m2, m3, m4 = (mp.fsum((v - mean) ** k for v in x) / n for k in (2, 3, 4))
    return n, m3 / m2 ** D("1.5"), m4 / m2 ** 2 - 3


def jarque_bera(n, g1, g2):
    jb = D(n) / 6 * (g1 ** 2 + g2 ** 2 / 4)
    return jb, mp.exp(-jb / 2)


def dagostino_k2(n, g1, g2):
    n, b2 = D(n), g2 + 3
    y = g1 * mp.sqrt((n + 1) * (n + 3) / (6 * (n - 2)))
    beta2 = 3 * (n ** 2 + 27 * n - 70) * (n + 1) * (n + 3) / ((n - 2) * (n + 5) * (n + 7) * (n + 9))
    w2 = -1 + mp.sqrt(2 * (beta2 - 1))
    z1 = mp.asinh(y / mp.sqrt(2 / (w2 - 1))) / mp.sqrt(mp.log(w2) / 2)
    x = (b2 - 3 * (n - 1) / (n + 1)) / mp.sqrt(24 * n * (n - 2) * (n - 3) / ((n + 1) ** 2 * (n + 3) * (n + 5)))
    rb = 6 * (n ** 2 - 5 * n + 2) / ((n + 7) * (n + 9)) * mp.sqrt(6 * (n + 3) * (n + 5) / (n * (n - 2) * (n - 3)))
    a = 6 + 8 / rb * (2 / rb + mp.sqrt(1 + 4 / rb ** 2))
    c = (1 - 2 / a) / (1 + x * mp.sqrt(2 / (a - 4)))
    z2 = (1 - 2 / (9 * a) - mp.sign(c) * mp.cbrt(abs(c))) / mp.sqrt(2 / (9 * a))
    k2 = z1 ** 2 + z2 ** 2
    return k2, mp.exp(-k2 / 2)


def text(pair):
    return [mp.nstr(v, 20) for v in pair]


def figures(x):
    out = {"jarque_bera": text(jarque_bera(*moments(x)))}
    if 3 <= len(x) <= 5000:
        out["shapiro_wilk"] = text(shapiro_wilk(x))
    if len(x) >= 8:
        out["dagostino_k2"] = text(dagostino_k2(*moments(x)))
        out["anderson_darling"] = text(anderson_darling(x))
    return out


def from_scipy(x):
    x = np.array(x)
    return {"jarque_bera": list(map(float, stats.jarque_bera(x))),
            "dagostino_k2": list(map(float, stats.normaltest(x)))}


FILES = [("nist/PiDigits.csv", "y"), ("nist/Lottery.csv", "y"), ("nist/Lew.csv", "y"), ("nist/Mavro.csv", "y"),
         ("nist/Michelso.csv", "y"), ("nist/NumAcc2.csv", "y"), ("nist/NumAcc3.csv", "y"), ("nist/NumAcc4.csv", "y"),
         ("nist/Norris.csv", "y"), ("nist/Longley.csv", "y"), ("boxcox/trees.csv", "Volume"),
         ("boxcox/ornstein.csv", "interlocks"), ("boxcox/journals.csv", "price"), ("boxcox/journals.csv", "citations"),
         ("boxcox/wool.csv", "cycles"), ("boxcox/poisons.csv", "time")]
cases = []
for file, name in FILES:
    x = column(file, name)
    cases.append({"file": file, "column": name, **figures(x)})
    if not file.startswith("nist/NumAcc"):  # SciPy's moments lose digits there
        cases[-1]["scipy"] = from_scipy(x)

random.seed(20260101)
normal = [random.gauss(0, 1) for _ in range(200)]
HARD = {
    "two rows": [3.0, 8.5],
    "three rows, two of them close": [0.0, 1e-9, 1.0],
    "three rows, evenly spaced": [1.0, 2.0, 4.0 - 1.0],
    "four rows, three of them equal": [0.0, 0.0, 0.0, 1.0],
    "two values, even": [0.0] * 50 + [1.0] * 50,
    "two values, uneven": [0.0] * 95 + [1.0] * 5,
    "nearly normal scores": [float(quantile((i + D("0.625")) / D("50.25"))) for i in range(50)],
    "a large mean": [1e9 + 1e-3 * v for v in normal],
    "near the largest double": [2e307 * v for v in normal],
    "near the smallest double": [1e-300 * v for v in normal],
    "subnormal": [5e-324 * round(100 * v) for v in normal],
    "both ends of the range": [(-1) ** i * 10.0 ** (3 * i - 300) for i in range(200)],
    "one row far out": normal + [1e6],
    "one row very far out of many": [i / 3000 for i in range(3000)] + [1e15],
}
for name, x in HARD.items():
    cases.append({"name": name, "values": x, **figures(x)})

by_moments = [{"n": n, "g1": g1, "g2": g2, "dagostino_k2": text(dagostino_k2(n, D(g1), D(g2))),
               "jarque_bera": text(jarque_bera(n, D(g1), D(g2)))}
              for n, g1, g2 in [(8, 0.5, -0.75), (8, -2.0, 4.0), (100, 0.0, 0.0), (1000, 0.125, 0.5),
                                (10 ** 6, 0.0078125, -0.015625), (10 ** 9, 0.0001220703125, 0.0001220703125),
                                (10 ** 6, 0.03125, 0.0625)]]

with open(os.path.join(HERE, "normality_exact.json"), "w") as out:
    rows = lambda items: "[\n" + ",\n".join("  " + json.dumps(item) for item in items) + "]"
    out.write('{\n "about": "tests/reference/normality_exact.py: [statistic, p-value] by mpmath %s at 60 digits; under scipy '
              'by SciPy %s (jarque_bera, normaltest)",\n "cases": %s,\n "by_moments": %s\n}\n'
              % (mp.__version__, scipy.__version__, rows(cases), rows(by_moments)))
