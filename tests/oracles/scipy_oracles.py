"""Writes the answers of SciPy that tests/tracking/scipy-oracles compares with: tests/fixtures/scipy/*.json.

Run it with Debian's python3-scipy after changing a case:  /usr/bin/python3 tests/oracles/scipy_oracles.py
"""

import json
from pathlib import Path

import numpy as np
import scipy
from scipy import ndimage, optimize, stats
from scipy.interpolate import PchipInterpolator
from scipy.special import ndtr

SEED = 20240607
FOLDER = Path(__file__).resolve().parent.parent / "fixtures" / "scipy"


# Sigma, width, height. Vectors take four pixels, so widths of every remainder, and images smaller than the kernel.
FILTER_SIZES = [(0.7, 17, 12), (1.2, 24, 19), (2.0, 31, 9), (1.2, 40, 1), (1.5, 4, 3)]
FILTER_SIZES += [(1.2, 33, 21), (1.0, 1, 37), (1.8, 22, 8), (3.0, 12, 25), (1.2, 1, 1)]
# Width, height, level, digits: few digits make ties.
PEAK_SIZES = [(24, 18, -1.0, 3), (31, 17, 0.0, 0), (33, 20, 0.5, 1), (40, 1, 0.0, 0), (1, 29, -0.5, 1), (2, 2, -9.0, 0)]
PEAK_SIZES += [(5, 3, 0.0, 0), (18, 26, 1.0, 1), (64, 9, 9.0, 1), (1, 1, -9.0, 0)]


def write(name, cases):
    made_with = {"scipy": scipy.__version__, "numpy": np.__version__, "seed": SEED}
    text = json.dumps({"madeWith": made_with, "cases": cases}, separators=(",", ":"))
    (FOLDER / f"{name}.json").write_text(text + "\n")


def rounded(values, digits=9):
    return [float(f"{v:.{digits}g}") for v in np.ravel(values)]


def filters(random):
    """Matched filter: pixel-integrated Gaussian cut at ceil(3 sigma), zeros outside, noise 1 at the border too."""
    cases = []
    for sigma, width, height in FILTER_SIZES:
        noise = np.round(random.normal(size=(height, width)), 3)
        reach = max(2, int(np.ceil(3 * sigma)))
        k = np.arange(-reach, reach + 1)
        weight = ndtr((k + 0.5) / sigma) - ndtr((k - 0.5) / sigma)
        weight /= np.sqrt(np.sum(weight**2))
        response = noise
        for axis in (0, 1):
            squares = ndimage.correlate1d(np.ones_like(noise), weight**2, axis, mode="constant", cval=0.0)
            response = ndimage.correlate1d(response, weight, axis, mode="constant", cval=0.0) / np.sqrt(squares)
        # A Gaussian over pixels is nearly a sampled one that is wider by the variance of a pixel, 1/12.
        wide = np.sqrt(sigma**2 + 1 / 12)
        sampled = np.exp(-0.5 * (k / wide) ** 2)
        sampled /= sampled.sum()
        smooth = ndimage.gaussian_filter(noise, wide, mode="constant", cval=0.0, truncate=(reach + 0.25) / wide)
        cases.append(
            {
                "sigmaPx": sigma,
                "width": width,
                "height": height,
                "noise": rounded(noise),
                "response": rounded(response),
                "gaussian": rounded(smooth / np.sum(sampled**2)),
                "reach": reach,
            }
        )
    return cases


def peaks(random):
    """Maxima of 3 x 3 pixels; of equal neighbours the first in reading order: earlier ones must be smaller."""
    earlier = np.array([[1, 1, 1], [1, 0, 0], [0, 0, 0]], dtype=bool)
    cases = []
    for width, height, level, digits in PEAK_SIZES:
        image = np.round(random.normal(size=(height, width)), digits) + 0.0

        def most(footprint):
            return ndimage.maximum_filter(image, footprint=footprint, mode="constant", cval=-np.inf)

        top = (image > most(earlier)) & (image >= most(earlier[::-1, ::-1])) & (image >= level)
        cases.append(
            {
                "width": width,
                "height": height,
                "level": level,
                "image": image.ravel().tolist(),
                "at": np.flatnonzero(top).tolist(),
            }
        )
    return cases


