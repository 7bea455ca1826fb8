"""Parquet: whole numbers as decimals, timestamps, gaps, broken files."""

import pandas as pd

from .base import (
    READING_COLUMNS,
    WELL_COLUMNS,
    case,
    good_readings,
    inputs,
    numbered,
    reading_rows,
    well_rows,
)
from .model import ledger, refused


def numbered_frame(kind: type) -> pd.DataFrame:
    frame = pd.DataFrame(well_rows(), columns=WELL_COLUMNS)
    return frame.assign(well=[kind(1000 + i) for i in range(16)])


def parquet(frame: pd.DataFrame):
    return lambda path: frame.to_parquet(path)


def stamped_readings() -> pd.DataFrame:
    """Dates as timestamps, kinds as categories, an index nobody needs."""
    frame = pd.DataFrame(reading_rows(), columns=READING_COLUMNS)
    frame = frame.drop(columns=["since_circulation", "circulation"])
    frame["date"] = pd.Timestamp("1985-03-07")
    frame.loc[0, "date"] = pd.NaT
    frame["kind"] = frame["kind"].astype("category")
    frame.loc[3, "temperature"] = float("nan")
    return frame.set_index(pd.Index(range(100, 132), name="row"))


CASES = [
    case(
        "parquet_well_names_as_decimals",
        "A column of numbered wells had a gap once, and became decimals: 1003.0.",
        # Corrected: the expectation was the name 1003.0. A decimal of a Parquet file has no
        # spelling of its own (the manual's "first spelling" is of text), and is read as 1003.
        ledger(values={("1003", "total_depth_m"): 1340}),
        files={"wells.parquet": parquet(numbered_frame(float))},
        readings=numbered(good_readings()),
        config={"inputs": {"wells": [{"file": "wells.parquet"}], "well_names": "normalised"}},
    ),
    case(
        "parquet_well_names_as_whole_numbers",
        "Numbered wells are whole numbers in one file and text in the other.",
        ledger(values={("1003", "total_depth_m"): 1340}),
        files={"wells.parquet": parquet(numbered_frame(int))},
        readings=numbered(good_readings()),
        config=inputs(wells={"file": "wells.parquet"}),
    ),
    case(
        "parquet_timestamps_categories_and_gaps",
        "A table was saved from a data frame, types, index and gaps included.",
        ledger(
            {("readings", "no_temperature", None): 1},
            readings=31,
            values={("N15", "date"): "1985-03-07"},
        ),
        files={"readings.parquet": parquet(stamped_readings())},
        config=inputs(readings={"file": "readings.parquet"}),
    ),
    case(
        "parquet_cut_off",
        "A copy over the network broke off.",
        refused("readings.parquet"),
        files={"readings.parquet": b"PAR1" + bytes(200)},
        config=inputs(readings={"file": "readings.parquet"}),
    ),
    case(
        "parquet_column_missing",
        "The data frame was saved under other column names.",
        refused("wells.parquet", "total_dept"),
        files={
            "wells.parquet": parquet(numbered_frame(str).rename(columns={"total_depth": "td"})),
        },
        config=inputs(
            wells={
                "file": "wells.parquet",
                "columns": {"well": "well", "x": "x", "y": "y", "total_depth": "total_dept"},
            }
        ),
    ),
]
