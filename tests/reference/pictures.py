"""Histograms by NumPy and normal scores by mpmath, for the pictures of a column, written to
pictures.json beside this file. Run: python3 tests/reference/pictures.py"""
import csv
import json
import os

import mpmath as mp
import numpy as np

mp.mp.dps = 40
HERE = os.path.dirname(os.path.abspath(__file__))
FILES = [("nist/PiDigits.csv", "y"), ("nist/Lottery.csv", "y"), ("nist/Lew.csv", "y"), ("nist/Michelso.csv", "y"),
         ("nist/NumAcc4.csv", "y"), ("boxcox/trees.csv", "Volume"), ("boxcox/ornstein.csv", "interlocks"),
         ("boxcox/journals.csv", "price"), ("boxcox/poisons.csv", "time")]


def column(file, name):
    with open(os.path.join(HERE, file)) as lines:
        return np.array([float(row[name]) for row in csv.DictReader(lines)])


histograms = []
for file, name in FILES:
    x = column(file, name)
    counts = {str(bins): np.histogram(x, bins)[0].tolist() for bins in (1, 7, 20)}
    quarter, three_quarters = np.percentile(x, [25, 75])
    width = 2 * (three_quarters - quarter) / len(x) ** (1 / 3)
    histograms.append({"file": file, "column": name, "freedman_diaconis_width": width, "counts": counts})

scores = []
for n in (1, 2, 3, 10, 31, 1000, 10 ** 6):
    for rank in sorted({1, 2, (n + 1) // 2, n} & set(range(1, n + 1))):
        p = (rank - mp.mpf(3) / 8) / (n + mp.mpf(1) / 4)
        scores.append([rank, n, float(mp.sqrt(2) * mp.erfinv(2 * p - 1))])

with open(os.path.join(HERE, "pictures.json"), "w") as out:
    rows = lambda items: "[\n" + ",\n".join("  " + json.dumps(item) for item in items) + "]"
    out.write('{\n "about": "tests/reference/pictures.py: NumPy %s histogram and percentile; [rank, n, normal score] by '
              'mpmath %s at 40 digits",\n "histograms": %s,\n "normal_scores": %s\n}\n'
              % (np.__version__, mp.__version__, rows(histograms), rows(scores)))
