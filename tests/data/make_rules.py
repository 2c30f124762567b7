"""Gauss-Legendre rules on [0, 1] for 1 to 8 points.

Writes `gauss_legendre.json` beside this script, with numpy (made with 2.4.6). Each rule is checked
to integrate every power that it must, up to 2 n - 1.
"""

import pathlib
import sys

import numpy as np

sys.dont_write_bytecode = True
import compact_json  # noqa: E402

HERE = pathlib.Path(__file__).parent


def rule(n_points):
    nodes, weights = np.polynomial.legendre.leggauss(n_points)
    nodes, weights = (1 + nodes) / 2, weights / 2
    for power in range(2 * n_points):
        assert abs(weights @ nodes**power - 1 / (power + 1)) < 1e-15
    return {"n_points": n_points, "nodes": nodes, "weights": weights}


def main():
    head = {"made_by": f"make_rules.py, numpy {np.__version__}"}
    rules = [rule(n_points) for n_points in range(1, 9)]
    compact_json.write(HERE / "gauss_legendre.json", head | {"rules": rules})


if __name__ == "__main__":
    main()
