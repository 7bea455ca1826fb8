"""Local calibration on invented basins whose truth is known; mud cooling is simulated."""

import numpy as np
import pandas as pd
import pytest

from basinheat import tables
from basinheat.corrections import correct
from basinheat.settings.heat import Correction
from basinheat.synthetic import make_basin

SEEDS = range(701, 709)
KINDS = {"LOG": ("bht", 0.8), "DST": ("dst", 2.0), "STATIC": ("equilibrium", 0.2)}
LOCAL = ["equilibrium", "dst", "local_calibration"]
REGIONAL = ["equilibrium", "dst", "harrison1983"]


def as_read(seed, n_wells=250):
    """Readings of a basin in whole °F with noise, its wells, and the truth at every reading."""
    basin = make_basin(seed, n_wells, dirt=False)
    rng = np.random.default_rng(seed)
    sets = basin.sets.iloc[basin.felt["set"]].reset_index(drop=True)
    kind = sets["kind"].map(lambda name: KINDS[name][0])
    noise = sets["kind"].map(lambda name: KINDS[name][1]).to_numpy() * rng.normal(size=len(sets))
    noted = (sets["timed"] & (sets["kind"] == "LOG")).to_numpy()
    told = noted & (rng.random(len(sets)) < 0.8)
    readings = pd.DataFrame(
        {
            "reading_id": [f"r{i:05d}" for i in range(len(sets))],
            "well": sets["well"],
            "depth_m": sets["depth_m"],
            "temperature_degc": np.round((basin.felt["felt_degc"] + noise) * 1.8) / 1.8,
            "kind": kind,
            "since_circulation_h": np.where(noted, basin.felt["since_h"], np.nan),
            "circulation_h": np.where(told, basin.felt["circulation_h"], np.nan),
            "hole_radius_m": sets["bit_in"] * 0.0254 / 2.0,
            "flags": "",
            "source_line": np.arange(len(sets)),
        }
    )
    wells = basin.wells[["well", "easting_m", "northing_m"]].assign(
        surface_temperature_degc=basin.truth.surface_temperature_degc(
            basin.wells["easting_m"].to_numpy(), basin.wells["northing_m"].to_numpy()
        ),
        surface_temperature_std_k=0.5,
    )
    truth = pd.Series(sets["temperature_degc"].to_numpy(), index=readings["reading_id"])
    return tables.Readings.conform(readings), tables.Wells.conform(wells), truth


def judged(readings, wells, truth, order):
    """Estimates of mud-cooled sets in wells without an equilibrium log, with their errors."""
    done = correct(readings, wells, Correction(order=order))
    rows = done.estimates[done.estimates["method"] == order[-1]]
    logged = readings.loc[readings["kind"] == "equilibrium", "well"]
    rows = rows[~rows["well"].isin(logged)]
    own = np.hypot(rows["temperature_std_k"], rows["well_std_k"])
    at = rows["reading_ids"].str.split(";").str[0].map(truth)
    return rows.assign(
        error=rows["temperature_degc"] - at, total_std_k=np.hypot(own, rows["shared_std_k"])
    )


@pytest.fixture(scope="module")
def basins():
    return [as_read(seed) for seed in SEEDS]


@pytest.fixture(scope="module")
def rows(basins):
    """Errors of the local calibration in all basins."""
    parts = [judged(*basin, LOCAL).assign(basin=i) for i, basin in enumerate(basins)]
    return pd.concat(parts, ignore_index=True)


@pytest.fixture(scope="module")
def regional(basins):
    """Errors of a regional formula on the same readings."""
    parts = [judged(*basin, REGIONAL).assign(basin=i) for i, basin in enumerate(basins)]
    return pd.concat(parts, ignore_index=True)


def test_every_basin_can_be_calibrated(rows, regional):
    assert rows["basin"].nunique() == len(SEEDS)
    assert len(rows) == len(regional) > 2000


def test_its_bias_is_that_of_its_own_shared_error(rows, regional):
    bias = rows.groupby("basin")["error"].mean()
    stated = rows.groupby("basin")["shared_std_k"].median()
    assert abs(bias.mean()) < 1.0
    assert np.sqrt(((bias / stated) ** 2).mean()) < 1.5
    assert np.sqrt((bias**2).mean()) < 0.5 * np.sqrt(
        (regional.groupby("basin")["error"].mean() ** 2).mean()
    )


def test_it_is_closer_than_a_regional_formula(rows, regional):
    own, other = (
        frame.groupby("basin")["error"].apply(lambda e: np.sqrt((e**2).mean()))
        for frame in (rows, regional)
    )
    assert (own < other).all()
    assert np.sqrt((own**2).mean()) < 0.8 * np.sqrt((other**2).mean())


def test_honest_intervals(rows):
    """Coverage of 90 % intervals, over all and by depth."""
    inside = rows["error"].abs() < 1.645 * rows["total_std_k"]
    assert 0.83 < inside.mean() < 0.96
    by_depth = inside.groupby(pd.cut(rows["depth_m"], [0, 1500, 2500, 3500, 9000])).mean()
    assert (by_depth > 0.78).all()
