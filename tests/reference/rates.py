"""Check values for exact limits of rates, shares and rate ratios, and for the p-value of a ratio.

Run: python3 tests/reference/rates.py > tests/reference/rates.json

Limits: the root of a tail of the gamma or beta law in 40 digits, the tail being the density by
mpmath's loggamma times an integral by Gauss–Legendre quadrature. p-values: exact sums of fractions up to
4000 events; beyond, tails as above, and the first count as rare on the other side by bisection on
the density.

Every row gives the arguments and the result rounded to the nearest double.
"""

import json
from fractions import Fraction
from math import comb

import mpmath
from mpmath import expm1, exp, log, log1p, loggamma, mp, mpf, quad, sqrt

mp.dps = 40


def integral(g, scale):
    """Of exp(g) from 0 on; g(0) = 0 and g falls in the end."""
    end = scale
    while g(end) > -80:
        end *= 1.3
    points = [0] + [end / 2 ** i for i in (5, 4, 3, 2, 1, 0)]
    return quad(lambda t: exp(g(t)), points, method="gauss-legendre", maxdegree=5)


def e_fold(slope, curvature):
    slope = max(slope, mpf(0))
    return 4 / (slope + sqrt(slope ** 2 + 2 * abs(curvature) + mpf("1e-30")))


# Each gives the logarithm of a tail and its derivative by ln(x) or ln(odds).

def gamma_lower(a, x):
    area = integral(lambda v: -a * v - x * expm1(-v), e_fold(a - x, x + a / 1000))
    return a * log(x) - x - loggamma(a) + log(area), 1 / area


def gamma_upper(a, x):
    area = integral(lambda s: -s + (a - 1) * log1p(s / x),
                    e_fold(1 - (a - 1) / x, (a - 1) / x ** 2))
    return (a - 1) * log(x) - x - loggamma(a) + log(area), -x / area


def beta_lower(a, b, odds):
    """I_p(a, b) at p = odds/(1 + odds)."""
    area = integral(lambda v: -a * v + (b - 1) * log1p(-odds * expm1(-v)),
                    e_fold(a - (b - 1) * odds, (b - 1) * odds * (1 + odds) + a / 1000))
    density = (a * log(odds) - (a + b - 1) * log1p(odds) - loggamma(a) - loggamma(b)
               + loggamma(a + b))
    return density + log(area), 1 / (1 + odds) / area


def root(tail, target, start):
    """Where a tail has the value `target`, by Newton's method on logarithms."""
    x = start
    for _ in range(60):
        value, slope = tail(x)
        step = (log(target) - value) / slope
        x *= exp(step)
        if abs(step) < mpf("1e-20"):
            return x
    raise ArithmeticError("no root")


def half(level):
    return (1 - mpf(level)) / 2


def spread(level):
    return sqrt(-2 * log(2 * half(level)))


def rate_limits(k, level):
    k, tail = mpf(k), half(level)
    low = mpf(0)
    if k > 0:
        start = max(exp((log(tail) + loggamma(k + 1)) / k), k * exp(-spread(level) / sqrt(k)))
        low = root(lambda x: gamma_lower(k, x), tail, start)
    high = root(lambda x: gamma_upper(k + 1, x), tail, (k + 1) * exp(spread(level) / sqrt(k + 1)))
    return low, high


def low_odds(k, m, level):
    k, m, tail = mpf(k), mpf(m), half(level)
    if k == 0:
        return mpf(0)
    start = max(exp((log(tail) + loggamma(k + 1) + loggamma(m + 1) - loggamma(k + m + 1)) / k),
                k / (m + 1) * exp(-spread(level) * sqrt(1 / k + 1 / (m + 1))))
    return root(lambda o: beta_lower(k, m + 1, o), tail, start)


def small_p(e1, b1, e2, b2):
    n, w1, w2 = e1 + e2, Fraction(b1), Fraction(b2)
    # Numerators of the probabilities: choices × weights; exact.
    scale = w1.denominator * w2.denominator
    a, b = int(w1 * scale), int(w2 * scale)
    mass = lambda k: comb(n, k) * a ** k * b ** (n - k)
    seen = mass(e1)
    return mpf(sum(m for m in map(mass, range(n + 1)) if m <= seen)) / mpf((a + b) ** n)


def large_p(e1, b1, e2, b2):
    if e1 * mpf(b2) > e2 * mpf(b1):
        e1, b1, e2, b2 = e2, b2, e1, b1
    n, w1, w2 = e1 + e2, mpf(b1), mpf(b2)
    density = lambda k: (loggamma(n + 1) - loggamma(mpf(k) + 1) - loggamma(mpf(n - k) + 1)
                         + k * log(w1) + (n - k) * log(w2))
    seen = density(e1)
    low, high = int(mpmath.ceil(n * w1 / (w1 + w2))), n + 1
    while low < high:
        middle = (low + high) // 2
        if density(middle) <= seen:
            high = middle
        else:
            low = middle + 1
    p = exp(beta_lower(mpf(e2), mpf(e1 + 1), w2 / w1)[0])
    if low <= n:
        p += exp(beta_lower(mpf(low), mpf(n - low + 1), w1 / w2)[0])
    return min(p, mpf(1))


