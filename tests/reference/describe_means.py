#!/usr/bin/python3
"""Geometric and harmonic means at 50 digits of columns as doubles, to describe_means.json.

Run: /usr/bin/python3 tests/reference/describe_means.py   (mpmath 1.2)
"""
import csv
import json
from pathlib import Path

import mpmath
from mpmath import mp, mpf

mp.dps = 50
HERE = Path(__file__).parent


def column(key):
    file, name = key.split()
    with open(HERE / file) as handle:
        return [mpf(float(row[name])) for row in csv.DictReader(handle)]


def means(x):
    n = len(x)
    return {"geometric_mean": mpmath.nstr(mpmath.exp(mpmath.fsum(mpmath.log(v) for v in x) / n), 25),
            "harmonic_mean": mpmath.nstr(n / mpmath.fsum(1 / v for v in x), 25)}


KEYS = ["nist/Lottery.csv y", "nist/Mavro.csv y", "nist/Michelso.csv y", "nist/NumAcc4.csv y",
        "boxcox/trees.csv Volume", "boxcox/journals.csv price", "boxcox/wool.csv cycles"]
# The ends of the range, where a product or a sum of reciprocals would overflow.
WIDE = [1e-300, 1e300, 2.5, 1e-12, 7e200]

result = {"about": f"tests/reference/describe_means.py, mpmath {mpmath.__version__}, 50 digits",
          "columns": {key: means(column(key)) for key in KEYS},
          "wide": {"rows": WIDE, **means([mpf(v) for v in WIDE])}}
(HERE / "describe_means.json").write_text(json.dumps(result, indent=1) + "\n")