def assignment(random):
    """Rows may stay alone at cost 0: each has a column of its own beside the shared ones."""
    cases = []
    shapes = [(int(random.integers(1, 11)), int(random.integers(1, 11))) for _ in range(300)]
    for trial, (rows, columns) in enumerate(shapes + [(60, 45), (45, 60), (50, 50)]):
        cost = np.round(random.uniform(-5, 3, size=(rows, columns)), 2)
        if trial % 3 == 1:
            cost = np.round(cost)
        if trial % 10 == 2:
            cost[:] = cost[0, 0]
        forbidden = random.uniform(size=cost.shape) < random.choice([0.0, 0.3, 0.7, 0.95, 1.0])
        cost[forbidden] = np.inf
        alone = np.full((rows, rows), np.inf)
        np.fill_diagonal(alone, 0.0)
        table = np.hstack([cost, alone])
        row, column = optimize.linear_sum_assignment(table)
        entries = [[int(i), int(j), float(cost[i, j])] for i, j in zip(*np.nonzero(~forbidden))]
        total = round(float(table[row, column].sum()), 6)
        cases.append({"rows": rows, "columns": columns, "entries": entries, "total": total})
    return cases


def uniforms(seed):
    """The numbers that `createRandom(seed).uniform` of tracking/random.ts gives, so that cases need not be stored."""
    state = seed
    while True:
        state = (state + 0x6D2B79F5) & 0xFFFFFFFF
        t = ((state ^ (state >> 15)) * (1 | state)) & 0xFFFFFFFF
        t = ((t + (((t ^ (t >> 7)) * (61 | t)) & 0xFFFFFFFF)) & 0xFFFFFFFF) ^ t
        yield (t ^ (t >> 14)) / 4294967296


def drawn_assignments(trials=4000):
    """Least totals only; tests/helpers/drawn-assignment.ts draws the same tables."""
    totals = []
    for trial in range(trials):
        draw = uniforms(SEED + trial)
        rows, columns = 1 + int(12 * next(draw)), 1 + int(12 * next(draw))
        allowed = 0.05 + 0.95 * next(draw)
        steps = (1, 3, 10, 1000)[trial % 4]
        table = np.full((rows, columns + rows), np.inf)
        table[np.arange(rows), columns + np.arange(rows)] = 0.0
        for i in range(rows):
            for j in range(columns):
                cost = int(steps * next(draw)) - steps // 2 - 1
                if next(draw) < allowed:
                    table[i, j] = cost
        row, column = optimize.linear_sum_assignment(table)
        totals.append(int(table[row, column].sum()))
    return totals


def tails():
    chi2 = [
        [x, k, float(stats.chi2.sf(x, k))]
        for k in (1, 2, 3, 4, 5, 8, 15, 30, 61)
        for x in (0.01, 0.5, 1.0, 3.84, 8.1, 20.0, 45.0, 90.0)
    ]
    poisson = [
        [mu, n, float(stats.poisson.sf(n - 1, mu))]
        for mu in (0.01, 0.3, 1.0, 4.5, 20.0, 80.0)
        for n in (0, 1, 2, 5, 12, 40, 100)
    ]
    return {"chi2": chi2, "poisson": poisson}


def pchip(random):
    cases = []
    for trial in range(12):
        n = int(random.integers(3, 12))
        x = np.cumsum(random.uniform(0.05, 2, size=n))
        y = random.normal(size=n)
        if trial % 3 == 0:
            y = np.cumsum(np.abs(y))
        if trial % 4 == 1:
            y = np.round(y)
        x, y = np.round(x, 4), np.round(y, 4)
        at = np.round(np.concatenate([x, random.uniform(x[0], x[-1], size=15)]), 6)
        at = np.clip(at, x[0], x[-1])
        cases.append(
            {"x": x.tolist(), "y": y.tolist(), "at": at.tolist(), "value": PchipInterpolator(x, y)(at).tolist()}
        )
    return cases


