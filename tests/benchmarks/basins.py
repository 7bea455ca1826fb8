"""Map invented basins whose truth is known, and print how far the maps are off.

Each basin runs through the whole workflow, CSV files to maps, in a folder of its own. One JSON
line a basin: bias, RMSE, coverage of the 90 % interval and mean squared standardised error over all
mapped cells, for heat flow (mW/m2) and temperature (K); and the RMSE at 3 km of kriging the wells'
temperatures there directly, from the same formation temperatures. Then a line over all basins.

    python tests/benchmarks/basins.py --seeds 21 22 23
"""

import argparse
import json
import os
import subprocess
import sys
import tempfile
import time
from pathlib import Path

import numpy as np

ROOT = Path(__file__).resolve().parents[2]
sys.path.insert(0, str(ROOT / "scripts"))

from basinheat import tables  # noqa: E402
from basinheat.geostat import likelihood  # noqa: E402
from basinheat.geostat.engine_global import GlobalKriging  # noqa: E402
from basinheat.synthetic import make_basin  # noqa: E402

DEPTHS = (1000, 2000, 3000)
NORMAL_90 = 1.6449


def run(config, cores):
    """Run the workflow on a config, results beside it."""
    profile = str(ROOT / "workflow" / "profiles" / "default")
    command = [sys.executable, "-m", "snakemake", "--snakefile", str(ROOT / "Snakefile")]
    command += ["--cores", str(cores), "--configfile", str(config)]
    command += ["--directory", str(config.parent)]
    environment = {**os.environ, "SNAKEMAKE_PROFILE": profile}
    done = subprocess.run(command, env=environment, capture_output=True, text=True)
    if done.returncode:
        raise SystemExit(done.stdout + done.stderr)


def compare(value, std, truth):
    """Return scores of a map against the truth in the same cells."""
    error = value - truth
    z = error / std
    return {
        "bias": round(float(error.mean()), 3),
        "rmse": round(float(np.sqrt((error**2).mean())), 3),
        "coverage_90": round(float((np.abs(z) < NORMAL_90).mean()), 4),
        "msdr": round(float((z**2).mean()), 3),
        "median_std": round(float(np.median(std)), 3),
    }


def slice_rmse(folder, places, truth, depth):
    """Return the RMSE of kriging temperatures at one depth, each well's carried by its gradient."""
    lines = tables.Gradients.load(folder / "tables" / "gradients.parquet").set_index("well")
    wells = tables.Wells.load(folder / "tables" / "wells.parquet").set_index("well")
    xy = wells.loc[lines.index, ["easting_m", "northing_m"]].to_numpy()
    value = (lines["intercept_degc"] + lines["gradient_k_km"] * depth / 1e3).to_numpy()
    variance = ((lines["gradient_std_k_km"] * depth / 1e3) ** 2).to_numpy()
    covariance, _ = likelihood.fit(xy, value, variance)
    mean = GlobalKriging(xy, covariance, variance).solve(value).predict(places).mean
    return round(float(np.sqrt(((mean - truth) ** 2).mean())), 3)


def judge(seed, wells, cell_size, cores):
    """Make a basin, map it and compare."""
    started = time.perf_counter()
    basin = make_basin(seed=seed, n_wells=wells)
    with tempfile.TemporaryDirectory() as folder:
        config = basin.write(folder, run="basin", cell_size_m=cell_size, depths_m=DEPTHS)
        run(Path(config), cores)
        results = Path(folder) / "results" / "basin" / "base"
        maps = tables.Maps.load(results / "maps" / "maps.parquet")
        cells = tables.Cells.load(results / "maps" / "cells.parquet")
        flows = tables.HeatFlow.load(results / "tables" / "heat_flow.parquet")
        places = cells[["easting_m", "northing_m"]].to_numpy()
        truth = np.asarray(basin.truth.temperature_degc(*places.T, [float(d) for d in DEPTHS]))
        line = {
            "seed": seed,
            "wells": len(flows),
            "cells": len(cells),
            "heat_flow": compare(
                maps["heat_flow"], maps["heat_flow_std"], basin.truth.heat_flow_mw_m2(*places.T)
            ),
            "heat_flow_shared_std": round(float(flows["heat_flow_shared_std_mw_m2"].median()), 2),
        }
        for i, depth in enumerate(DEPTHS):
            name = f"temperature_{depth}m"
            line[name] = compare(maps[name], maps[f"{name}_std"], truth[:, i])
        line["slice_rmse_3000m"] = slice_rmse(results, places, truth[:, -1], DEPTHS[-1])
    return {**line, "seconds": round(time.perf_counter() - started, 1)}


def summary(lines):
    """Return means over basins."""
    out = {"basins": len(lines)}
    for name in ("heat_flow", *(f"temperature_{d}m" for d in DEPTHS)):
        scores = [line[name] for line in lines]
        bias = np.array([s["bias"] for s in scores])
        rmse = np.array([s["rmse"] for s in scores])
        out[name] = {
            "mean_bias": round(float(bias.mean()), 3),
            "rms_of_biases": round(float(np.sqrt((bias**2).mean())), 3),
            "rmse": round(float(np.sqrt((rmse**2).mean())), 3),
            "coverage_90": round(float(np.mean([s["coverage_90"] for s in scores])), 4),
            "worst_seed": lines[int(np.argmax(rmse))]["seed"],
        }
    slices = np.sqrt(np.mean([line["slice_rmse_3000m"] ** 2 for line in lines]))
    out["slice_rmse_3000m"] = round(float(slices), 3)
    out["better_than_slices"] = round(float(1 - out["temperature_3000m"]["rmse"] / slices), 3)
    out["heat_flow_shared_std"] = round(
        float(np.mean([line["heat_flow_shared_std"] for line in lines])), 2
    )
    return out


if __name__ == "__main__":
    parser = argparse.ArgumentParser(description=__doc__.split("\n")[0])
    parser.add_argument("--seeds", type=int, nargs="+", default=[21, 22, 23])
    parser.add_argument("--wells", type=int, default=300)
    parser.add_argument("--cell-size", type=int, default=3000, help="m")
    parser.add_argument("--cores", type=int, default=2)
    given = parser.parse_args()
    judged = []
    for seed in given.seeds:
        judged.append(judge(seed, given.wells, given.cell_size, given.cores))
        print(json.dumps(judged[-1]), flush=True)
    print(json.dumps(summary(judged)))
