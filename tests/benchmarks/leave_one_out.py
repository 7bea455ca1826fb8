"""Time closed-form leave-one-out against kriging anew without each well.

Brute force is measured on some wells and scaled to all. One JSON line.

    python tests/benchmarks/leave_one_out.py --wells 2000
"""

import argparse
import json
import time

import cases
import numpy as np


def main():
    """Measure both ways and compare what they say."""
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("--wells", type=int, default=2000)
    parser.add_argument("--brute", type=int, default=20, help="wells left out by brute force")
    parser.add_argument("--engine", choices=("global", "tiles"), default="global")
    given = parser.parse_args()
    from basinheat.geostat.engine_global import GlobalKriging
    from basinheat.geostat.engines import engine_class

    xy, values, errors = cases.wells(given.wells)
    model = cases.covariance()
    engine = engine_class(given.engine, given.wells)
    engine(xy[:200], model, errors[:200]).solve(values[:200]).leave_one_out()
    start = time.perf_counter()
    predicted, variance = engine(xy, model, errors).solve(values).leave_one_out()
    closed = time.perf_counter() - start
    rng, apart = np.random.default_rng(0), []
    chosen = rng.choice(given.wells, min(given.brute, given.wells), replace=False)
    start = time.perf_counter()
    for i in chosen:
        rest = np.delete(np.arange(given.wells), i)
        kriging = GlobalKriging(xy[rest], model, errors[rest]).solve(values[rest])
        told = kriging.predict(xy[[i]], nearest=0)
        apart.append((told.mean[0] - predicted[i], told.variance[0] + errors[i] - variance[i]))
    brute = (time.perf_counter() - start) / len(chosen) * given.wells
    line = {
        "wells": given.wells,
        "engine": given.engine,
        "closed_s": round(closed, 3),
        "brute_s": round(brute, 1),
        "times_faster": round(brute / closed),
        "apart": float(np.abs(apart).max()),
        "peak_mb": cases.peak_mb(),
    }
    print(json.dumps(line))


if __name__ == "__main__":
    main()
