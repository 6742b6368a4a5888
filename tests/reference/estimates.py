#!/usr/bin/env python3
"""Writes tests/reference/estimates.json: models whose transforms are estimated from their rows.

  python3 tests/reference/estimates.py > tests/reference/estimates.json

Textbook formulas at 80 digits on open data: means, standard deviations and ranges; λ as the root of
the derivative of the log-likelihood -n/2 ln(Σ w e²) + Σ ln |dz/dy|, e the residuals of the regression
(for a predictor: of its mean); the offset as the root of the skewness of ln(x + offset); coefficients by the
normal equations. Categories stand against their commonest level, levels in byte order. Needs mpmath
(1.2.1 was used).
"""
import csv
import json
import os
import sys

import mpmath
from mpmath import exp, fsum, log, mp, mpf, sqrt

from roots import false_position

mp.dps = 80
HERE = os.path.dirname(os.path.abspath(__file__))

MODELS = {
    "linear": {"file": "boxcox/trees.csv", "columns": [
        ("Volume", "z_score"), ("Girth", "center"), ("Height", "rescale")]},
    "powers": {"file": "boxcox/trees.csv", "columns": [
        ("Volume", "box_cox"), ("Girth", "box_cox"), ("Height", "z_score")]},
    "weighted": {"file": "boxcox/trees.csv", "weight": "Height", "columns": [
        ("Volume", "box_cox"), ("Girth", "log_offset auto"), ("Height", "yeo_johnson")]},
    "categories": {"file": "boxcox/poisons.csv", "columns": [
        ("time", "box_cox"), ("poison", "category"), ("treat", "category")]},
    "zeros": {"file": "boxcox/ornstein.csv", "columns": [
        ("interlocks", "yeo_johnson"), ("assets", "box_cox"), ("sector", "category"),
        ("nation", "category")]},
    "offset": {"file": "boxcox/ornstein.csv", "columns": [
        ("interlocks", "log_offset auto"), ("assets", "log_offset auto"), ("nation", "category")]},
    "plain": {"file": "boxcox/trees.csv", "columns": [("Volume", "box_cox")]},
}


def mean(xs):
    return fsum(xs) / len(xs)


def root(f, low, high):
    found = false_position(f, low, high, 40)
    assert found is not None
    return found


def power(b, p):
    """(b^p - 1)/p and its derivative in p; b is the logarithm of the base."""
    if p == 0:
        return b, b * b / 2
    value = (exp(p * b) - 1) / p
    return value, (exp(p * b) * b - value) / p


def powers(kind, xs, lam):
    """Values, derivatives in λ, and the derivative of the logarithm of the Jacobian."""
    rows, jacobian = [], mpf(0)
    for x in xs:
        if kind == "box_cox":
            rows.append(power(log(x), lam))
            jacobian += log(x)
        elif x >= 0:
            rows.append(power(log(1 + x), lam))
            jacobian += log(1 + x)
        else:
            value, slope = power(log(1 - x), 2 - lam)
            rows.append((-value, slope))
            jacobian -= log(1 - x)
    return [r[0] for r in rows], [r[1] for r in rows], jacobian


def solve(design, z, w):
    p = len(design[0])
    a = mpmath.matrix(p, p)
    b = mpmath.matrix(p, 1)
    for i in range(p):
        b[i] = fsum(wk * d[i] * zk for wk, d, zk in zip(w, design, z))
        for j in range(p):
            a[i, j] = fsum(wk * d[i] * d[j] for wk, d in zip(w, design))
    return mpmath.lu_solve(a, b)


def residuals(design, z, w):
    beta = solve(design, z, w)
    return [zk - fsum(b * x for b, x in zip(beta, d)) for zk, d in zip(z, design)]


def lam_of(kind, xs, design, w):
    def score(lam):
        z, slopes, jacobian = powers(kind, xs, lam)
        e = residuals(design, z, w)
        cross = fsum(wk * ek * sk for wk, ek, sk in zip(w, e, slopes))
        return jacobian - len(xs) * cross / fsum(wk * ek * ek for wk, ek in zip(w, e))
    # A rough look for the change of sign next to the largest likelihood, then the root.
    grid = [mpf(k) / 4 for k in range(-20, 21)]
    signs = [score(g) > 0 for g in grid]
    turns = [k for k in range(40) if signs[k] and not signs[k + 1]]
    assert len(turns) == 1, "one maximum"
    return root(score, grid[turns[0]], grid[turns[0] + 1])


def estimate(kind, xs, design, w):
    """The arguments, and the values taken through."""
    if kind == "center":
        m = mean(xs)
        return [m], [x - m for x in xs]
    if kind == "z_score":
        m = mean(xs)
        sd = sqrt(fsum((x - m) ** 2 for x in xs) / (len(xs) - 1))
        return [m, sd], [(x - m) / sd for x in xs]
    if kind == "rescale":
        low, high = min(xs), max(xs)
        return [low, high], [(x - low) / (high - low) for x in xs]
    if kind == "log_offset auto":
        def skewness(t):
            logs = [log(x - min(xs) + exp(t)) for x in xs]
            m = mean(logs)
            return fsum((y - m) ** 3 for y in logs) / fsum((y - m) ** 2 for y in logs) ** mpf(1.5)
        offset = exp(root(skewness, mpf(-20), mpf(20))) - min(xs)
        return [offset], [log(x + offset) for x in xs]
    lam = lam_of(kind, xs, design, w)
    return [lam], powers(kind, xs, lam)[0]


out = {}
for name, model in MODELS.items():
    print(name, file=sys.stderr)
    with open(os.path.join(HERE, model["file"])) as file:
        rows = list(csv.DictReader(file))
    n = len(rows)
    ones = [mpf(1)] * n
    w = [mpf(float(r[model["weight"]])) for r in rows] if "weight" in model else ones
    arguments = []
    design = [[mpf(1)] for _ in rows]
    for column, kind in model["columns"][1:]:
        if kind == "category":
            levels = sorted({r[column] for r in rows}, key=lambda t: t.encode())
            count = {level: sum(r[column] == level for r in rows) for level in levels}
            reference = max(levels, key=lambda level: count[level])
            for d, r in zip(design, rows):
                d += [mpf(r[column] == level) for level in levels if level != reference]
            arguments.append([])
            continue
        found, z = estimate(kind, [mpf(float(r[column])) for r in rows], [[mpf(1)]] * n, ones)
        arguments.append(found)
        for d, zk in zip(design, z):
            d.append(zk)
    column, kind = model["columns"][0]
    found, z = estimate(kind, [mpf(float(r[column])) for r in rows], design, w)
    arguments.insert(0, found)
    out[name] = {**model, "arguments": [[float(a) for a in list_] for list_ in arguments],
                 "coefficients": [float(b) for b in solve(design, z, w)]}

json.dump({"about": "Written by tests/reference/estimates.py at 80 digits.",
           "mpmath": mpmath.__version__, "models": out}, sys.stdout, indent=1)
print()
