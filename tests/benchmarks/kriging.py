"""Time global kriging against PyKrige on the same case, each in its own process.

Prints JSON lines: one per engine, then the ratio. Both take one BLAS thread. Quote ratios of
one run only: seconds depend on the machine and on what else it does.
"""

import argparse
import json
import os
import resource
import subprocess
import sys
import time
from pathlib import Path

SIDE_M = 4e5
ENGINES = ("global", "pykrige")


def main() -> None:
    """Run each engine in a child, or be that child."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--wells", type=int, default=2000)
    parser.add_argument("--cells", type=int, default=10_000)
    parser.add_argument("--sources", type=int, default=0, help="shared error sources (ours only)")
    parser.add_argument("--engine", choices=ENGINES, help="time this one here, in this process")
    arguments = parser.parse_args()
    if arguments.engine:
        print(json.dumps(measure(arguments)))
        return
    lines = [child(name) for name in ENGINES]
    ours, peer = (line["us_per_cell"] for line in lines)
    apart = abs(lines[0]["mean_of_mean"] - lines[1]["mean_of_mean"])
    print(json.dumps({"peer_over_ours": round(peer / ours, 2), "means_apart": apart}))


def child(engine: str) -> dict:
    """Measure one engine in its own process, with one thread for its linear algebra."""
    names = ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS")
    command = [sys.executable, __file__, *sys.argv[1:], "--engine", engine]
    environment = {**os.environ, **dict.fromkeys(names, "1")}
    run = subprocess.run(command, env=environment, capture_output=True, text=True, check=True)
    print(run.stdout, end="")
    return json.loads(run.stdout)


def measure(arguments: argparse.Namespace) -> dict:
    """Krige one synthetic case, estimate and variance, and return what it took."""
    sys.path.insert(0, str(Path(__file__).parents[2] / "scripts"))
    import numpy as np

    from basinheat.geostat.engines import engine_class
    from basinheat.geostat.models import Covariance

    rng = np.random.default_rng(1)
    xy = rng.uniform(0, SIDE_M, (arguments.wells, 2))
    values = 30 + 5 * np.sin(xy[:, 0] / 5e4) + rng.normal(0, 2, arguments.wells)
    loadings = rng.normal(size=(arguments.wells, arguments.sources))
    xy0 = rng.uniform(0, SIDE_M, (arguments.cells, 2))
    covariance = Covariance("exponential", 25.0, 9e4, 4.0)
    engine = engine_class(arguments.engine)
    given = {"loadings": loadings} if arguments.engine == "global" else {}
    engine(xy[:50], covariance).solve(values[:50]).predict(xy0[:10])  # imports, warm caches
    start = time.perf_counter()
    kriging = engine(xy, covariance, **given).solve(values)
    ready = time.perf_counter()
    mean = kriging.predict(xy0).mean
    end = time.perf_counter()
    return {
        "engine": arguments.engine,
        "wells": arguments.wells,
        "cells": arguments.cells,
        "setup_s": round(ready - start, 3),
        "predict_s": round(end - ready, 3),
        "us_per_cell": round((end - start) / arguments.cells * 1e6, 2),
        "peak_mb": round(resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024),
        "mean_of_mean": float(mean.mean()),
    }


if __name__ == "__main__":
    main()
