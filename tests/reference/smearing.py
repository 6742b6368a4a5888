"""Check values for the smearing estimate: the average of back(fit + e) over all residuals, 50 digits.

Run: python3 tests/reference/smearing.py > tests/reference/smearing.json

Residuals: NIST StRD Lottery (reference/nist/Lottery.csv), its first 31 values or all 218, and 400
normal quantiles at (i − 1/2)/400, each set centred and scaled to a standard deviation of 1, times
the case's spread; weights, where used, are 1 + (row mod 4). Values outside the domain of the way
back are held at the domain's edge.
The means, and the medians back(fit), are functions of the doubles written to the file.
"""

import json
import pathlib

import mpmath
from mpmath import mp, mpf

mp.dps = 50

here = pathlib.Path(__file__).parent
lottery = [float(v) for v in (here / "nist/Lottery.csv").read_text().split()[1:]]
normal = [float(mp.sqrt(2) * mp.erfinv(2 * (mpf(i) + mpf(1) / 2) / 400 - 1)) for i in range(400)]


def standardised(values):
    n = len(values)
    mean = sum(map(mpf, values)) / n
    sd = mp.sqrt(sum((v - mean) ** 2 for v in values) / (n - 1))
    return [float((v - mean) / sd) for v in values]


sets = {
    "lottery31": standardised(lottery[:31]),
    "lottery": standardised(lottery),
    "normal400": standardised(normal),
}


def back(spec):
    word, *args = spec.split()
    a = [mpf(float(v)) for v in args]
    if word == "identity":
        return lambda z: z
    if word == "z_score":
        return lambda z: a[0] + z * a[1]
    if word == "log_offset":
        base = a[1] if len(a) > 1 else mp.e
        return lambda z: base**z - (a[0] if a else 0)
    if word == "log_reflected":
        return lambda z: a[0] - mp.exp(-z)
    if word == "asinh_scaled":
        return lambda z: mp.sinh(a[0] * z) / a[0]
    if word == "sqrt_offset":
        return lambda z: max(z, mpf(0)) ** 2 - (a[0] if a else 0)
    if word == "square":
        return lambda z: mp.sqrt(max(z, mpf(0)))
    if word == "power_of":
        return lambda z: max(z, mpf(0)) ** (1 / a[0])
    if word == "box_cox":
        offset = a[1] if len(a) > 1 else 0
        if a[0] == 0:
            return lambda z: mp.exp(z) - offset
        return lambda z: max(1 + a[0] * z, mpf(0)) ** (1 / a[0]) - offset
    if word == "reciprocal":
        return lambda z: 1 / z
    if word == "logit":
        low, high = (a[0], a[1]) if a else (0, 1)
        return lambda z: low + (high - low) / (1 + mp.exp(-z))
    if word == "yeo_johnson":
        lam = a[0]
        return lambda z: (1 + lam * z) ** (1 / lam) - 1 if z >= 0 else 1 - (1 - (2 - lam) * z) ** (
            1 / (2 - lam))
    raise ValueError(spec)


def case(spec, name, spread, fits, weighted=False):
    residuals = [float(e * spread) for e in sets[name]]
    weights = [float(1 + i % 4) for i in range(len(residuals))] if weighted else []
    w = weights or [1.0] * len(residuals)
    f = back(spec)
    total = sum(map(mpf, w))
    return {
        "spec": spec,
        "residuals": name,
        "spread": spread,
        "weights": weights,
        "fits": fits,
        "means": [float(sum(mpf(a) * f(mpf(fit) + mpf(e)) for a, e in zip(w, residuals)) / total)
                  for fit in fits],
        "medians": [float(f(mpf(fit))) for fit in fits],
    }


exact = []
for name in ("lottery31", "lottery"):
    for weighted in (False, True):
        exact += [
            case("log_offset", name, 0.8, [-3.0, 0.0, 7.5], weighted),
            case("log_offset 1", name, 0.8, [0.01, 2.0, 7.5], weighted),
            case("log_offset 2.5 10", name, 0.3, [0.5, 4.0], weighted),
            case("log_reflected 100", name, 0.7, [-4.0, -1.0, 2.0], weighted),
            case("box_cox 0", name, 0.8, [0.0, 7.5], weighted),
            case("box_cox 0 1", name, 0.8, [1.0, 7.5], weighted),
            case("asinh_scaled 2", name, 0.6, [-3.0, 0.0, 0.1, 2.5], weighted),
            case("sqrt_offset", name, 2.0, [5.0, 40.0], weighted),
            case("sqrt_offset 1", name, 2.0, [5.0, 40.0], weighted),
            case("power_of 0.5", name, 2.0, [5.0, 40.0], weighted),
            case("power_of 0.25", name, 0.2, [2.0, 4.0], weighted),
            case("power_of 1", name, 2.0, [7.0], weighted),
            case("box_cox 0.5", name, 2.0, [5.0, 40.0], weighted),
            case("box_cox 0.25 1", name, 0.9, [3.0, 12.0], weighted),
        ]
points = []
for name, weighted in (("lottery31", False), ("lottery31", True), ("lottery", False),
                       ("lottery", True), ("normal400", False)):
    points += [
        case("sqrt_offset", name, 2.0, [-1.0, 0.5, 2.0], weighted),
        case("square", name, 2.0, [9.0, 60.0], weighted),
        case("power_of 0.3", name, 0.3, [2.0, 4.0], weighted),
        case("power_of -0.5", name, 0.05, [0.5, 1.0], weighted),
        case("reciprocal", name, 0.05, [0.4, -0.4, 2.0], weighted),
        case("box_cox 0.3", name, 1.0, [4.0, 12.0], weighted),
        case("logit 0 100", name, 0.7, [-2.0, 0.0, 1.5], weighted),
        case("yeo_johnson 0.5", name, 0.8, [-1.0, 0.2, 6.0], weighted),
    ]

print(json.dumps({
    "source": "tests/reference/smearing.py, mpmath " + mpmath.__version__,
    "sets": sets,
    "exact": exact,
    "points": points,
}, indent=None, separators=(",", ":")).replace('{"spec"', '\n{"spec"'))
