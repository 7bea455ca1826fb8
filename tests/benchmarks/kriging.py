"""Time kriging, mean and variance, against other programs on the same case.

Each runs in its own process, after a small warm-up; one JSON line each, then the ratios. Quote
ratios of one run only: seconds depend on the machine and on what else it does.

    python tests/benchmarks/kriging.py --wells 10000 --cells 1000000 --peer pykrige
    python tests/benchmarks/kriging.py --wells 2000 --cells 90000 --peer pykrige --peer gstlearn
    python tests/benchmarks/kriging.py --wells 2000 --cells 10000 --engine global \
        --peer pykrige-global --peer scikit-learn
"""

import argparse
import json
import time

import cases
import numpy as np

PEERS = (
    "pykrige",
    "pykrige-global",
    "gstlearn",
    "gstlearn-global",
    "gstools-global",
    "scikit-learn",
)


def main():
    """Measure ours and each peer in a child, or be that child."""
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("--wells", type=int, default=10_000)
    parser.add_argument("--cells", type=int, default=1_000_000)
    parser.add_argument("--peer", choices=PEERS, action="append", default=[])
    parser.add_argument("--peer-cells", type=int, help="fewer cells for slow peers")
    parser.add_argument("--engine", choices=("tiles", "global"), default="tiles")
    parser.add_argument("--nearest", type=int, default=20, help="wells every cell sees, tiles")
    parser.add_argument("--most", type=int, default=64, help="near wells a tile takes, tiles")
    parser.add_argument("--beyond", type=int, default=16, help="wells farther off, tiles")
    parser.add_argument("--window", type=int, default=60, help="wells a cell of moving peers")
    parser.add_argument("--measure", choices=("ours", *PEERS), help=argparse.SUPPRESS)
    given = parser.parse_args()
    if given.measure:
        print(json.dumps(measure(given)))
        return
    shared = [f"--{k}={getattr(given, k)}" for k in ("wells", "engine", "nearest", "most")]
    shared += [f"--beyond={given.beyond}", f"--window={given.window}"]
    ours = cases.child(__file__, [*shared, f"--cells={given.cells}", "--measure=ours"])
    for peer in given.peer:
        cells = given.peer_cells or given.cells
        theirs = cases.child(__file__, [*shared, f"--cells={cells}", f"--measure={peer}"])
        if "failed" not in {**ours, **theirs}:
            speed = theirs["us_per_cell"] / ours["us_per_cell"]
            memory = theirs["peak_mb"] / ours["peak_mb"]
            line = {"peer": peer, "times_faster": round(speed, 1), "memory": round(memory, 1)}
            print(json.dumps(line), flush=True)


def measure(given):
    """Krige the case and say what it took."""
    data, xy0 = cases.wells(given.wells), cases.places(given.cells)
    run = ours if given.measure == "ours" else peers()[given.measure]
    start = time.perf_counter()
    mean, variance, further, seconds = run(given, *data, xy0)
    seconds = seconds or time.perf_counter() - start
    return {
        "who": given.measure if given.measure != "ours" else given.engine,
        "wells": given.wells,
        "cells": len(xy0),
        "seconds": round(seconds, 3),
        "us_per_cell": round(seconds / len(xy0) * 1e6, 3),
        "peak_mb": cases.peak_mb(),
        **further,
        "mean_of_mean": float(np.mean(mean)),
        "mean_of_variance": float(np.mean(variance)),
    }


def ours(given, xy, values, errors, xy0):
    """Krige with this project's engine."""
    from basinheat.geostat.engines import engine_class

    engine = engine_class(given.engine, given.wells)
    sizes = {k: getattr(given, k) for k in ("nearest", "most", "beyond")}
    options = sizes if given.engine == "tiles" else {}
    everything = {} if given.engine == "tiles" else {"nearest": 0}
    few = engine(xy[:300], cases.covariance(), errors[:300], **options).solve(values[:300])
    few.predict(xy0[:3000], **everything)
    start = time.perf_counter()
    kriging = engine(xy, cases.covariance(), errors, **options).solve(values)
    told = kriging.predict(xy0, **everything)
    seconds = time.perf_counter() - start
    further, peak = {}, cases.peak_mb()
    if given.engine == "tiles":
        used = kriging.data_used(xy0)
        further = {"wells_per_cell": round(float(used.mean()), 1), "fewest": int(used.min())}
    return told.mean, told.variance, {**further, "peak_mb": peak}, seconds


