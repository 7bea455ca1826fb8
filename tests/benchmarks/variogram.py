"""Time the experimental variogram over all pairs of wells within a distance; nothing is sampled.

One JSON line; with --peer gstools, also GSTools on the same wells in its own process.

    python tests/benchmarks/variogram.py --wells 100000
    python tests/benchmarks/variogram.py --wells 5000 --peer gstools
"""

import argparse
import json
import time

import cases
import numpy as np


def main():
    """Measure each in a child, or be that child."""
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("--wells", type=int, default=100_000)
    parser.add_argument("--reach", type=float, default=1.2e5, help="longest distance, m")
    parser.add_argument("--lags", type=int, default=20)
    parser.add_argument("--peer", choices=("gstools",), action="append", default=[])
    parser.add_argument("--measure", choices=("ours", "gstools"), help=argparse.SUPPRESS)
    given = parser.parse_args()
    if given.measure:
        print(json.dumps(measure(given)))
        return
    options = [f"--{name}={getattr(given, name)}" for name in ("wells", "reach", "lags")]
    ours = cases.child(__file__, [*options, "--measure=ours"])
    for peer in given.peer:
        theirs = cases.child(__file__, [*options, f"--measure={peer}"])
        if "failed" not in {**ours, **theirs}:
            ratio = round(theirs["seconds"] / ours["seconds"], 1)
            print(json.dumps({"peer": peer, "times_faster": ratio}))


def measure(given):
    """Compute the variogram and say what it took."""
    xy, values, _ = cases.wells(given.wells)
    run = ours if given.measure == "ours" else gstools
    seconds, pairs, gamma = run(given, xy, values)
    return {
        "who": given.measure,
        "wells": given.wells,
        "pairs": pairs,
        "seconds": round(seconds, 3),
        "ns_per_pair": round(seconds / pairs * 1e9, 2) if pairs else None,
        "peak_mb": cases.peak_mb(),
        "mean_gamma": float(np.mean(gamma)),
    }


def ours(given, xy, values):
    """Run this project's variogram, by squared differences as the peer does."""
    from basinheat.geostat import pairs
    from basinheat.geostat.variogram import experimental

    options = {"max_lag": given.reach, "bins": given.lags, "estimator": "matheron"}
    least, pairs._COMPILED = pairs._COMPILED, 0
    experimental(xy[:500], values[:500], **options)  # loads, or compiles, the loops
    pairs._COMPILED = least
    start = time.perf_counter()
    found = experimental(xy, values, **options)
    return time.perf_counter() - start, int(found.pairs.sum()), found.gamma


def gstools(given, xy, values):
    """Run GSTools on all pairs."""
    import gstools as gs

    edges = np.linspace(0, given.reach, given.lags + 1)
    gs.vario_estimate(xy[:200].T, values[:200], edges)
    start = time.perf_counter()
    _, gamma, counts = gs.vario_estimate(xy.T, values, edges, return_counts=True)
    return time.perf_counter() - start, int(np.sum(counts)), gamma


if __name__ == "__main__":
    main()
