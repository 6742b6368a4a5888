#!/usr/bin/env python3
"""Writes tests/reference/scans.json: figures of re-expressed columns and of residuals.

  python3 tests/reference/scans.py > tests/reference/scans.json

NumPy's least squares, SciPy's bias-corrected skewness and kurtosis, the correlation with
norm.ppf((i - 3/8)/(n + 1/4)), statsmodels' normal_ad and het_breuschpagan, and log-likelihoods on
the original scale with the Jacobian of each formula. Versions are in the file.
"""
import csv
import json
import os

import numpy as np
import scipy
import statsmodels
from scipy import stats
from statsmodels.stats.diagnostic import het_breuschpagan, normal_ad

HERE = os.path.dirname(os.path.abspath(__file__))

# Of each spec: where it is defined, its value, and the logarithm of its slope.
SPECS = {
    "identity": (lambda x: x == x, lambda x: x, lambda x: 0 * x),
    "power_of -2": (lambda x: x > 0, lambda x: x ** -2.0, lambda x: np.log(2 * x ** -3.0)),
    "negative_reciprocal": (lambda x: x != 0, lambda x: -1 / x, lambda x: -2 * np.log(abs(x))),
    "power_of -0.5": (lambda x: x > 0, lambda x: x ** -0.5, lambda x: np.log(0.5 * x ** -1.5)),
    "log_offset": (lambda x: x > 0, np.log, lambda x: -np.log(x)),
    "power_of 0.3333333333333333": (lambda x: x >= 0, np.cbrt,
                                    lambda x: -np.log(3) - 2 / 3 * np.log(x)),
    "sqrt_offset": (lambda x: x >= 0, np.sqrt, lambda x: -np.log(2) - np.log(x) / 2),
    "square": (lambda x: x >= 0, lambda x: x * x, lambda x: np.log(2 * x)),
    "power_of 3": (lambda x: x >= 0, lambda x: x ** 3, lambda x: np.log(3 * x * x)),
    "log_offset 1": (lambda x: x > -1, np.log1p, lambda x: -np.log1p(x)),
    "sqrt_offset 0.375": (lambda x: x >= -0.375, lambda x: np.sqrt(x + 0.375),
                          lambda x: -np.log(2 * np.sqrt(x + 0.375))),
    "logit 0 100": (lambda x: (x > 0) & (x < 100), lambda x: np.log(x / (100 - x)),
                    lambda x: np.log(100 / (x * (100 - x)))),
}


def number(x):
    return float(x) if np.isfinite(x) else None


def figures(y, x, w, spec):
    inside, value, log_slope = SPECS[spec]
    keep = inside(y)
    y, x, w = y[keep], x[keep], w[keep]
    n = len(y)
    z = value(y)
    root = np.sqrt(w)
    design = np.column_stack([np.ones(n), x])
    scale = np.abs(design).max(axis=0)
    b = np.linalg.lstsq(design / scale * root[:, None], z * root, rcond=None)[0]
    e = root * (z - design / scale @ b)
    with np.errstate(divide="ignore"):
        jacobian = log_slope(y).sum()
    likelihood = (-n / 2 * (1 + np.log(2 * np.pi)) - n / 2 * np.log((e ** 2).sum() / n) +
                  np.log(w).sum() / 2 + jacobian)
    scores = stats.norm.ppf((np.arange(1, n + 1) - 0.375) / (n + 0.25))
    return {"rows_used": n, "rows_outside": int((~keep).sum()),
            "skewness": number(stats.skew(e, bias=False)),
            "excess_kurtosis": number(stats.kurtosis(e, bias=False)),
            "normal_correlation": number(np.corrcoef(np.sort(e), scores)[0, 1]),
            "normal_p": number(normal_ad(e)[1]),
            "log_likelihood": number(likelihood),
            "aic": number(2 * (design.shape[1] + 1) - 2 * likelihood) if keep.all() else None,
            "funnel_p": number(het_breuschpagan(e, design / scale)[1]) if x.size else None}


def read(path, name):
    with open(os.path.join(HERE, path)) as file:
        return np.array([float(row[name]) for row in csv.DictReader(file)])


def case(file, response, predictors, specs, weight=None):
    y = read(file, response)
    x = np.column_stack([read(file, p) for p in predictors]) if predictors else np.zeros((len(y), 0))
    w = read(file, weight) if weight else np.ones(len(y))
    return {"file": file, "response": response, "predictors": predictors, "weight": weight,
            "candidates": {spec: figures(y, x, w, spec) for spec in specs}}


POWERS = [spec for spec in SPECS if " 1" not in spec and "0.375" not in spec and "100" not in spec]
COUNTS = POWERS + ["log_offset 1", "sqrt_offset 0.375"]
CASES = [
    case("boxcox/trees.csv", "Volume", [], POWERS + ["logit 0 100"]),
    case("boxcox/trees.csv", "Volume", ["Height"], POWERS, weight="Girth"),
    case("boxcox/wool.csv", "cycles", ["len", "amp", "load"], COUNTS),
    case("boxcox/ornstein.csv", "interlocks", [], COUNTS),
    case("boxcox/ornstein.csv", "interlocks", ["assets"], COUNTS),
    case("boxcox/cuyahoga_tds.csv", "TDS", ["Q"], POWERS),
]
print(json.dumps({"source": __doc__.split("\n")[0], "script": "scans.py", "numpy": np.__version__,
                  "scipy": scipy.__version__, "statsmodels": statsmodels.__version__,
                  "cases": CASES}, indent=1))
