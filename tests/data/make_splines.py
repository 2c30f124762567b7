"""Periodic cubic splines through equally spaced rows.

Writes `splines.json` beside this script, with scipy (made with 1.17.1): CubicSpline with
bc_type="periodic". The last row of a table does not repeat the first; the period is rows x step.
Second derivatives at the rows are checked against the spline's own linear equations.
"""

import pathlib
import sys

import numpy as np
import scipy
from scipy.interpolate import CubicSpline

sys.dont_write_bytecode = True
import compact_json  # noqa: E402

HERE = pathlib.Path(__file__).parent
SEED = 52_064
N_TIMES = 50


def check_bends(spline, values, step_s):
    """b[i-1] + 4 b[i] + b[i+1] = 6 (y[i-1] - 2 y[i] + y[i+1]) / step^2, all around."""
    bends = spline(np.arange(len(values)) * step_s, 2)
    around = lambda y, middle: np.roll(y, 1) + middle * y + np.roll(y, -1)  # noqa: E731
    gap = around(bends, 4) - 6 * around(values, -2) / step_s**2
    assert np.abs(gap).max() < 1e-11 * np.abs(bends).max()


def table(rng, n_rows):
    step_s = round(rng.uniform(0.01, 0.1), 6)
    values = np.round(rng.uniform(-1.0, 1.0, n_rows), 6)
    period_s = n_rows * step_s
    spline = CubicSpline(
        np.arange(n_rows + 1) * step_s, np.append(values, values[0]), bc_type="periodic"
    )
    check_bends(spline, values, step_s)
    inside = rng.uniform(0.0, period_s, N_TIMES // 2)
    outside = rng.uniform(-2.0 * period_s, 3.0 * period_s, N_TIMES - N_TIMES // 2)
    times_s = np.round(np.concatenate([inside, outside]), 6)
    times_s = np.concatenate([times_s, [0.0, step_s, period_s, -period_s]])
    return {
        "step_s": step_s,
        "values": values,
        "times_s": times_s,
        "value": spline(times_s),
        "first_derivative_per_s": spline(times_s, 1),
        "second_derivative_per_s2": spline(times_s, 2),
    }


def main():
    rng = np.random.default_rng(SEED)
    keys = {
        "values": "at 0, step_s, 2 step_s ...; the period is as many steps as there are values",
        "times_s": f"{N_TIMES} random times, half of them within the first period, then 0, step_s,"
        " the period, less the period",
        "value": "expected at times_s, as are both derivatives",
    }
    head = {"made_by": f"make_splines.py, scipy {scipy.__version__}, seed {SEED}", "keys": keys}
    tables = [table(rng, n_rows) for n_rows in (5, 20, 64)]
    compact_json.write(HERE / "splines.json", head | {"tables": tables})


if __name__ == "__main__":
    main()
