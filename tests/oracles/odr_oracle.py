"""Writes tests/fixtures/scipy/odr.json: straight lines with errors in both coordinates by scipy.odr.

Run it with Debian's python3-scipy after changing a case:  /usr/bin/python3 tests/oracles/odr_oracle.py
"""

import json
from pathlib import Path

import numpy as np
import scipy
from scipy import odr

SEED = 20240611
PATH = Path(__file__).resolve().parent.parent / "fixtures" / "scipy" / "odr.json"


def case(random, points):
    x = np.sort(random.uniform(1, 10, points))
    slope, intercept = random.normal(2, 1), random.normal(-3, 2)
    sx = random.uniform(0.05, 0.4, points)
    sy = random.uniform(0.1, 1.0, points)
    seen_x = np.round(x + sx * random.normal(size=points), 6)
    seen_y = np.round(intercept + slope * x + sy * random.normal(size=points), 6)
    sx, sy = np.round(sx, 6), np.round(sy, 6)
    model = odr.Model(lambda beta, at: beta[0] + beta[1] * at)
    start = np.polyfit(seen_x, seen_y, 1)[::-1]
    result = odr.ODR(odr.RealData(seen_x, seen_y, sx=sx, sy=sy), model, beta0=start, sstol=1e-15, partol=1e-15).run()
    return {
        "x": seen_x.tolist(),
        "y": seen_y.tolist(),
        "sx": sx.tolist(),
        "sy": sy.tolist(),
        "intercept": result.beta[0],
        "slope": result.beta[1],
        "reducedChiSquare": result.res_var,
    }


def main():
    random = np.random.default_rng(SEED)
    cases = [case(random, points) for points in [3, 4, 5, 6, 8, 12, 20, 40] for _ in range(3)]
    made_with = {"scipy": scipy.__version__, "numpy": np.__version__, "seed": SEED}
    PATH.write_text(json.dumps({"madeWith": made_with, "cases": cases}, separators=(",", ":")) + "\n")


main()
