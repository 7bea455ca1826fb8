"""What was noted of the truth: rounded, in field units, partly missing or wrong."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray
from pyproj import Transformer

from basinheat.synthetic.geography import CRS
from basinheat.synthetic.rocks import Rocks
from basinheat.synthetic.truth import Truth
from basinheat.synthetic.wells import Paths, rig_to_ground_m

Array = NDArray[np.float64]

FOOT = 0.3048
_NO_LAYERS_SHARE, _POROSITY_SHARE, _MEASURED_WELLS = 0.12, 0.08, 5
# The salt goes by its field name; the config maps it to the catalogue's.
LITHOLOGY_NAMES = {"halite": "salt"}


def note_wells(wells: pd.DataFrame, paths: Paths) -> pd.DataFrame:
    """Return wells.csv as text: geographic coordinates, elevations and depths in feet.

    At sea the ground elevation is blank and the water depth noted; on land the reverse.
    """
    to_geographic = Transformer.from_crs(CRS, "EPSG:4326", always_xy=True)
    lon, lat = to_geographic.transform(wells.easting_m.to_numpy(), wells.northing_m.to_numpy())
    sea = wells.water_depth_m.to_numpy() > 0.0
    total = paths.measured(wells.depth_m.to_numpy() + rig_to_ground_m(wells), np.arange(len(wells)))
    ground = _numbers(wells.ground_elevation_m / FOOT, 0)
    water = _numbers(wells.water_depth_m / FOOT, 0)
    return pd.DataFrame(
        {
            "API": wells["well"],
            "FIELD": wells.field,
            "LONG": _numbers(lon, 6),
            "LAT": _numbers(lat, 6),
            "GL_FT": np.where(sea, "", ground),
            "KB_FT": _numbers(wells.datum_elevation_m / FOOT, 0),
            "WD_FT": np.where(sea, water, ""),
            "TD_FT": _numbers(total / FOOT, 0),
        }
    )


def note_readings(
    rng: np.random.Generator,
    felt: pd.DataFrame,
    sets: pd.DataFrame,
    wells: pd.DataFrame,
    hard: bool,
) -> pd.DataFrame:
    """Return readings.csv as text: feet, degF, inches, hours, dates."""
    index = felt["set"].to_numpy()
    a = sets.iloc[index].reset_index(drop=True)
    kind, operator = a.kind.to_numpy(), wells.operator.to_numpy()[a.well]
    std = np.select([kind == "STATIC", kind == "DST"], [0.5, 2.0], 0.8)
    shared = np.where(kind == "DST", rng.normal(0.0, 0.5), 0.0)
    fahrenheit = (felt.felt_degc + shared + rng.normal(0.0, std)) * 1.8 + 32.0
    coarse = (operator < 2) & (kind == "LOG") & hard
    rounded = np.where(coarse, 5.0 * np.round(fahrenheit / 5.0), np.round(fahrenheit))
    depth = a.measured_depth_m + rng.normal(0.0, 1.5 if hard else 0.3, len(a))
    since, circulation = _noted_times(rng, felt, a, index, hard)
    mud_noted = rng.random(len(sets))[index] < 0.10
    mud = (felt.mud_temperature_degc + rng.normal(0.0, 3.0, len(a))) * 1.8 + 32.0
    letter = np.array(list("ABCD"))[felt["run"]]
    repeated = a.runs.to_numpy() > 1
    log = kind == "LOG"
    return pd.DataFrame(
        {
            "API": wells["well"].to_numpy()[a.well],
            "DEPTH_FT": _numbers(depth / FOOT, 0),
            "BHT_F": np.where(kind == "STATIC", _numbers(fahrenheit, 1), _numbers(rounded, 0)),
            "SOURCE": kind,
            "TSC_H": _hours(since),
            "CIRC_H": _hours(circulation),
            "BIT_IN": np.where(log, _numbers(a.bit_in, 2), ""),
            "MUD_F": _numbers(np.where(log & mud_noted & a.timed, mud, np.nan), 0),
            "LOGGED": _dates(rng, a, felt, wells),
            "RUN": np.where(log, a.section.astype(str) + np.where(repeated, letter, ""), ""),
        }
    )


def note_layers(
    rng: np.random.Generator, truth: Truth, wells: pd.DataFrame, paths: Paths, hard: bool
) -> pd.DataFrame:
    """Return layers.csv as text: tops along the hole below the rig floor, in feet.

    Some wells have no layers, some state porosity, a few the conductivity of the wet rock
    measured at 25 degC.
    """
    east, north = wells.easting_m.to_numpy(), wells.northing_m.to_numpy()
    bases, factors = truth.geology.bases_m(east, north), truth.geology.factors(east, north)
    picks = bases + rng.normal(0.0, 10.0 if hard else 0.0, bases.shape)
    fate = rng.random(len(wells))
    measured = rng.permutation(np.flatnonzero(fate > _NO_LAYERS_SHARE))[:_MEASURED_WELLS]
    porous = rng.random(len(wells)) < _POROSITY_SHARE
    porous[measured] = True
    rows = []
    for i in np.flatnonzero(fate > _NO_LAYERS_SHARE):
        for layer, top, base in _intervals(picks[i], wells.depth_m[i]):
            rock = truth.geology.rock_of_layer[layer]
            core = (np.nan, np.nan)
            if porous[i]:
                core = _core(rng, truth.geology.rocks, rock, (top + base) / 2, factors[i, rock])
            wet = core[1] if i in measured else np.nan
            rows.append((i, top, base, truth.geology.rocks.names[rock], core[0], wet))
    columns = ["row", "top_m", "base_m", "rock", "porosity", "wet_w_mk"]
    met = pd.DataFrame(rows, columns=columns)
    row = met["row"].to_numpy(dtype=np.int64)
    to_rig = rig_to_ground_m(wells)[row]
    return pd.DataFrame(
        {
            "API": wells["well"].to_numpy()[row],
            "TOP_FT": _numbers(paths.measured(met.top_m.to_numpy() + to_rig, row) / FOOT, 0),
            "BASE_FT": _numbers(paths.measured(met.base_m.to_numpy() + to_rig, row) / FOOT, 0),
            "LITH": met.rock.replace(LITHOLOGY_NAMES),
            "PHI": _numbers(met.porosity, 3),
            "COND_WMK": _numbers(met.wet_w_mk, 2),
        }
    )


def note_surveys(wells: pd.DataFrame, paths: Paths) -> pd.DataFrame:
    """Return surveys.csv as text for the deviated wells."""
    everyone = np.arange(len(wells))
    total = paths.measured(wells.depth_m.to_numpy() + rig_to_ground_m(wells), everyone)
    parts = [
        paths.stations(i, total[i]).assign(API=wells["well"][i])
        for i in np.flatnonzero(paths.angle_rad > 0.0)
    ]
    if not parts:
        return pd.DataFrame({"API": [], "DEPTH_FT": [], "INCL": [], "AZIM": []}, dtype=str)
    out = pd.concat(parts, ignore_index=True)
    return pd.DataFrame(
        {
            "API": out.API,
            "DEPTH_FT": _numbers(out.measured_depth_m / FOOT, 1),
            "INCL": _numbers(out.inclination_deg, 2),
            "AZIM": _numbers(out.azimuth_deg, 1),
        }
    )


def _intervals(picks: Array, bottom: float) -> list[tuple[int, float, float]]:
    """Return layer, top and base of what a well met, without gaps; slivers go unnoticed."""
    out, top = [], 0.0
    for layer, base in enumerate(np.minimum(np.append(picks, np.inf), bottom)):
        if base - top > 12.0:
            out.append((layer, top, base))
            top = base
    if out and top < bottom:
        out[-1] = (out[-1][0], out[-1][1], bottom)
    return out


def _noted_times(
    rng: np.random.Generator, felt: pd.DataFrame, a: pd.DataFrame, index: Array, hard: bool
) -> tuple[Array, Array]:
    """Return noted times since circulation and of circulation, in h, NaN where not noted."""
    n = int(index.max()) + 1
    error = rng.uniform(0.10, 0.25) if hard else 0.0
    wrong = (rng.random((2, n)) < 0.3) * rng.normal(0.0, error, (2, n))
    since = felt.since_h.to_numpy() * np.exp(wrong[0])[index]
    circulation = felt.circulation_h.to_numpy() * np.exp(wrong[1])[index]
    noted = rng.random(n)[index] < 0.8
    timed = a.timed.to_numpy() & (a.kind == "LOG").to_numpy()
    # Times are read off the tour sheet to the quarter or half hour.
    since = np.where(timed, np.round(since * 4.0) / 4.0, np.nan)
    circulation = np.maximum(np.round(circulation * 2.0) / 2.0, 0.5)
    return since, np.where(timed & noted, circulation, np.nan)


def _core(
    rng: np.random.Generator, rocks: Rocks, rock: int, depth_m: float, factor: float
) -> tuple[float, float]:
    """Return measured porosity and conductivity at 25 degC of a layer."""
    kind, depth = np.array([rock]), np.array([depth_m])
    porosity = rocks.porosity_at(kind, depth)[0] + rng.normal(0.0, 0.01)
    wet = rocks.conductivity(kind, depth, np.array([25.0]), np.array([factor]))[0]
    return max(float(porosity), 0.0), float(wet * np.exp(rng.normal(0.0, 0.05)))


def _dates(
    rng: np.random.Generator, a: pd.DataFrame, felt: pd.DataFrame, wells: pd.DataFrame
) -> NDArray[np.str_]:
    """Return the dates of the readings; a section a month, a run on the day it was read."""
    n = int(felt["set"].max()) + 1
    day_of_well = rng.integers(0, 250, len(wells))[a.well]
    hour = rng.uniform(0.0, 24.0, n)[felt["set"]]
    later = np.floor((hour + felt.since_h.fillna(0.0)) / 24.0).astype(int)
    after = np.select([a.kind == "DST", a.kind == "STATIC"], [95, 800], 21 * (a.section - 1))
    start = np.array([f"{year}-01-01" for year in wells.year], dtype="datetime64[D]")[a.well]
    days = start + (day_of_well + after + later).astype("timedelta64[D]")
    # Old headers often lost their date.
    lost = rng.random(n)[felt["set"]] < 0.04
    return np.where(lost, "", np.datetime_as_string(days, unit="D"))


def _hours(values: Array) -> NDArray[np.object_]:
    """Return hours as text without trailing zeros, NaN as blank."""
    return np.array([f"{value:.4g}" if np.isfinite(value) else "" for value in values], object)


def _numbers(values: Array | pd.Series, digits: int) -> NDArray[np.object_]:
    """Return numbers as text with fixed digits, NaN as blank."""
    text = [f"{value:.{digits}f}" if np.isfinite(value) else "" for value in np.asarray(values)]
    return np.array(
        [t[1:] if t.startswith("-") and not t.strip("-0.") else t for t in text], object
    )
