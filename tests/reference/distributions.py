"""Tails of the normal, t, F and chi-squared laws at 60 digits, by mpmath's incomplete gamma and beta
functions (a method the product does not use). Run: python3 distributions.py > distributions.json"""
import json
import mpmath as mp

mp.mp.dps = 60


def beta_tail(a, b, x):
    """Regularised incomplete beta I_x(a, b) by its hypergeometric series, x given exactly."""
    front = mp.power(x, a) * mp.power(1 - x, b) / (a * mp.beta(a, b))
    return front * mp.hyp2f1(a + b, 1, a + 1, x)


def normal(z):
    return mp.erfc(z / mp.sqrt(2)) / 2


def t(x, df):
    x, df = mp.mpf(x), mp.mpf(df)
    return beta_tail(df / 2, mp.mpf(1) / 2, df / (df + x * x)) / 2


def f(x, d1, d2):
    x, d1, d2 = mp.mpf(x), mp.mpf(d1), mp.mpf(d2)
    return beta_tail(d2 / 2, d1 / 2, d2 / (d2 + d1 * x))


def chi_square(x, df):
    return mp.gammainc(mp.mpf(df) / 2, mp.mpf(x) / 2, mp.inf, regularized=True)


def text(v):
    return mp.nstr(v, 25)


out = {
    "about": "tests/reference/distributions.py, mpmath %s, 60 digits: upper tails, 25 digits kept"
    % mp.__version__,
    "normal": [[z, text(normal(mp.mpf(z)))] for z in
               [0.0, 0.125, 1.0, 1.959963984540054, 3.5, 8.0, 20.0, 37.0]],
    "t": [[x, df, text(t(x, df))] for df in [1.0, 2.5, 4.0, 30.0, 1000.0, 1e6]
          for x in [0.0625, 1.0, 2.0, 12.5, 35.0, 1e3, 1e20] if t(x, df) > mp.mpf("1e-300")],
    "f": [[x, d1, d2, text(f(x, d1, d2))] for d1, d2 in
          [(1.0, 5.0), (2.0, 40.0), (6.0, 9.0), (11.0, 988.0), (3.0, 1e6)]
          for x in [0.125, 1.0, 4.5, 60.0, 330285.34259, 1e12]
          if f(x, d1, d2) > mp.mpf("1e-300")],
    "chi_square": [[x, df, text(chi_square(x, df))] for df in [1.0, 2.0, 7.5, 100.0]
                   for x in [0.0625, 1.0, 30.0, 150.0, 1300.0]],
}
print(json.dumps(out, indent=1))
