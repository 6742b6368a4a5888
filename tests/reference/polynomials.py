"""Exact polynomials: coefficients of raw powers and their standard errors, from rational arithmetic.

Made-up responses, x far from 0 or of high degree, where no double precision program can help.
Run in tests/reference: python3 polynomials.py > polynomials.json
"""
import json
import platform
from fractions import Fraction

import mpmath

mpmath.mp.dps = 60


def solve(x, y, degree, intercept=True):
    """Least squares by normal equations in rationals."""
    powers = range(0 if intercept else 1, degree + 1)
    rows = [[Fraction(v) ** k for k in powers] for v in x]
    y = [Fraction(v) for v in y]
    n = len(rows[0])
    a = [[sum(r[i] * r[j] for r in rows) for j in range(n)] for i in range(n)]
    # Inverse by Gauss-Jordan.
    m = [row + [Fraction(int(i == j)) for j in range(n)] for i, row in enumerate(a)]
    for i in range(n):
        pivot = m[i][i]
        m[i] = [v / pivot for v in m[i]]
        for k in range(n):
            if k != i and m[k][i]:
                f = m[k][i]
                m[k] = [u - f * v for u, v in zip(m[k], m[i])]
    inverse = [row[n:] for row in m]
    b = [sum(r[i] * v for r, v in zip(rows, y)) for i in range(n)]
    beta = [sum(inverse[i][j] * b[j] for j in range(n)) for i in range(n)]
    rss = sum((v - sum(p * q for p, q in zip(r, beta))) ** 2 for r, v in zip(rows, y))
    s2 = rss / (len(x) - n)

    def number(q, root=False):
        value = mpmath.mpf(q.numerator) / q.denominator
        return float(mpmath.sqrt(value) if root else value)

    return {
        "coefficients": [number(v) for v in beta],
        "standard_errors": [number(s2 * inverse[i][i], True) for i in range(n)],
        "residual_sd": number(s2, True),
    }


def case(x, degree, intercept=True):
    y = [((i * 37) % 23) / 4 + v / 8 for i, v in enumerate(x)]
    return {"x": x, "y": y, "degree": degree, "intercept": intercept,
            **solve(x, y, degree, intercept)}


print(json.dumps({
    "source": f"polynomials.py; Python {platform.python_version()}, fractions; "
              f"mpmath {mpmath.__version__}",
    "cases": {
        "years": case([1990 + i / 2 for i in range(60)], 6),
        "far": case([100000 + i for i in range(40)], 5),
        "high": case([i / 4 - 6 for i in range(90)], 20),
        "origin": case([1 + i / 8 for i in range(50)], 4, False),
        "tiny": case([(3 + i) * 2.0 ** -60 for i in range(30)], 3),
    }}, indent=1))
