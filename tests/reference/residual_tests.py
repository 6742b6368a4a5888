"""Check values for White's and the Jarque-Bera test, by statsmodels, from open data.

Run in tests/reference: python3 residual_tests.py > residual_tests_statsmodels.json
Only models whose products do not repeat each other: het_white() judges the rank of raw products.
"""
import csv
import json

import numpy
import statsmodels
from statsmodels.api import OLS
from statsmodels.stats.diagnostic import het_breuschpagan, het_white
from statsmodels.stats.stattools import durbin_watson, jarque_bera


def columns(name):
    with open(f"boxcox/{name}.csv") as file:
        rows = list(csv.DictReader(file))
    return lambda column: numpy.array([float(row[column]) for row in rows])


def describe(y, *x):
    x = numpy.column_stack([numpy.ones(len(y)), *[c - c.mean() for c in x]])
    e = OLS(y, x).fit().resid
    white, white_p, _, _ = het_white(e, x)
    bp, bp_p, _, _ = het_breuschpagan(e, x)
    jb, jb_p, _, _ = jarque_bera(e)
    return {
        "breusch_pagan": [bp, x.shape[1] - 1, bp_p],
        "white": [white, (x.shape[1] * (x.shape[1] + 1)) // 2 - 1, white_p],
        "jarque_bera": [jb, 2, jb_p],
        "durbin_watson": durbin_watson(e),
    }


journals = columns("journals")
currency = columns("currencysubstitution")
bonds = columns("bondyield")
trees = columns("trees")
models = {
    "journals": describe(
        numpy.log(journals("subs")), numpy.log(journals("price") / journals("citations"))
    ),
    "currencysubstitution": describe(
        currency("logCUS"), currency("Iu") - currency("Ic"), currency("Ic"), currency("logY")
    ),
    "bondyield": describe(
        bonds("RAARUS"), bonds("MOOD"), bonds("EPI"), bonds("EXP"), bonds("RUS")
    ),
    "trees": describe(trees("Volume"), trees("Girth"), trees("Height")),
}
print(
    json.dumps(
        {
            "source": f"residual_tests.py; statsmodels {statsmodels.__version__}, "
            f"numpy {numpy.__version__}; tests are [statistic, df, p]",
            "models": models,
        },
        indent=1,
        default=float,
    )
)
