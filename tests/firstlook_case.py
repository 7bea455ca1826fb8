"""An invented basin, and the first look at it: for the tests of the first look."""

import numpy as np
import pandas as pd

from basinheat import ingest
from basinheat.conductivity import catalogue
from basinheat.firstlook.stage import look
from basinheat.settings.model import Settings

FEET, DEGF = 1.0 / 0.3048, lambda degc: degc * 1.8 + 32.0  # by definition
SURFACE, GRADIENT, WELLS = 12.0, 30.0, 40
# Inside UTM zone 14 north (EPSG:32614): longitude 102 to 96 west (EPSG registry).
WEST, SOUTH = -100.0, 37.0


def basin():
    """Return wells and readings in metres, degrees and degC, with a gradient of 30 K/km."""
    rng = np.random.default_rng(5)
    total = rng.uniform(1500.0, 3500.0, WELLS)
    wells = pd.DataFrame(
        {
            "well": [f"W-{i:02d}" for i in range(WELLS)],
            "x": (WEST + rng.uniform(0.0, 1.5, WELLS)).round(5),
            "y": (SOUTH + rng.uniform(0.0, 1.5, WELLS)).round(5),
            "ground_elevation": 300.0,
            "datum_elevation": 305.0,
            "total_depth": total.round(1),
        }
    )
    depth = np.concatenate([total, 0.6 * total])
    readings = pd.DataFrame(
        {
            "well": np.tile(wells["well"], 2),
            "depth": depth.round(1),
            "temperature": (SURFACE + GRADIENT * (depth - 5.0) / 1000.0).round(1),
            "kind": "bht",
        }
    )
    return wells, readings


def seen(folder, wells=None, readings=None, wells_file=(), readings_file=(), **changes):
    """Return the record of the first look at tables written to a folder, and the cleaned tables."""
    good_wells, good_readings = basin()
    folder.mkdir(exist_ok=True)
    for name, frame in (("wells", good_wells if wells is None else wells),
                        ("readings", good_readings if readings is None else readings)):  # fmt: skip
        text = frame if isinstance(frame, str) else frame.to_csv(index=False)
        (folder / f"{name}.csv").write_text(text, encoding="utf-8")
    inputs = {
        "wells": [{"file": "wells.csv", "crs": "EPSG:4326", **dict(wells_file)}],
        "readings": [{"file": "readings.csv", **dict(readings_file)}],
        **changes.pop("inputs", {}),
    }
    surface = {"model": "constant", "temperature_degc": SURFACE}
    config = {"run": "case", "crs": "EPSG:32614", "inputs": inputs, "surface_temperature": surface}
    settings = Settings.model_validate(config | changes)
    done = ingest.prepare(settings, folder)
    rocks = catalogue.load()
    record = look(settings, str(folder), done.wells, done.readings, done.rejected, rocks)
    return record, done


def asked(record):
    """Return what is asked, pressing questions or not."""
    return [f"{each['place']}: {each['ask']}" for each in record["questions"]]


def entry(record, table):
    """Return what is told of the only file of a table."""
    (found,) = (each for each in record["files"] if each["table"] == table)
    return found


def column(record, table, name):
    """Return what is told of one column."""
    return next(each for each in entry(record, table)["columns"] if each["name"] == name)
