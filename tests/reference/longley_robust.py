"""Robust and cluster standard errors on Longley's data (nist/Longley.csv) from the normal equations at 60 digits, where
the libraries' sandwich, formed in doubles, keeps 8 digits. Run from tests/reference:
python3 longley_robust.py > longley_robust.json"""
import csv
import json
import mpmath as mp

mp.mp.dps = 60
rows = list(csv.DictReader(open("nist/Longley.csv")))
x = mp.matrix([[1] + [mp.mpf(r["x%d" % j]) for j in range(1, 7)] for r in rows])
y = mp.matrix([mp.mpf(r["y"]) for r in rows])
n, k = x.rows, x.cols
bread = (x.T * x) ** -1
b = bread * (x.T * y)
e = y - x * b
h = [(x[i, :] * bread * x[i, :].T)[0] for i in range(n)]


def errors(weight):
    meat = mp.zeros(k, k)
    for i in range(n):
        meat += weight(e[i], h[i]) * (x[i, :].T * x[i, :])
    v = bread * meat * bread
    return [mp.nstr(mp.sqrt(v[j, j]), 20) for j in range(k)]


def cluster_errors(of_row):
    """CR1: G/(G-1) (n-1)/(n-k)."""
    names = sorted(set(of_row))
    meat = mp.zeros(k, k)
    for name in names:
        score = mp.zeros(1, k)
        for i in range(n):
            if of_row[i] == name:
                score += e[i] * x[i, :]
        meat += score.T * score
    groups = len(names)
    v = bread * meat * bread * groups / (groups - 1) * (n - 1) / (n - k)
    return [mp.nstr(mp.sqrt(v[j, j]), 20) for j in range(k)]


print(json.dumps({
    "about": "tests/reference/longley_robust.py, mpmath %s, 60 digits" % mp.__version__,
    "hc0": errors(lambda r, l: r ** 2),
    "hc1": errors(lambda r, l: r ** 2 * mp.mpf(n) / (n - k)),
    "hc2": errors(lambda r, l: r ** 2 / (1 - l)),
    "hc3": errors(lambda r, l: r ** 2 / (1 - l) ** 2),
    "cluster": cluster_errors([int(r["x6"]) // 3 for r in rows]),  # three years each
}, indent=1))
