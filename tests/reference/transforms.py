"""Check values for the re-expressions, by their textbook formulas in 700 digits.

Run: python3 tests/reference/transforms.py > tests/reference/transforms.json

forward: x and spec -> z, slope = dz/dx, and conditioning: for rescale 1 + |x z'/z| + |location
         z'/z|, else 1
back:    z and spec -> x, and conditioning 1 + |z x'/x| + |location/x|
All are functions of the doubles given; results are rounded once to the nearest double.
"""

import json
import random

import mpmath
from mpmath import mp, mpf

mp.dps = 700


def power_family(u, lam):
    return mp.log(u) if lam == 0 else mp.expm1(lam * mp.log(u)) / lam


def power_family_back(z, lam):
    return mp.exp(z) if lam == 0 else mp.exp(mp.log1p(lam * z) / lam)


def make(word, args):
    """forward, back, slope, location for numbers given as mpf."""
    a = [mpf(v) for v in args] + [None] * 4
    if word == "log_offset":
        o, base = a[0] or mpf(0), a[1] if len(args) > 1 else mp.e
        k = mp.log(base)
        return (lambda x: mp.log(x + o) / k, lambda z: mp.exp(z * k) - o,
                lambda x: 1 / ((x + o) * k), o)
    if word == "sqrt_offset":
        o = a[0] or mpf(0)
        return (lambda x: mp.sqrt(x + o), lambda z: z * z - o,
                lambda x: 1 / (2 * mp.sqrt(x + o)), o)
    if word == "square":
        return lambda x: x * x, mp.sqrt, lambda x: 2 * x, mpf(0)
    if word == "power_of":
        p = a[0]
        return (lambda x: x ** p, lambda z: z ** (1 / p), lambda x: p * x ** (p - 1), mpf(0))
    if word == "reciprocal":
        return lambda x: 1 / x, lambda z: 1 / z, lambda x: -1 / x ** 2, mpf(0)
    if word == "negative_reciprocal":
        return lambda x: -1 / x, lambda z: -1 / z, lambda x: 1 / x ** 2, mpf(0)
    if word == "log_reflected":
        return (lambda x: -mp.log(a[0] - x), lambda z: a[0] - mp.exp(-z),
                lambda x: 1 / (a[0] - x), a[0])
    if word == "box_cox":
        o = a[1] or mpf(0)
        return (lambda x: power_family(x + o, a[0]), lambda z: power_family_back(z, a[0]) - o,
                lambda x: (x + o) ** (a[0] - 1), o)
    if word == "yeo_johnson":
        lam = a[0]
        return (lambda x: power_family(1 + x, lam) if x >= 0 else -power_family(1 - x, 2 - lam),
                lambda z: power_family_back(z, lam) - 1 if z >= 0
                else 1 - power_family_back(-z, 2 - lam),
                lambda x: (1 + x) ** (lam - 1) if x >= 0 else (1 - x) ** (1 - lam), mpf(1))
    if word == "asinh_scaled":
        t = a[0]
        return (lambda x: mp.asinh(t * x) / t, lambda z: mp.sinh(t * z) / t,
                lambda x: 1 / mp.sqrt(1 + (t * x) ** 2), mpf(0))
    if word == "logit":
        low, high = (a[0], a[1]) if len(args) > 1 else (mpf(0), mpf(1))
        inset = a[2] if len(args) > 2 else mpf(0)
        share = lambda x: inset + (1 - 2 * inset) * (x - low) / (high - low)
        return (lambda x: mp.log(share(x) / (1 - share(x))),
                lambda z: low + (high - low) * (1 / (1 + mp.exp(-z)) - inset) / (1 - 2 * inset),
                lambda x: (1 - 2 * inset) / (high - low) / (share(x) * (1 - share(x))),
                abs(low) + abs(high))
    if word == "z_score":
        return (lambda x: (x - a[0]) / a[1], lambda z: a[0] + z * a[1], lambda x: 1 / a[1], a[0])
    if word == "rescale":
        lo, hi = (a[2], a[3]) if len(args) > 2 else (mpf(0), mpf(1))
        return (lambda x: lo + (x - a[0]) * (hi - lo) / (a[1] - a[0]),
                lambda z: a[0] + (z - lo) * (a[1] - a[0]) / (hi - lo),
                lambda x: (hi - lo) / (a[1] - a[0]),
                abs(a[0]) + abs(lo * (a[1] - a[0]) / (hi - lo)))
    if word == "center":
        return lambda x: x - a[0], lambda z: z + a[0], lambda x: mpf(1), a[0]
    raise KeyError(word)


rng = random.Random(20240501)
SIZES = [1e-300, 1e-9, 0.1, 0.5, 0.999999, 1, 1.0000001, 2.5, 99.5, 1000, 1e9, 1e300]
POSITIVE = SIZES + [round(rng.lognormvariate(0, 3), 6) for _ in range(4)]
BOTH = [0.0] + POSITIVE + [-x for x in POSITIVE]
LAMBDAS = [0, 1e-300, 1e-18, 1e-12, -1e-12, 3e-13, 1e-9, -1e-6, 1e-3, 0.1, 0.25, 1 / 3, 0.5, 1,
           1.5, 2, -0.5, -1, -2, 3, 5, -5]

