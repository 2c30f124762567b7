"""Section coefficients: monotone cubics in incidence, linear in ln Re.

Writes `sections.json` beside this script, with scipy (made with 1.17.1): PchipInterpolator over
incidence in degrees, one row of Reynolds number at a time. In radians the values are the same and
the slopes differ by the factor 180/pi, which is applied: slopes are per radian. Each row is first
continued past +-90 degrees by its mirror image: lift and moment odd about +-90, drag even. Then
values and slopes are linear in ln Re between rows and constant outside them.
"""

import pathlib
import sys

import numpy as np
import scipy
from scipy.interpolate import PchipInterpolator

sys.dont_write_bytecode = True
import compact_json  # noqa: E402

HERE = pathlib.Path(__file__).parent
SEED = 382_394
N_POINTS = 200
PARITY = {"lift": -1, "drag": 1, "moment": -1}

# Rows -10 to 60: Holden, Socha, Cardwell, Vlachos, J. Exp. Biol. 217:382-394, 2014, rounded to
# 0.01. The rest is an engineering completion without a source but its ends: broadside 2.05 after
# Hoerner's plates (Fluid-Dynamic Drag, 1965), 1.2 at -90 for the convex side of a half shell
# (Aeronautical Engineer's Data Book, fig. 5.13).
DOMED_REYNOLDS = [5000.0, 9000.0, 13000.0, 15000.0]
# Incidence in degrees, then C_l, C_d at each Reynolds number; one pair serves all where alone.
DOMED = """
-90   0    1.20
-60  -0.55 1.05
-45  -0.65 0.90
-30  -0.60 0.72
-20  -0.50 0.60
-10  -0.41 0.46  -0.54 0.53  -0.45 0.50  -0.54 0.54
-5   -0.59 0.37  -0.78 0.44  -0.73 0.42  -0.93 0.46
0    -0.66 0.34  -0.76 0.40  -0.75 0.39  -0.77 0.44
5    -0.53 0.32  -0.56 0.38  -0.46 0.41  -0.47 0.44
10    0.14 0.38   0.24 0.46   0.25 0.44   0.27 0.47
15    0.55 0.43   0.71 0.52   0.68 0.50   0.74 0.53
20    0.83 0.49   1.03 0.59   0.99 0.57   1.07 0.61
25    0.98 0.54   1.21 0.65   1.15 0.61   1.25 0.66
30    1.16 0.60   1.40 0.71   1.35 0.68   1.45 0.73
35    1.23 0.68   1.80 0.71   1.80 0.66   1.91 0.72
40    1.27 1.03   1.50 1.13   1.42 1.06   1.51 1.09
45    1.22 1.14   1.45 1.30   1.40 1.26   1.51 1.33
50    1.13 1.28   1.35 1.50   1.27 1.41   1.39 1.53
55    1.04 1.43   1.21 1.63   1.14 1.54   1.24 1.65
60    0.98 1.55   1.14 1.78   1.07 1.66   1.14 1.75
75    0.55 1.92
90    0    2.05
"""


def domed_rows():
    lines = [[float(word) for word in line.split()] for line in DOMED.strip().splitlines()]
    lines = [line if len(line) == 9 else line[:1] + 4 * line[1:] for line in lines]
    return [
        {
            "reynolds": reynolds,
            "alpha_deg": [line[0] for line in lines],
            "lift": [line[1 + 2 * k] for line in lines],
            "drag": [line[2 + 2 * k] for line in lines],
        }
        for k, reynolds in enumerate(DOMED_REYNOLDS)
    ]


def random_row(rng, reynolds, n_inner):
    """Irregular steps, and one flat piece, where the slope of lift must vanish."""
    steps = rng.uniform(2.0, 20.0, n_inner + 1)
    alpha_deg = np.round(-90 + 180 * np.cumsum(steps) / steps.sum(), 3)[:-1]
    lift = np.round(rng.uniform(-1.5, 1.5, n_inner), 3)
    drag = np.round(rng.uniform(0.05, 2.0, n_inner), 3)
    moment = np.round(rng.uniform(-0.3, 0.3, n_inner), 4)
    flat = rng.integers(n_inner - 1)
    lift[flat + 1] = lift[flat]
    return {
        "reynolds": reynolds,
        "alpha_deg": [-90.0, *alpha_deg, 90.0],
        "lift": [0.0, *lift, 0.0],
        "drag": [1.137, *drag, 1.963],
        "moment": [0.0, *moment, 0.0],
    }


