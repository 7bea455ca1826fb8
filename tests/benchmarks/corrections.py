"""Correct the readings of invented basins, and print how far formation temperatures are off.

Judged are mud-cooled sets of wells without an equilibrium log, by the default order, after the
joint fit; beside them, on the same sets, depth formulas, the intercepts of plain Horner and line
source plots (no bias taken out), and a line in depth fitted to the basin's own equilibrium logs and
drill-stem tests. One JSON line a basin, then one over all: bias, RMSE, coverage of the 90 %
interval, and by how much the RMSE lies below the best rival's.

    python tests/benchmarks/corrections.py --seeds 21 22 23 --wells 250
"""

import argparse
import json
import logging
import sys
import tempfile
import time
from concurrent.futures import ProcessPoolExecutor
from functools import partial
from itertools import pairwise
from pathlib import Path

import numpy as np
import pandas as pd

ROOT = Path(__file__).resolve().parents[2]
sys.path.insert(0, str(ROOT / "scripts"))

from basinheat import corrections, heatflow, ingest, surface  # noqa: E402
from basinheat.rock import resistances  # noqa: E402
from basinheat.settings.heat import Correction  # noqa: E402
from basinheat.settings.load import load_config  # noqa: E402
from basinheat.synthetic import make_basin  # noqa: E402

FORMULAS = ("harrison1983", "kehle_gregory")
HORNER, LINE_SOURCE, FITTED = "horner", "line_source", "fitted_in_depth"
RIVALS = (*FORMULAS, HORNER, LINE_SOURCE, FITTED)
NORMAL_90 = 1.6449
DEPTHS_M = (0, 1500, 2500, 3500, 20_000)


def estimate(settings, folder):
    """Take the files of a basin to final temperatures; return them and what led there."""
    prepared = ingest.prepare(settings, folder)
    wells = surface.at_wells(prepared.wells, settings.surface_temperature, None, settings.crs)
    shared = settings.surface_temperature.shared_std_k
    corrected = corrections.correct(prepared.readings, wells, settings.correction, (), shared)
    rocks = resistances.estimate(
        corrected.estimates, wells, prepared.layers, settings.conductivity, settings.heat_flow
    )
    sources = pd.concat([corrected.sources, rocks.sources], ignore_index=True)
    models = ("exponential", "matern15")
    fit = heatflow.fit(corrected.estimates, rocks.resistances, sources, wells, models, shared)
    return prepared.readings, wells, fit.temperatures


def rivals(readings, wells, sets):
    """Return each rival's temperature of every set, NaN where it does not apply."""
    out = {}
    for name in FORMULAS:
        rival = corrections.correct(readings, wells, Correction(order=[name])).estimates
        found = rival[rival["method"] == name].set_index("reading_ids")["temperature_degc"]
        out[name] = found.reindex(sets["reading_ids"]).to_numpy()
    by_id = readings.set_index("reading_id")
    own = [by_id.loc[ids.split(";")] for ids in sets["reading_ids"]]
    out[HORNER] = np.array([intercept(set_, horner_time) for set_ in own])
    out[LINE_SOURCE] = np.array([intercept(set_, inverse_time) for set_ in own])
    out[FITTED] = sets["raw_degc"].to_numpy() + fitted_in_depth(readings, sets)
    return out


def horner_time(readings):
    """Return ln((circulation + rest) / rest), NaN where either is not noted."""
    rest = readings["since_circulation_h"].to_numpy()
    return np.log(1.0 + readings["circulation_h"].to_numpy() / rest)


def inverse_time(readings):
    """Return 1 / rest."""
    return 1.0 / readings["since_circulation_h"].to_numpy()


def intercept(readings, axis):
    """Return the intercept of a straight line at two times or more; NaN where it is none.

    As published: least squares, no weights; refused where it does not rise with time.
    """
    x, y = axis(readings), readings["temperature_degc"].to_numpy()
    x, y = x[np.isfinite(x)], y[np.isfinite(x)]
    if len(np.unique(x)) < 2:
        return np.nan
    slope, level = np.polyfit(x, y, 1)
    return level if slope < 0.0 else np.nan


def fitted_in_depth(readings, sets):
    """Return the correction of a straight line through the basin's own pairs, least squares.

    A pair is a set and what an equilibrium log (between its points) or a drill-stem test (within
    150 m, carried at 30 K/km) of the same well says at its depth.
    """
    pairs = []
    for kind in ("equilibrium", "dst"):
        for well, own in readings[readings["kind"] == kind].groupby("well"):
            own = own.sort_values("depth_m")
            z, t = own["depth_m"].to_numpy(), own["temperature_degc"].to_numpy()
            for row in sets[sets["well"] == well].itertuples():
                near = int(np.abs(z - row.depth_m).argmin())
                if kind == "dst" and abs(z[near] - row.depth_m) < 150.0:
                    pairs.append((row.depth_m, t[near] + 0.03 * (row.depth_m - z[near]), row))
                elif kind == "equilibrium" and z[0] <= row.depth_m <= z[-1]:
                    pairs.append((row.depth_m, float(np.interp(row.depth_m, z, t)), row))
    if len(pairs) < 5:
        return np.full(len(sets), np.nan)
    depth = np.array([pair[0] for pair in pairs])
    correction = np.array([truth - row.raw_degc for _, truth, row in pairs])
    slope, level = np.polyfit(depth, correction, 1)
    return level + slope * sets["depth_m"].to_numpy()


