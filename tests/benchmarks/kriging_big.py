"""Krige maps that no program holds at once, and write them as GeoTIFFs.

Prints one JSON line a size: seconds of the kernel and of everything, memory beyond what loading
the program takes, share of what dgemm reaches in the same run. With --growth, smaller sizes too,
and the exponents by which the kernel's time grows with wells and cells. The files are deleted.

    python tests/benchmarks/kriging_big.py --wells 100000 --cells 100000000
    python tests/benchmarks/kriging_big.py --wells 1000000 --cells 10000000
"""

import argparse
import json
import math
import shutil
import tempfile
import time
from pathlib import Path

import cases
import numpy as np

RASTER_BYTES = 2 * 4  # a cell: mean and standard uncertainty


def main():
    """Measure each size in a child, or be that child."""
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("--wells", type=int, default=100_000)
    parser.add_argument("--cells", type=int, default=100_000_000)
    parser.add_argument("--nearest", type=int, default=20)
    parser.add_argument("--most", type=int, default=64)
    parser.add_argument("--beyond", type=int, default=16)
    parser.add_argument("--growth", action="store_true")
    parser.add_argument("--folder", type=Path, help="where the rasters go for a while")
    parser.add_argument("--measure", action="store_true", help=argparse.SUPPRESS)
    given = parser.parse_args()
    if given.measure:
        print(json.dumps(measure(given)))
        return
    whole = run(given, given.wells, given.cells)
    if given.growth:
        fewer = run(given, given.wells // 4, given.cells)
        coarser = run(given, given.wells, given.cells // 4)
        names = ("wells", "cells")
        grown = {
            f"exponent_in_{name}": round(math.log(whole["kernel_s"] / line["kernel_s"], 4), 2)
            for name, line in zip(names, (fewer, coarser), strict=True)
        }
        print(json.dumps(grown))


def run(given, wells, cells):
    """Measure one size in a child."""
    options = [f"--{name}={getattr(given, name)}" for name in ("nearest", "most", "beyond")]
    options += [f"--folder={given.folder}"] if given.folder else []
    return cases.child(
        __file__, [f"--wells={wells}", f"--cells={cells}", *options, "--measure"], 7200
    )


def measure(given):
    """Krige one size into rasters, and say what it took."""
    from basinheat.delivery.bands import write_bands
    from basinheat.geostat import engine_tiles
    from basinheat.geostat.bands import cell_size, predict_bands
    from basinheat.grid import Grid

    xy, values, errors = cases.wells(given.wells)
    east, north = cases.centres(given.cells)
    sizes = {name: getattr(given, name) for name in ("nearest", "most", "beyond")}
    make = engine_tiles.TileKriging
    make(xy[:300], cases.covariance(), errors[:300]).solve(values[:300]).predict(xy[:3000])
    cell = cell_size(east, north)
    grid = Grid("EPSG:32631", 0.0, cases.SIDE_M, cell, len(north), len(east))
    spent = timed(engine_tiles, "krige")
    base, gemm = cases.peak_mb(), cases.dgemm_gflops(2)
    folder = Path(tempfile.mkdtemp(dir=given.folder))
    try:
        if shutil.disk_usage(folder).free < 1.5 * RASTER_BYTES * given.cells:
            raise SystemExit(f"{folder}: no room for {RASTER_BYTES * given.cells / 1e9:.1f} GB")
        start = time.perf_counter()
        engine = make(xy, cases.covariance(), errors, **sizes).solve(values)
        solved = time.perf_counter()
        bands = predict_bands(engine, east, north)
        write_bands(bands, grid, folder / "value.tif", folder / "std.tif")
        whole, kernel = time.perf_counter() - start, spent[0]
        memory = cases.peak_mb() - base
        written = sum(path.stat().st_size for path in folder.iterdir())
    finally:
        shutil.rmtree(folder)
    some = np.column_stack([np.tile(east, 16), np.repeat(north[: 16 * 40 : 40], len(east))])
    used = engine.data_used(some, apart_m=cell).astype(float)
    return {
        "wells": given.wells,
        "cells": len(east) * len(north),
        "wells_per_cell": round(used.mean(), 1),
        "solve_s": round(solved - start, 2),
        "kernel_s": round(kernel, 2),
        "whole_s": round(whole, 2),
        "beyond_mb": memory,
        "rasters_mb": round(written / 2**20),
        # the triangular solve alone: m^2 operations a cell
        "share_of_dgemm": round(
            float((used**2).mean()) * len(east) * len(north) / kernel / gemm / 1e9, 2
        ),
    }


def timed(module, name):
    """Add up what a function of a module takes from now on."""
    plain, spent = getattr(module, name), [0.0]

    def watched(*given):
        start = time.perf_counter()
        told = plain(*given)
        spent[0] += time.perf_counter() - start
        return told

    setattr(module, name, watched)
    return spent


if __name__ == "__main__":
    main()
