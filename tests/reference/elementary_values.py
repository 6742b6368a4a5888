#!/usr/bin/env python3
"""Writes tests/reference/elementary/values.csv: elementary functions at 80 digits.

  python3 tests/reference/elementary_values.py > tests/reference/elementary/values.csv

One line per value: function, x, p (for pow), and the result as the sum of two doubles, the first
of them the nearest double. Needs mpmath (1.2.1 was used); random points from a fixed seed.
"""
import math
import random

from mpmath import asinh, exp, expm1, log, log1p, mp, mpf, sinh

mp.dps = 80
random.seed(20240229)

TINY, HUGE = 5e-324, 1.7976931348623157e308


def signed(points):
    return [s * x for x in points for s in (1, -1)]


def uniform(low, high, n):
    return [random.uniform(low, high) for _ in range(n)]


def spread(low_exponent, high_exponent, n):
    return [math.ldexp(random.uniform(1, 2), random.randint(low_exponent, high_exponent))
            for _ in range(n)]


def around(x, n=4):
    """x and its neighbours among the doubles."""
    points, up, down = [x], x, x
    for _ in range(n):
        up, down = math.nextafter(up, math.inf), math.nextafter(down, -math.inf)
        points += [up, down]
    return points


def pow_(x, p):
    return mpf(x) ** mpf(p)


plain_exp = uniform(-708, 708, 150) + signed(uniform(0, 1, 60) + spread(-60, -1, 50))
steps = [k * float(mp.log(2)) / 256 for k in range(-300, 301, 7)]
edges = (around(709.782712893384) + uniform(709, 709.78, 10) + uniform(-745.13, -708, 80)
         + around(-708.3964185322641) + around(-744.4400719213812))
tiny = signed([TINY, 1e-310, 2.2250738585072014e-308, 1e-300, 1e-100])
positive = (spread(-1074, 1023, 200) + spread(-1, 1, 150) + spread(-1074, -1023, 30)
            + [TINY, HUGE, 2.2250738585072014e-308, 1e-310] + around(0.5) + around(2.0))
near_one = [1 + s * math.ldexp(random.uniform(1, 2), e) for e in range(-52, -1) for s in (1, -1)]
cells = [math.ldexp(k, -9) for k in range(350, 730, 5)]

POINTS = {
    "exp": (exp, plain_exp + steps + edges + tiny),
    "expm1": (expm1, plain_exp + steps + tiny + around(709.782712893384) + uniform(-45, 45, 60)),
    "log": (log, positive + [x for x in near_one + around(1.0) if x != 1] + cells),
    "log1p": (log1p, positive + [x for x in signed(spread(-70, -2, 150)) + tiny if x > -1]
              + [-x for x in uniform(0.2, 1, 60)] + [-1 + math.ldexp(1, -e) for e in range(2, 54, 3)]),
    "sinh": (sinh, signed(uniform(0, 40, 80) + uniform(40, 710.4, 50) + spread(-60, 0, 80)
                          + around(710.4758600739439, 2) + [1e-310, TINY])),
    "asinh": (asinh, signed(spread(-60, 60, 150) + uniform(0, 3, 60) + spread(60, 1023, 30)
                            + [1e-310, TINY, HUGE])),
}

pow_points = [(x, 2.0) for x in uniform(0, 10, 20)]
pow_points += [(x, p) for x in uniform(0.01, 100, 40) for p in (-2.0, -0.5, 1 / 3, 0.5, 1.0, 3.0)]
pow_points += [(x, random.uniform(-700, 700) / math.log(x)) for x in spread(-1000, 1000, 150)]
pow_points += [(x, random.uniform(-700, 700) / math.log(x)) for x in near_one]
pow_points += [(x, random.uniform(-744, -709) / math.log(x)) for x in spread(1, 60, 40)]
pow_points += [(x, random.uniform(-1, 1) * 1e-12) for x in spread(-300, 300, 20)]
pow_points += [(x, random.uniform(-0.9, 0.9)) for x in spread(-1074, -1023, 20)]


def line(name, x, p, value):
    head = float(value)
    if not math.isfinite(head) or value == 0:
        return
    tail = float(value - mpf(head))
    print(f"{name},{float(x).hex()},{float(p).hex()},{head.hex()},{tail.hex()}")


print("function,x,p,head,tail")
for name, (function, points) in POINTS.items():
    for x in points:
        line(name, x, 0, function(mpf(x)))
for x, p in pow_points:
    line("pow", x, p, pow_(x, p))