def judge(seed, wells, hard, folder):
    """Make a basin, correct its readings; return a row per judged set."""
    basin = make_basin(seed=seed, n_wells=wells, hard=hard, dirt=False)
    config = basin.write(folder)
    import yaml

    settings = load_config(yaml.safe_load(config.read_text()), str(config), config.parent)["base"]
    readings, placed, final = estimate(settings, Path(folder))
    logged = final["well"].map(readings.groupby("well")["kind"].agg(set))
    muddy = final["method"].isin(MUDDY)
    sets = final[muddy].assign(equilibrium=["equilibrium" in kinds for kinds in logged[muddy]])
    timed = readings.set_index("reading_id")["since_circulation_h"].notna()
    warm = readings.set_index("reading_id")["temperature_degc"]
    ids = sets["reading_ids"].str.split(";")
    sets["n_timed"] = [int(timed[i].sum()) for i in ids]
    sets["raw_degc"] = [float(warm[i].max()) for i in ids]
    for name, value in rivals(readings, placed, sets).items():
        sets[name] = value
    places = placed.set_index("well").loc[sets["well"], ["easting_m", "northing_m"]].to_numpy()
    depth = sets["depth_m"].to_numpy()
    truth = basin.truth.temperature_degc(*places.T, depth[:, None])[:, 0]
    parts = sets[["temperature_std_k", "well_std_k", "shared_std_k"]].to_numpy()
    sets["error"] = sets["temperature_degc"].to_numpy() - truth
    sets["std"] = np.sqrt((parts**2).sum(1))
    for name in RIVALS:
        sets[name] = sets[name].to_numpy() - truth
    return sets[~sets["equilibrium"]].assign(seed=seed)


MUDDY = tuple(name for name, method in corrections.METHODS.items() if method.kind == "bht")


def scores(sets):
    """Return scores of a group of sets, and by how much it beats each rival on common sets."""
    error, z = sets["error"].to_numpy(), (sets["error"] / sets["std"]).to_numpy()
    out = {
        "sets": len(sets),
        "bias": round(float(error.mean()), 3),
        "rmse": round(rms(error), 3),
        "coverage_90": round(float((np.abs(z) < NORMAL_90).mean()), 4),
        "median_std": round(float(sets["std"].median()), 2),
    }
    below = {}
    for name in RIVALS:
        common = sets[name].notna().to_numpy()
        if common.sum() >= 20:
            other = sets[name].to_numpy()[common]
            below[name] = {
                "rmse": round(rms(other), 3),
                "bias": round(float(other.mean()), 3),
                "ours": round(rms(error[common]), 3),
                "better": round(1.0 - rms(error[common]) / rms(other), 3),
            }
    out["rivals"] = below
    out["better_than_best"] = min((rival["better"] for rival in below.values()), default=None)
    return out


def rms(values):
    """Return the root of the mean square."""
    return float(np.sqrt(np.mean(np.square(values))))


def groups(sets):
    """Return the sets by number of times and by depth."""
    timed = sets["n_timed"]
    out = {
        "all": sets,
        "repeated": sets[timed >= 2],
        "single_or_untimed": sets[timed < 2],
        "three_times_or_more": sets[timed >= 3],
        "two_times": sets[timed == 2],
        "one_time": sets[timed == 1],
        "no_time": sets[timed == 0],
    }
    for top, base in pairwise(DEPTHS_M):
        inside = sets["depth_m"].between(top, base, inclusive="left")
        out[f"{top}_to_{base}_m"] = sets[inside]
    return {name: group for name, group in out.items() if len(group)}


def one(seed, wells, hard):
    """Judge one basin; print its line."""
    logging.disable(logging.CRITICAL)
    started = time.perf_counter()
    with tempfile.TemporaryDirectory() as folder:
        sets = judge(seed, wells, hard, folder)
    line = {"seed": seed, **{k: v for k, v in scores(sets).items() if k != "rivals"}}
    print(json.dumps({**line, "seconds": round(time.perf_counter() - started, 1)}), flush=True)
    return sets


if __name__ == "__main__":
    parser = argparse.ArgumentParser(description=__doc__.split("\n")[0])
    parser.add_argument("--seeds", type=int, nargs="+", default=[21, 22, 23])
    parser.add_argument("--wells", type=int, default=250)
    parser.add_argument("--hard", action="store_true", help="wrong times, common mud, 5 degF")
    parser.add_argument("--processes", type=int, default=1)
    given = parser.parse_args()
    run = partial(one, wells=given.wells, hard=given.hard)
    with ProcessPoolExecutor(given.processes) as pool:
        basins = list(pool.map(run, given.seeds))
    biases = np.array([sets["error"].mean() for sets in basins])
    pooled = pd.concat(basins, ignore_index=True)
    print(
        json.dumps(
            {
                "basins": len(basins),
                "wells": given.wells,
                "hard": given.hard,
                "mean_bias": round(float(biases.mean()), 3),
                "rms_of_biases": round(rms(biases), 3),
                **{name: scores(group) for name, group in groups(pooled).items()},
            },
            indent=1,
        )
    )
