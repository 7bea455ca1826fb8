"""A few made-up wells for tests of wells.html: numbers that one can reckon by hand."""

import numpy as np
import pandas as pd

from basinheat import tables
from basinheat.conductivity import catalogue
from basinheat.settings.model import Settings
from basinheat.wellpages.contents import Contents

WELLS = 12
DEPTH_M = 1500.0


def settings(**changes):
    """Return complete settings as the rule hands them over."""
    config = {
        "run": "made_up",
        "crs": "EPSG:32631",
        "inputs": {"wells": [{"file": "wells.csv"}], "readings": [{"file": "readings.csv"}]},
        **changes,
    }
    return Settings(**config).model_dump(mode="json", exclude={"scenarios"})


def contents(names=None, **changes):
    """Return wells with three timed readings each, one set, two layers; they may be given names.

    Well i lies i tenths of a σ (4 K) above what the others say.
    """
    names = list(names or [])
    names += [f"W-{i:02d}" for i in range(WELLS - len(names))]
    made = {
        "run": "made_up",
        "scenario": "base",
        **_wells(names),
        **_temperatures(names),
        "recovery": {
            "raw_trend": {
                "surface_gradient_k_km": 30.0,
                "bend_k_km2": 0.0,
                "straight_below_m": 4000.0,
            }
        },
        "rocks": catalogue.load(),
        "settings": settings(),
    }
    return Contents(**{**made, **changes})


def reading_ids(i):
    """Return the identities of a well's readings."""
    return [f"r{i:03d}{k}" for k in range(3)]


def _wells(names):
    count = len(names)
    wells = pd.DataFrame({"well": names, "easting_m": 5e5, "northing_m": 6e6, "flags": ""}).assign(
        surface_temperature_degc=10.0, surface_temperature_std_k=1.0, water_depth_m=0.0,
        source_file="wells.csv", source_line=np.arange(count) + 2,
    )  # fmt: skip
    readings = pd.DataFrame(
        {
            "well": np.repeat(names, 3),
            "reading_id": [name for i in range(count) for name in reading_ids(i)],
            "depth_m": DEPTH_M,
            "temperature_degc": np.tile([48.0, 50.0, 51.0], count),
            "temperature_std_k": 0.5,
            "kind": "bht",
            "since_circulation_h": np.tile([6.0, 12.0, 18.0], count),
            "circulation_h": 4.0,
            "hole_radius_m": 0.108,
            "flags": np.repeat(["assumed_vertical" if i % 2 else "" for i in range(count)], 3),
            "source_file": "readings.csv",
            "source_line": np.arange(3 * count) + 2,
        }
    )
    layers = pd.DataFrame(
        {
            "well": np.repeat(names, 2),
            "top_m": np.tile([0.0, 600.0], count),
            "base_m": np.tile([600.0, 1600.0], count),
            "lithology": np.tile(["shale", "rock of no name"], count),
        }
    )
    rejected = pd.DataFrame({"table": ["readings"], "source_file": "readings.csv"}).assign(
        source_line=99, well=names[0], column="temperature", value="-999", code="no_temperature",
        sentence=f"{names[0]}: no temperature.",
    )  # fmt: skip
    return {
        "wells": tables.Wells.conform(wells),
        "readings": tables.Readings.conform(readings),
        "layers": tables.Layers.conform(layers),
        "rejected": tables.Rejected.conform(rejected),
        "rejected_later": tables.Rejected.empty(),
    }


def _temperatures(names):
    count = len(names)
    temperatures = pd.DataFrame({"well": names, "depth_m": DEPTH_M}).assign(
        temperature_degc=58.0, temperature_std_k=3.0, well_std_k=4.0, shared_std_k=12.0,
        raw_temperature_degc=51.0, correction_k=7.0, method="conductive_recovery",
        variance_class="recovery:repeated", n_readings=3, flags="circulation_assumed",
        reading_ids=[";".join(reading_ids(i)) for i in range(count)],
        passed_over="dst: treats dst readings;horner: times too close to each other",
    )  # fmt: skip
    far = 0.4 * np.arange(count)
    closure = temperatures[["well", "depth_m", "temperature_degc", "method"]].assign(
        residual_k=-0.5 * far, left_out_k=-far, left_out_std_k=4.0
    )
    edges = np.array([0.0, 1000.0, 2000.0])
    columns = pd.DataFrame(
        {
            "well": np.repeat(names, 3),
            "depth_m": np.tile(edges, count),
            "rebuilt_degc": np.tile(10.0 + 0.03 * edges, count),
            "rebuilt_std_k": 2.0,
            "predicted_degc": np.tile(11.0 + 0.03 * edges, count),
            "predicted_std_k": 2.5,
        }
    )
    sources = pd.DataFrame({"source": ["surface_temperature"], "std": [0.5]})
    return {
        "temperatures": tables.Temperatures.conform(temperatures),
        "estimates": tables.Estimates.conform(temperatures.assign(used=True)),
        "closure": tables.Closure.conform(closure),
        "columns": tables.WellColumns.conform(columns),
        "sources": tables.Sources.conform(sources),
    }