def wilson():
    cases = []
    for k, n in [(0, 1), (1, 1), (0, 10), (3, 10), (10, 10), (17, 40), (1, 1000), (999, 1000), (5000, 10000)]:
        interval = stats.binomtest(k, n).proportion_ci(confidence_level=0.95, method="wilson")
        cases.append([k, n, float(interval.low), float(interval.high)])
    return cases


def robust(random):
    cases = []
    for n in (1, 2, 5, 8, 33, 100):
        values = np.round(random.standard_t(3, size=n), 4)
        scale = float(stats.median_abs_deviation(values, scale="normal"))
        p = [0.0, 0.025, 0.31, 0.5, 0.841, 1.0]
        cases.append(
            {
                "values": values.tolist(),
                "median": float(np.median(values)),
                "madScale": scale,
                "p": p,
                "quantiles": np.quantile(values, p, method="linear").tolist(),
            }
        )
    return cases


def least_squares(random):
    cases = []
    for rows, columns in [(5, 2), (8, 3), (12, 1), (20, 3), (9, 2)] * 6:
        a = np.round(random.normal(size=(rows, columns)), 3)
        b = np.round(random.normal(size=rows) + a @ np.abs(random.normal(size=columns)), 3)
        x, residual = optimize.nnls(a, b)
        cases.append({"a": a.tolist(), "b": b.tolist(), "x": x.tolist(), "residual": float(residual)})
    return cases


def kernel_densities(random):
    """Gaussian kernels of one width (Silverman 1986, eq. 3.31), and of widths that follow a first estimate (Abramson)."""
    cases = []
    bodies = [random.normal(size=250), random.standard_t(2, size=400), np.hypot(*random.normal(size=(2, 300)))]
    bodies.append(np.concatenate([random.normal(-3, 0.5, size=150), random.normal(2, 1, size=150)]))
    for trial, body in enumerate(bodies):
        values = np.round(body, 4)
        is_speed = trial == 2
        quartiles = np.subtract(*np.quantile(values, [0.75, 0.25]))
        scale = min(values.std(ddof=1), quartiles / 1.34)
        width = 0.9 * scale * len(values) ** -0.2
        # What lies behind a wall at 0 is laid over what is before it.
        sides = np.concatenate([values, -values]) if is_speed else values
        parts = 2 if is_speed else 1
        first = stats.gaussian_kde(sides, bw_method=width / sides.std(ddof=1))
        pilot = parts * first(values)
        widths = width * np.sqrt(stats.gmean(pilot) / pilot)
        low, high = (0, 1.1 * values.max()) if is_speed else np.quantile(values, [0.005, 0.995])
        at = np.round(np.linspace(low, high, 41), 4)
        adapted = parts * stats.norm.pdf(at[:, None], sides, np.tile(widths, parts)).mean(axis=1)
        cases.append(
            {
                "isSpeed": is_speed,
                "values": values.tolist(),
                "scale": float(scale),
                "width": float(width),
                "at": at.tolist(),
                "even": rounded(parts * first(at)),
                "adapted": rounded(adapted),
            }
        )
    return cases


def main():
    FOLDER.mkdir(parents=True, exist_ok=True)
    # A stream each: a change of one set of cases leaves the others as they are.
    streams = [np.random.default_rng([SEED, i]) for i in range(7)]
    write("filters", filters(streams[0]))
    write("assignment", assignment(streams[1]))
    write("drawn-assignments", drawn_assignments())
    write("tails", tails())
    write("pchip", pchip(streams[2]))
    write("wilson", wilson())
    write("robust", robust(streams[3]))
    write("non-negative-least-squares", least_squares(streams[4]))
    write("peaks", peaks(streams[5]))
    write("kernel-densities", kernel_densities(streams[6]))


main()
