"""How many evaluations covariance matrix adaptation takes to reach a cost.

Writes `searches.json` beside this script, with cma (made with 4.5.0): Rosenbrock's function and a
rotated ellipsoid of ten numbers, each from 15 starts, defaults throughout but for the seed and for
stopping at the target alone. The counts are of whole generations. Then the constants that it takes
for granted, but for those of the step's path, where it departs from the tutorial.
"""

import pathlib
import statistics
import sys

import cma
import numpy as np

sys.dont_write_bytecode = True
import compact_json  # noqa: E402

HERE = pathlib.Path(__file__).parent
SEED = 61_604
N = 10
N_STARTS = 15
TARGET = 1e-8
CONDITION = 1e6


def rosenbrock(x):
    return float(np.sum(100.0 * (x[:-1] ** 2 - x[1:]) ** 2 + (x[:-1] - 1.0) ** 2))


def ellipsoid(rotation):
    factors = CONDITION ** (np.arange(N) / (N - 1))
    return lambda x: float(np.sum(factors * (rotation @ x) ** 2))


def evaluations(function, start, sigma, seed):
    options = {"seed": seed, "ftarget": TARGET, "maxfevals": 100_000, "verbose": -9}
    options |= {"tolfun": 0, "tolfunhist": 0, "tolx": 0, "tolstagnation": 10**6}
    search = cma.CMAEvolutionStrategy(start, sigma, options)
    while not search.stop():
        candidates = search.ask()
        search.tell(candidates, [function(candidate) for candidate in candidates])
    return search.result.evaluations if search.result.fbest <= TARGET else None


def case(name, function, starts, sigma):
    counts = [
        evaluations(function, start, sigma, seed + 1) for seed, start in enumerate(starts)
    ]
    reached = [np.inf if count is None else count for count in counts]
    print(name, sorted(reached), "median", statistics.median(reached))
    assert None not in counts
    return {
        "name": name,
        "sigma": sigma,
        "evaluations": counts,
        "median_evaluations": statistics.median(reached),
        "starts": starts,
    }


def constants(n):
    search = cma.CMAEvolutionStrategy([0.0] * n, 1.0, {"verbose": -9})
    candidates = search.ask()
    # The negative weights are made when they are first used.
    search.tell(candidates, [float(candidate @ candidate) for candidate in candidates])
    settings = search.sp
    return {
        "n": n,
        "population": settings.popsize,
        "parents_worth": settings.weights.mueff,
        "path_rate": settings.cc,
        "rank_one_rate": settings.c1,
        "rank_many_rate": settings.cmu,
        "weights": list(settings.weights),
    }


def main():
    rng = np.random.default_rng(SEED)
    rotation, _ = np.linalg.qr(rng.normal(size=(N, N)))
    assert np.abs(rotation @ rotation.T - np.eye(N)).max() < 1e-14
    near = rng.uniform(0.0, 0.5, (N_STARTS, N)).round(6)
    wide = rng.uniform(-2.0, 2.0, (N_STARTS, N)).round(6)
    keys = {
        "target": "cost to reach",
        "rotation": "rows of R; the ellipsoid is sum of condition^(i / (n - 1)) (R x)_i^2, i from 0",
        "sigma": "first standard deviation, in x",
        "evaluations": "until the end of the generation that reaches the target, for each start",
        "constants": "mu_eff, c_c, c_1, c_mu and all weights, best first",
    }
    head = {"made_by": f"make_searches.py, cma {cma.__version__}, seed {SEED}", "keys": keys}
    cases = [
        case("rosenbrock", rosenbrock, near, 0.2),
        case("ellipsoid", ellipsoid(rotation), wide, 1.0),
    ]
    data = {"target": TARGET, "condition": CONDITION, "rotation": rotation, "cases": cases}
    data["constants"] = [constants(n) for n in (2, 3, 10, 30)]
    compact_json.write(HERE / "searches.json", head | data)


if __name__ == "__main__":
    main()