def peers():
    """Return how each peer is called."""
    return {
        "pykrige": lambda *case: pykrige(*case, backend="C", window=case[0].window),
        "pykrige-global": lambda *case: pykrige(*case, backend="vectorized", window=None),
        "gstlearn": lambda *case: gstlearn(*case, window=case[0].window),
        "gstlearn-global": lambda *case: gstlearn(*case, window=None),
        "gstools-global": gstools,
        "scikit-learn": scikit_learn,
    }


def pykrige(given, xy, values, errors, xy0, backend, window):
    """Run PyKrige, which takes one nugget for all wells."""
    from pykrige.ok import OrdinaryKriging

    form = {"psill": cases.SILL, "range": 3 * cases.NATURAL_M, "nugget": cases.NUGGET}
    start = time.perf_counter()
    engine = OrdinaryKriging(
        *xy.T, values, variogram_model="exponential", variogram_parameters=form
    )
    east, north = cases.centres(given.cells)
    mean, variance = engine.execute("grid", east, north, backend=backend, n_closest_points=window)
    return mean, variance, {"window": window}, time.perf_counter() - start


def gstlearn(given, xy, values, errors, xy0, window):
    """Run gstlearn, with the error variance of each well."""
    import gstlearn as gl

    start = time.perf_counter()
    table = np.column_stack([xy, values, errors]).ravel()
    wells = gl.Db.createFromSamples(
        len(xy), gl.ELoadBy.SAMPLE, table, ["x", "y", "z", "v"], ["x1", "x2", "z1", "v1"]
    )
    model = gl.Model.createFromParam(
        gl.ECov.EXPONENTIAL, range=cases.NATURAL_M, sill=cases.SILL, flagRange=False
    )
    model.addCovFromParam(gl.ECov.NUGGET, sill=cases.NUGGET)
    model.setDriftIRF(0)
    side = round(len(xy0) ** 0.5)
    step = cases.SIDE_M / side
    grid = gl.DbGrid.create([side, side], [step, step], [step / 2, step / 2])
    around = gl.NeighMoving.create(False, window, 1e6) if window else gl.NeighUnique.create()
    gl.kriging(wells, grid, model, around, True, True, False)
    seconds = time.perf_counter() - start
    names = grid.getAllNames()
    mean = grid.getColumn(next(name for name in names if "estim" in name))
    sigma = grid.getColumn(next(name for name in names if "stdev" in name))
    return mean, np.square(sigma), {"window": window}, seconds


def gstools(given, xy, values, errors, xy0):
    """Run GSTools, all wells in one system."""
    import gstools as gs

    model = gs.Exponential(dim=2, var=cases.SILL, len_scale=cases.NATURAL_M, nugget=cases.NUGGET)
    start = time.perf_counter()
    engine = gs.krige.Ordinary(model, xy.T, values, cond_err=cases.NUGGET + errors, exact=False)
    mean, variance = engine(xy0.T, chunk_size=2000)
    return mean, variance, {}, time.perf_counter() - start


def scikit_learn(given, xy, values, errors, xy0):
    """Run the Gaussian process of scikit-learn about the mean: simple kriging."""
    from sklearn.gaussian_process import GaussianProcessRegressor
    from sklearn.gaussian_process.kernels import ConstantKernel, Matern

    kernel = ConstantKernel(cases.SILL, "fixed") * Matern(cases.NATURAL_M, "fixed", nu=0.5)
    start = time.perf_counter()
    process = GaussianProcessRegressor(kernel, alpha=cases.NUGGET + errors, optimizer=None)
    process.fit(xy, values - values.mean())
    parts = [
        process.predict(part, return_std=True) for part in np.array_split(xy0, 1 + len(xy0) // 5000)
    ]
    mean = np.concatenate([part[0] for part in parts]) + values.mean()
    sigma = np.concatenate([part[1] for part in parts])
    return mean, sigma**2 + cases.NUGGET, {}, time.perf_counter() - start


if __name__ == "__main__":
    main()