def curve(row, name):
    """The row with its mirror images behind and ahead, interpolated."""
    alpha, value, sign = np.array(row["alpha_deg"]), np.array(row[name]), PARITY[name]
    mirrored = sign * value[::-1]
    whole_alpha = [(-180 - alpha[::-1])[:-1], alpha, (180 - alpha[::-1])[1:]]
    whole_value = [mirrored[:-1], value, mirrored[1:]]
    made = PchipInterpolator(np.concatenate(whole_alpha), np.concatenate(whole_value))
    check_curve(made, alpha, value, sign)
    return made


def check_curve(made, alpha, value, sign):
    """Knots are met, and the curve has its symmetry about both broadsides."""
    assert np.abs(made(alpha) - value).max() < 1e-14
    beyond = np.linspace(0.0, 60.0, 61)
    for broadside in (-90, 90):
        ahead, behind = made(broadside + beyond), made(broadside - beyond)
        assert np.abs(ahead - sign * behind).max() < 1e-12


def evaluate(rows, name, alpha_deg, reynolds):
    """Values, and slopes per radian."""
    curves = [curve(row, name) for row in rows]
    ln_rows = np.log([row["reynolds"] for row in rows])
    values, slopes = [], []
    for alpha, ln_reynolds in zip(alpha_deg, np.log(reynolds)):
        at_rows = [made(alpha) for made in curves]
        slope_at_rows = [made(alpha, 1) * 180 / np.pi for made in curves]
        # np.interp holds the end values outside.
        values.append(np.interp(ln_reynolds, ln_rows, at_rows))
        slopes.append(np.interp(ln_reynolds, ln_rows, slope_at_rows))
    return values, slopes


def points(rows, alpha_deg, reynolds):
    made = {"alpha_deg": alpha_deg, "reynolds": reynolds}
    for name in PARITY:
        if name in rows[0]:
            values, slopes = evaluate(rows, name, alpha_deg, reynolds)
            made |= {name: values, f"{name}_slope_per_rad": slopes}
    return made


def section(rng, rows, knot_reynolds):
    alpha_deg = np.round(rng.uniform(-90, 90, N_POINTS), 6)
    reynolds = np.round(np.exp(rng.uniform(np.log(3000), np.log(30000), N_POINTS)), 3)
    knots = sorted({alpha for row in rows for alpha in row["alpha_deg"]})
    at_knots = [np.repeat(knots, 2), np.tile(knot_reynolds, len(knots))]
    return {
        "rows": rows,
        "random_points": points(rows, alpha_deg, reynolds),
        "knot_points": points(rows, *at_knots),
    }


def main():
    rng = np.random.default_rng(SEED)
    domed = section(rng, domed_rows(), [9000.0, 14_200.0])
    random_rows = [
        random_row(rng, reynolds, n_inner)
        for reynolds, n_inner in [(4200.0, 9), (8700.0, 17), (21_000.0, 12)]
    ]
    keys = {
        "rows": "the table, one Reynolds number each: lift, drag, moment are C_l, C_d, C_m",
        "random_points": "alpha_deg and reynolds are inputs, the rest expected, column by column",
        "knot_points": "the same at every alpha_deg of the table, at two Reynolds numbers",
        "lift_slope_per_rad": "d(C_l)/d(alpha), per radian; drag and moment likewise",
    }
    head = {"made_by": f"make_sections.py, scipy {scipy.__version__}, seed {SEED}", "keys": keys}
    tables = {"domed": domed, "random": section(rng, random_rows, [8700.0, 15_500.0])}
    compact_json.write(HERE / "sections.json", head | tables)


if __name__ == "__main__":
    main()