LEVELS = [0.95, 0.5, 1e-9, 0.999999, 1 - 2.0 ** -53]
rates = []
for k in (0, 1e-3, 0.3, 1, 2.5, 7, 63.25, 1000, 4321.5, 20000, 3.5e7, 1e9, 1e12, 1e15):
    for level in LEVELS:
        low, high = rate_limits(k, level)
        rates.append({"events": k, "level": level, "low": float(low), "high": float(high)})

shares = []
for part, whole in ((0, 1), (1, 1), (0, 10), (1, 10), (4, 10), (2.5, 7.25), (0.3, 0.9), (0.01, 40),
                    (39.9, 40), (17, 60), (60, 60), (500, 1000), (999, 1000), (1, 1e6), (3, 1e9),
                    (1e9 - 2, 1e9), (123456.5, 1e6), (3e8, 1e9), (1000, 1e15), (2e9, 1e12),
                    (4e14, 1e15), (1e15 - 5, 1e15), (1e15, 1e15)):
    for level in LEVELS:
        low = low_odds(part, whole - part, level)
        other = low_odds(whole - part, part, level)
        shares.append({"part": part, "whole": whole, "level": level,
                       "low": float(100 * low / (1 + low)), "high": float(100 / (1 + other))})

ratios = []
for e1, b1, e2, b2 in ((0, 10, 3, 12), (5, 120.5, 9, 300), (17, 1000, 4, 900), (2, 1, 0, 1),
                       (100, 7, 100, 7), (3, 1e9, 2, 1), (1500, 2e4, 1320, 2.1e4), (2.5, 3, 1.25, 4),
                       (10 ** 9, 5e3, 10 ** 9 + 70000, 5e3), (10 ** 15, 0.1, 10 ** 15 - 10 ** 8, 0.1),
                       (40, 1, 10 ** 12, 1e10)):
    for level in (0.95, 1e-6, 1 - 2.0 ** -40):
        low = low_odds(e1, e2, level) * mpf(b2) / mpf(b1)
        other = low_odds(e2, e1, level)
        ratios.append({"e1": e1, "b1": b1, "e2": e2, "b2": b2, "level": level, "low": float(low),
                       "high": None if other == 0 else float(mpf(b2) / mpf(b1) / other)})

p_values = []
for row in ((0, 10, 3, 12), (5, 120.5, 9, 300), (17, 1000, 4, 900), (2, 1, 0, 1), (0, 1, 1, 3),
            (100, 7, 100, 7), (60, 1, 140, 1), (140, 1, 60, 1), (7, 1, 7, 2), (30, 0.1, 5, 0.3),
            (3, 1e9, 2, 1), (1500, 2e4, 1320, 2.1e4), (1500, 2e4, 1800, 2.1e4), (0, 3, 0, 4),
            (1, 1, 1, 1), (400, 1, 3000, 1), (1, 1e-3, 1000, 1)):
    p_values.append(dict(zip(("e1", "b1", "e2", "b2"), row), p=float(small_p(*row))))
for row in ((1500, 2e4, 1800, 2.1e4), (300000, 1.0, 301000, 1.0), (10 ** 6, 3.0, 10 ** 6, 3.01),
            (10 ** 9, 5e3, 10 ** 9 + 70000, 5e3), (10 ** 9, 1.0, 10 ** 9 + 1, 1.0),
            (40, 1.0, 10 ** 12, 1e10), (10 ** 15, 0.1, 10 ** 15 - 10 ** 8, 0.1),
            (10 ** 12, 0.1, 3 * 10 ** 12 + 10 ** 7, 0.3), (7 * 10 ** 8, 1.0, 7 * 10 ** 8 + 10 ** 6, 1.0)):
    p_values.append(dict(zip(("e1", "b1", "e2", "b2"), row), p=float(large_p(*row))))

heading = {"script": "tests/reference/rates.py", "library": "mpmath " + mpmath.__version__,
           "digits": mp.dps, "about": __doc__.split("\n")[0]}


def lines(rows):
    return "[\n" + ",\n".join(json.dumps(row) for row in rows) + "\n]"


print('{"heading": ' + json.dumps(heading) + ',\n"rates": ' + lines(rates) + ',\n"shares": '
      + lines(shares) + ',\n"ratios": ' + lines(ratios) + ',\n"p_values": ' + lines(p_values) + "}")