CASES = []
for args in ([], [1], [0.5], [1e-6], [-3], [0, 10], [0, 2], [1, 10], [0, 0.5], [1, 1.001]):
    CASES.append(("log_offset", args, BOTH if args and args[0] else POSITIVE))
for args in ([], [1], [0.375], [-3]):
    CASES.append(("sqrt_offset", args, BOTH if args else [0.0] + POSITIVE))
CASES.append(("square", [], POSITIVE))
for p in (2, 3, 0.5, 1 / 3, -0.5, -2, 0.1, 7.3, 1, -1, 1e-3):
    CASES.append(("power_of", [p], POSITIVE))
CASES += [("reciprocal", [], BOTH), ("negative_reciprocal", [], BOTH)]
for top in (1, 100, 100.5, 1e-3, 0, -5):
    CASES.append(("log_reflected", [top], BOTH))
for lam in LAMBDAS:
    CASES.append(("box_cox", [lam], POSITIVE))
    CASES.append(("yeo_johnson", [lam], BOTH))
    CASES.append(("yeo_johnson", [2 - lam], BOTH))
for args in ([0.25, 1], [-0.7, 0.5], [1e-12, 1], [0, 1], [2, -3]):
    CASES.append(("box_cox", args, BOTH))
for theta in (1, 0.01, 1e-9, 50, 1e12):
    CASES.append(("asinh_scaled", [theta], BOTH))
SHARES = [1e-300, 1e-12, 0.01, 0.25, 0.3, 1 / 3, 0.49999999, 0.5, 0.5000001, 0.51, 0.7, 0.9, 0.999,
          1 - 1e-12, 0, 1] + [round(rng.random(), 6) for _ in range(8)]
for low, high, inset in ((0, 1, 0), (0, 100, 0), (-3, 7, 0), (10, 0, 0), (0, 100, 0.01),
                         (1, 5, 0.025), (0, 1, 0.49), (1e6, 1e6 + 1, 0)):
    args = [] if (low, high, inset) == (0, 1, 0) else [low, high] + ([inset] if inset else [])
    CASES.append(("logit", args, [low + (high - low) * s for s in SHARES]))
CASES += [("z_score", [100, 15], BOTH), ("z_score", [1e-3, 1e-6], BOTH), ("center", [37.5], BOTH),
          ("rescale", [0, 100], BOTH), ("rescale", [10, -20, 3, 5], BOTH),
          ("rescale", [0.1, 0.3, 7, 7.1], BOTH)]

BIGGEST = mpf("1.79e308")
SMALLEST = mpf("1e-307")  # below, doubles have fewer digits


def keeps(value):
    return value == 0 or SMALLEST < abs(value) < BIGGEST


forward, back = [], []
for word, args, xs in CASES:
    to_z, to_x, slope, location = make(word, args)
    spec = " ".join([word] + [repr(float(v)) for v in args])
    for x in xs:
        try:
            z = to_z(mpf(x))
            s = slope(mpf(x))
        except (ValueError, ZeroDivisionError, TypeError):
            continue
        if isinstance(z, mpmath.mpc) or not mpmath.isfinite(z):
            continue
        # A power in mpmath of a negative number may come out real: keep to the stated domains.
        if word == "power_of" and x <= 0:
            continue
        if word == "box_cox" and x + (args[1] if len(args) > 1 else 0) <= 0:
            continue
        if keeps(z) and keeps(s) and s != 0:
            cond = mpf(1)
            if word == "rescale" and z != 0:
                cond += (abs(mpf(x)) + abs(location)) * abs(s / z)
            forward.append({"spec": spec, "x": x, "z": float(z), "slope": float(s),
                            "conditioning": float(mpmath.nstr(cond, 4))})
        if not keeps(z) or float(z) == 0:
            continue
        z_double = mpf(float(z))
        try:
            x_back = to_x(z_double)
            s_back = slope(x_back)
        except (ValueError, ZeroDivisionError, TypeError):
            continue
        if isinstance(x_back, mpmath.mpc) or not keeps(x_back) or x_back == 0 or s_back == 0:
            continue
        cond = abs(z_double / (s_back * x_back)) + abs(location / x_back) + 1
        if cond < 1e12:
            back.append({"spec": spec, "z": float(z), "x": float(x_back),
                         "conditioning": float(mpmath.nstr(cond, 4))})

heading = {"script": "tests/reference/transforms.py", "library": "mpmath " + mpmath.__version__,
           "digits": mp.dps, "about": __doc__.split("\n")[0]}


def lines(rows):
    return "[\n" + ",\n".join(json.dumps(row) for row in rows) + "\n]"


print('{"heading": ' + json.dumps(heading) + ',\n"forward": ' + lines(forward) + ',\n"back": '
      + lines(back) + "}")
