"""Read and correct a million readings of 200,000 wells, and print seconds and memory.

Each stage runs in a process of its own: `prepare` from CSV files to screened tables, `correct`
from these to formation temperatures by the default order. As a peer, pandas alone reads the same
CSV files and writes them as Parquet, which is the least that any program must do. One JSON line a
stage: seconds of wall time, largest memory, rows kept.

    python tests/benchmarks/million.py --wells 200000 --readings 1000000
"""

import argparse
import json
import resource
import subprocess
import sys
import tempfile
import time
from pathlib import Path

import numpy as np
import pandas as pd

ROOT = Path(__file__).resolve().parents[2]
sys.path.insert(0, str(ROOT / "scripts"))

STAGES = ("peer", "prepare", "correct")
CONFIG = """\
run: million
crs: EPSG:32631
inputs:
  wells: [{file: wells.csv}]
  readings: [{file: readings.csv}]
surface_temperature: {model: constant, temperature_degc: 10}
"""


def write_files(folder, n_wells, n_readings, seed=1):
    """Write wells on a plane of 2000 km and their readings: sets of one to four runs, some timed.

    30 K/km with 15 % between wells; mud leaves 35 % of the rise, of which half is back after 8 h.
    """
    rng = np.random.default_rng(seed)
    names = np.char.add("W", np.char.zfill(np.arange(n_wells).astype(str), 7))
    x, y = rng.uniform(0, 2e6, (2, n_wells)) - [[1.5e6], [-4e6]]
    total = rng.uniform(800, 4500, n_wells)
    wells = pd.DataFrame({"well": names, "x": x.round(1), "y": y.round(1)})
    wells["ground_elevation"] = rng.uniform(0, 300, n_wells).round(1)
    wells["datum_elevation"] = wells["ground_elevation"] + 5.0
    wells["total_depth"] = total.round(1)
    wells.to_csv(folder / "wells.csv", index=False)
    well = np.sort(rng.integers(0, n_wells, n_readings))
    group = np.arange(n_readings) // 3 % 2
    depth = total[well] * np.where(group == 0, 1.0, 0.55) - 5.0
    kind = np.where(rng.random(n_readings) < 0.03, "dst", "bht")
    since = rng.gamma(3.0, 3.0, n_readings) + 3.0
    gradient = 0.030 * np.exp(rng.normal(0.0, 0.15, n_wells))[well]
    cooling = np.where(kind == "bht", 0.35 * gradient * depth / (1.0 + since / 8.0), 0.0)
    readings = pd.DataFrame({"well": names[well], "depth": depth.round(1), "kind": kind})
    noise = rng.normal(0.0, 1.0, n_readings)
    readings["temperature"] = (10.0 + gradient * depth - cooling + noise).round(1)
    timed = (rng.random(n_readings) < 0.75) & (kind == "bht")
    circulated = timed & (rng.random(n_readings) < 0.8)
    readings["since_circulation"] = np.where(timed, since.round(2), np.nan)
    readings["circulation"] = np.where(circulated, rng.gamma(4.0, 1.0, n_readings).round(1), np.nan)
    readings.to_csv(folder / "readings.csv", index=False)
    (folder / "config.yaml").write_text(CONFIG)


def peer(folder):
    """Read the CSV files with pandas and write them as Parquet."""
    rows = 0
    for name in ("wells", "readings"):
        table = pd.read_csv(folder / f"{name}.csv", dtype={"well": str})
        table.to_parquet(folder / f"peer_{name}.parquet")
        rows += len(table)
    return {"rows": rows}


def prepare(folder):
    """Read and screen the CSV files."""
    from basinheat import ingest, tables

    prepared = ingest.prepare(settings(folder), folder)
    tables.Wells.save(prepared.wells, folder / "wells.parquet")
    tables.Readings.save(prepared.readings, folder / "readings.parquet")
    tables.Rejected.save(prepared.rejected, folder / "rejected.parquet")
    return {"readings_kept": len(prepared.readings), "refused": len(prepared.rejected)}


def correct(folder):
    """Correct the readings by the default order."""
    from basinheat import corrections, surface, tables

    config = settings(folder)
    readings = tables.Readings.load(folder / "readings.parquet")
    wells = tables.Wells.load(folder / "wells.parquet")
    wells = surface.at_wells(wells, config.surface_temperature, None, config.crs)
    found = corrections.correct(readings, wells, config.correction)
    tables.Estimates.save(found.estimates, folder / "estimates.parquet")
    return {"estimates": len(found.estimates), "methods": found.recovery["estimates"]}


def settings(folder):
    """Return the settings of the base scenario."""
    import yaml

    from basinheat.settings.load import load_config

    return load_config(yaml.safe_load(CONFIG), "config.yaml", folder)["base"]


def measure(stage, folder):
    """Run one stage here, and print its line."""
    started = time.perf_counter()
    counts = {"peer": peer, "prepare": prepare, "correct": correct}[stage](folder)
    seconds = time.perf_counter() - started
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024.0**2
    line = {"stage": stage, "seconds": round(seconds, 1), "peak_gib": round(peak, 2), **counts}
    print(json.dumps(line), flush=True)


if __name__ == "__main__":
    parser = argparse.ArgumentParser(description=__doc__.split("\n")[0])
    parser.add_argument("--wells", type=int, default=200_000)
    parser.add_argument("--readings", type=int, default=1_000_000)
    parser.add_argument("--stage", choices=STAGES, help="in an existing --folder only")
    parser.add_argument("--folder", type=Path)
    given = parser.parse_args()
    if given.stage:
        measure(given.stage, given.folder)
        sys.exit()
    with tempfile.TemporaryDirectory() as made:
        folder = given.folder or Path(made)
        write_files(folder, given.wells, given.readings)
        for stage in STAGES:
            command = [sys.executable, __file__, "--stage", stage, "--folder", str(folder)]
            subprocess.run(command, check=True)
