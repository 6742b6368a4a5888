#!/usr/bin/env python3
"""Writes tests/reference/response_profiles.json: profile likelihoods of λ given predictors.

  python3 tests/reference/response_profiles.py > tests/reference/response_profiles.json

Textbook formulas at 60 digits, no scaling: z = (x^λ-1)/λ, or Yeo & Johnson's; least squares by the
normal equations, which 60 digits can bear; log-likelihood -n/2 (1 + ln 2π) - n/2 ln(Σ w e²/n) +
½ Σ ln w + log-Jacobian. λ is the root of its derivative (a central difference with a step of
1e-25), the limits those of its likelihood ratio. Needs mpmath (1.2.1 was used).
"""
import csv
import json
import os

import mpmath
from mpmath import log, mp, mpf, pi, sqrt

mp.dps = 60
HERE = os.path.dirname(os.path.abspath(__file__))
QUANTILE = mpmath.findroot(lambda q: mpmath.erf(sqrt(q / 2)) - mpf(0.95), 3.84)


def columns(path):
    with open(os.path.join(HERE, path)) as file:
        rows = list(csv.DictReader(file))
    return {name: [float(row[name]) for row in rows] for name in rows[0]
            if all(is_number(row[name]) for row in rows)}


def is_number(text):
    try:
        float(text)
        return True
    except ValueError:
        return False


def box_cox(x, lam):
    return log(x) if lam == 0 else (x ** lam - 1) / lam


def yeo_johnson(x, lam):
    if x >= 0:
        return box_cox(1 + x, lam)
    return -box_cox(1 - x, 2 - lam)


def likelihood(family, y, x, w):
    n = len(y)
    design = [[mpf(1)] + [mpf(column[i]) for column in x] for i in range(n)]
    p = len(design[0])
    # Columns scaled to length 1, so that the digits last.
    for j in range(p):
        length = sqrt(mpmath.fsum(row[j] ** 2 for row in design))
        for row in design:
            row[j] /= length
    gram = mpmath.matrix(p, p)
    for a in range(p):
        for b in range(p):
            gram[a, b] = mpmath.fsum(w[i] * design[i][a] * design[i][b] for i in range(n))
    inverse = gram ** -1
    if family == "box_cox":
        jacobian = mpmath.fsum(log(mpf(v)) for v in y)
        transform = box_cox
    else:
        jacobian = mpmath.fsum(mpmath.sign(v) * log(1 + abs(mpf(v))) for v in y)
        transform = yeo_johnson

    def value(lam):
        lam = mpf(lam)
        z = [transform(mpf(v), lam) for v in y]
        right = mpmath.matrix([mpmath.fsum(w[i] * design[i][a] * z[i] for i in range(n))
                               for a in range(p)])
        b = inverse * right
        e = [z[i] - mpmath.fsum(design[i][a] * b[a] for a in range(p)) for i in range(n)]
        squares = mpmath.fsum(w[i] * e[i] ** 2 for i in range(n))
        return (-mpf(n) / 2 * (1 + log(2 * pi) + log(squares / n)) +
                mpmath.fsum(log(v) for v in w) / 2 + (lam - 1) * jacobian)
    return value


def bisect(f, low, high):
    at_low = f(low)
    for _ in range(60):
        middle = (low + high) / 2
        if (f(middle) > 0) == (at_low > 0):
            low = middle
        else:
            high = middle
    return (low + high) / 2


def record(name, family, file, response, predictors, weight=None, square=None):
    data = columns(file)
    y = data[response]
    x = [data[p] for p in predictors]
    w = [mpf(v) for v in data[weight]] if weight else [mpf(1)] * len(y)
    if square:
        x.append([v * v for v in data[square]])
    value = likelihood(family, y, x, w)
    h = mpf(10) ** -20
    score = lambda lam: (value(lam + h) - value(lam - h)) / (2 * h)
    best = max([mpf(k) / 2 for k in range(-10, 11)], key=value)
    lam = bisect(score, max(best - mpf(1) / 2, mpf(-5)), min(best + mpf(1) / 2, mpf(5)))
    top = value(lam)

    def limit(end):
        left = lambda l: 2 * (top - value(l)) - QUANTILE
        if left(mpf(end)) < 0:
            return None
        return float(bisect(left, lam, mpf(end)))
    return {"name": name, "family": family, "file": file, "response": response,
            "predictors": predictors, "weight": weight, "square": square, "rows": len(y),
            "lambda": float(lam), "low": limit(-5), "high": limit(5), "log_likelihood": float(top),
            "likelihood_at_minus_3": float(value(-3)), "likelihood_at_2": float(value(2))}


CASES = [
    record("weights", "box_cox", "boxcox/journals.csv", "subs", ["price", "citations"],
           weight="foundingyear"),
    record("uneven weights", "box_cox", "boxcox/trees.csv", "Volume", ["Height"], weight="Girth"),
    record("yeo_johnson", "yeo_johnson", "boxcox/bondyield.csv", "Y",
           ["MOOD", "EPI", "EXP", "RUS"]),
    record("yeo_johnson, weights", "yeo_johnson", "boxcox/bondyield.csv", "Y", ["EPI", "RUS"],
           weight="MOOD"),
    record("nearly all explained", "box_cox", "nist/Longley.csv", "y",
           ["x1", "x2", "x3", "x4", "x5", "x6"]),
    record("a line through calibrations", "box_cox", "nist/Pontius.csv", "y", ["x"], square="x"),
]
print(json.dumps({"source": __doc__.split("\n")[0], "script": "response_profiles.py",
                  "mpmath": mpmath.__version__, "level": 0.95, "cases": CASES}, indent=1))
