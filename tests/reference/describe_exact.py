#!/usr/bin/python3
"""Moments in exact rational arithmetic of data as doubles, written to describe_exact.json.

Run: /usr/bin/python3 tests/reference/describe_exact.py   (Python 3.11, standard library alone)
Columns are read as doubles, everything after is exact but the roots, which have 60 digits.
"""
import csv
import json
import platform
from decimal import Decimal, getcontext
from fractions import Fraction
from pathlib import Path

getcontext().prec = 60
HERE = Path(__file__).parent


def column(file, name):
    with open(HERE / file) as handle:
        return [Fraction(float(row[name])) for row in csv.DictReader(handle)]



def root(fraction):
    return (Decimal(fraction.numerator) / Decimal(fraction.denominator)).sqrt()


def dec(fraction):
    return Decimal(fraction.numerator) / Decimal(fraction.denominator)


def text(decimal):
    return f"{decimal:.25e}"


def univariate(x):
    n = len(x)
    mean = sum(x) / n
    m2, m3, m4 = (sum((v - mean) ** k for v in x) for k in (2, 3, 4))
    figures = {"n": n, "sum": text(dec(sum(x))), "mean": text(dec(mean)),
               "var_pop": text(dec(m2 / n)), "var_samp": text(dec(m2 / (n - 1))),
               "stddev_pop": text(root(m2 / n)), "stddev_samp": text(root(m2 / (n - 1)))}
    g1 = dec(m3 / n) / (dec(m2 / n) * root(m2 / n))
    g2 = m4 * n / m2 ** 2 - 3
    figures["skewness_pop"] = text(g1)
    figures["skewness"] = text(g1 * Decimal(n * (n - 1)).sqrt() / (n - 2))
    figures["excess_kurtosis_pop"] = text(dec(g2))
    if n > 3:
        figures["excess_kurtosis"] = text(
            dec(((n + 1) * g2 + 6) * Fraction(n - 1, (n - 2) * (n - 3))))
    return figures


def bivariate(y, x):
    n = len(x)
    mean_y, mean_x = sum(y) / n, sum(x) / n
    syy = sum((v - mean_y) ** 2 for v in y)
    sxx = sum((v - mean_x) ** 2 for v in x)
    sxy = sum((v - mean_y) * (w - mean_x) for v, w in zip(y, x))
    slope = sxy / sxx
    return {"covar_pop": text(dec(sxy / n)), "covar_samp": text(dec(sxy / (n - 1))),
            "corr": text(dec(sxy) / root(sxx * syy)), "regr_slope": text(dec(slope)),
            "regr_intercept": text(dec(mean_y - slope * mean_x)),
            "regr_r2": text(dec(sxy ** 2 / (sxx * syy))), "regr_avgx": text(dec(mean_x)),
            "regr_avgy": text(dec(mean_y)), "regr_sxx": text(dec(sxx)),
            "regr_syy": text(dec(syy)), "regr_sxy": text(dec(sxy))}


UNIVARIATE = [f"nist/{name}.csv y" for name in (
    "PiDigits Lottery Lew Mavro Michelso NumAcc1 NumAcc2 NumAcc3 NumAcc4").split()] + [
    "boxcox/trees.csv Volume", "boxcox/ornstein.csv interlocks", "boxcox/journals.csv price"]
BIVARIATE = ["nist/Norris.csv y x", "nist/Longley.csv y x2", "nist/Longley.csv x5 x6",
             "boxcox/trees.csv Volume Girth", "boxcox/journals.csv price citations"]

result = {
    "about": f"tests/reference/describe_exact.py, Python {platform.python_version()}: exact "
             "rational arithmetic on the columns as doubles, 25 digits after the point",
    "univariate": {key: univariate(column(*key.split())) for key in UNIVARIATE},
    "bivariate": {key: bivariate(column(key.split()[0], key.split()[1]),
                                 column(key.split()[0], key.split()[2])) for key in BIVARIATE},
}
(HERE / "describe_exact.json").write_text(json.dumps(result, indent=1) + "\n")
