"""Which unit of temperature or depth makes the readings of a file ordinary."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import product
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.firstlook.inputfile import InputFile
from basinheat.ingest.identity import keys
from basinheat.screening.neighbours import ORDINARY_K_KM
from basinheat.units import conversion

Array = NDArray[np.float64]

SHALLOWEST_M = 300.0  # above, the surface temperature decides and not the gradient
USUAL_K_KM = 30.0  # of continents (common practice)
# How far readings in the right units end off the surface temperature: conductivities that rise with
# depth, BHTs still cooled at depth (common practice, no source).
LOW_INTERCEPT_K, NATURAL_STD_K = 15.0, 10.0
SURE_STD = 2.0  # standard errors that chance hardly makes
# Natural standard deviations off zero from which an intercept is no chance though the gradient is
# ordinary; with few readings too (common practice, no source).
CLEARLY_OFF, HARDLY_OFF = 3.5, 5.0
FEW_READINGS = 30
MEDIAN_STD = 1.2533  # of a median over that of a mean, normal errors: sqrt(pi / 2)
MAD_STD = 1.4826  # standard deviation over median absolute deviation, normal errors
FEWEST = 5  # readings or wells that tell something of a whole file
USUAL_SURFACE_DEGC = 10.0  # where the well was refused or is not known
LEAST_SPREAD = 1.3  # of the deep third over the shallow one, to carry readings up to the surface
TEMPERATURE_UNITS, DEPTH_UNITS = ("degC", "degF", "K"), ("m", "ft")
# Depths in feet over depths in metres, and the reverse: 3.28 and 0.305, with the room between the
# deepest log and the total depth (common practice).
AS_FEET, AS_METRES = (2.7, 3.7), (0.27, 0.37)


@dataclass(frozen=True)
class Raw:
    """Readings of one file with what their wells say, before any rule.

    Parameters
    ----------
    temperature_degc, depth_m : ndarray, (n,)
        As the config reads them; depth below the datum.
    surface_degc, height_m, total_depth_m : ndarray, (n,)
        Of the well: temperature at ground or sea floor, datum above it, total depth.
    well : ndarray of int, (n,)
        Number of the reading's well among those of the file.
    """

    temperature_degc: Array
    depth_m: Array
    surface_degc: Array
    height_m: Array
    total_depth_m: Array
    well: NDArray[np.int64]


def raw_readings(file: InputFile, wells: pd.DataFrame, rule: str = "exact") -> Raw:
    """Return the readings of a file with what the wells that were kept say.

    Parameters
    ----------
    file : InputFile
        A file of readings.
    wells : DataFrame
        ``tables.Wells`` with surface temperatures.
    rule : str, optional
        What makes two names one well (``inputs.well_names``).
    """
    frame = file.frame
    depth = frame["vertical_depth"].fillna(frame["depth"]).to_numpy(float)
    code, place = of_wells(frame["well"], wells, rule)
    known = place >= 0

    def of_well(column: str, otherwise: float) -> Array:
        out = np.full(len(frame), otherwise)
        out[known] = wells[column].to_numpy(float)[place[known]]
        return np.where(np.isfinite(out), out, otherwise)

    height = of_well("datum_elevation_m", np.nan) - of_well("ground_elevation_m", np.nan)
    return Raw(
        frame["temperature"].to_numpy(float),
        depth,
        of_well("surface_temperature_degc", USUAL_SURFACE_DEGC),
        np.nan_to_num(height),
        of_well("total_depth_m", np.nan),
        code,
    )


def of_wells(
    names: pd.Series, wells: pd.DataFrame, rule: str
) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    """Return the number of each row's well in its file, and its row among the wells, -1 for none.

    Parameters
    ----------
    names : Series of text, (n,)
        Of a file of readings or layers.
    wells : DataFrame
        ``tables.Wells``.
    rule : str
        What makes two names one well (``inputs.well_names``).
    """
    code, there = pd.factorize(names)
    row = {key: at for at, key in enumerate(keys(list(wells["well"]), rule))}
    place = np.array([*(row.get(key, -1) for key in keys(list(there), rule)), -1], np.int64)
    return code, place[code]


def median_gradient(
    raw: Raw, temperature: tuple[str, str], depth: tuple[str, str]
) -> tuple[float, int]:
    """Return the median raw gradient, K/km, and the readings it rests on.

    Parameters
    ----------
    raw : Raw
        Readings.
    temperature, depth : tuple of str
        The unit the numbers were read in, and the unit they are taken for instead.
    """
    degc = _as_if(raw.temperature_degc, *temperature, "degC")
    below = _as_if(raw.depth_m, *depth, "m") - raw.height_m
    use = np.isfinite(degc) & (_as_if(raw.depth_m, *depth, "m") >= SHALLOWEST_M) & (below > 0.0)
    if use.sum() < FEWEST:
        return np.nan, int(use.sum())
    return float(np.median(1000.0 * (degc - raw.surface_degc)[use] / below[use])), int(use.sum())


def intercept_k(
    raw: Raw, temperature: tuple[str, str], depth: tuple[str, str]
) -> tuple[float, float]:
    """Return where the readings end at the surface, K above the surface temperature, and its error.

    By the resistant line through the medians of the shallow and the deep third (Tukey 1977,
    Exploratory data analysis; from memory); NaN where the thirds lie too close together. Readings
    of one well err together, so the standard error counts wells.

    Parameters
    ----------
    raw, temperature, depth
        As for :func:`median_gradient`.

    Returns
    -------
    intercept_k, std_k : float
        K.
    """
    degc = _as_if(raw.temperature_degc, *temperature, "degC") - raw.surface_degc
    below = _as_if(raw.depth_m, *depth, "m") - raw.height_m
    use = np.isfinite(degc) & (below > 0.0)
    if use.sum() < 3 * FEWEST:
        return np.nan, np.nan
    degc, below, well = degc[use], below[use], raw.well[use]
    low, high = np.quantile(below, (1.0 / 3.0, 2.0 / 3.0))
    parts = below <= low, below >= high
    (z0, t0), (z1, t1) = ((np.median(below[part]), np.median(degc[part])) for part in parts)
    if z1 < LEAST_SPREAD * z0:
        return np.nan, np.nan
    slope = (t1 - t0) / (z1 - z0)
    rest = degc - t0 - slope * (below - z0)
    scatter = MAD_STD * float(np.median(np.abs(rest - np.median(rest))))
    n0, n1 = (len(np.unique(well[part])) for part in parts)
    error = MEDIAN_STD * scatter * np.sqrt(z1**2 / n0 + z0**2 / n1) / (z1 - z0)
    return float(t0 - z0 * slope), float(error)


def judge_units(
    file: InputFile, raw: Raw, low_k_km: float, high_k_km: float
) -> dict[str, Any] | None:
    """Return the file's median gradient, and the units that would make it an ordinary one.

    Parameters
    ----------
    file : InputFile
        A file of readings.
    raw : Raw
        Its readings.
    low_k_km, high_k_km : float
        Outside of these a median gradient can hardly be, K/km.

    Returns
    -------
    dict or None
        ``gradient_k_km, readings, impossible``; ``intercept_k``: where the readings end at the
        surface, given only where that is what looks wrong; ``instead``: units by column and the
        gradient with them, empty where none makes it ordinary. None with too few readings.
    """
    own = file.unit("temperature"), file.unit("depth")
    as_given, count = median_gradient(raw, (own[0], own[0]), (own[1], own[1]))
    if not np.isfinite(as_given):
        return None
    lowest, highest = ORDINARY_K_KM
    found: dict[str, Any] = {
        "gradient_k_km": as_given,
        "intercept_k": None,
        "readings": count,
        "impossible": not low_k_km <= as_given <= high_k_km,
        "instead": [],
    }
    ordinary = lowest <= as_given <= highest
    if ordinary:
        # Degrees Fahrenheit over feet look like an ordinary gradient; the intercept does not.
        high, error = intercept_k(raw, (own[0], own[0]), (own[1], own[1]))
        off = HARDLY_OFF if count < FEW_READINGS else CLEARLY_OFF
        if not high > np.hypot(SURE_STD * error, off * NATURAL_STD_K):
            return found
        found["intercept_k"] = high
    choices = product(_units(own[0], TEMPERATURE_UNITS), _units(own[1], DEPTH_UNITS))
    for degree, length in choices:
        gradient, readings = median_gradient(raw, (own[0], degree), (own[1], length))
        changed = {"temperature": degree} if degree != own[0] else {}
        changed |= {"depth": length} if length != own[1] else {}
        # A unit that throws most readings out explains nothing.
        explains = bool(changed) and lowest <= gradient <= highest and readings >= 0.5 * count
        if explains and ordinary:
            # Both are needed: what is left is small, and what was found is what the unit makes.
            rest, rest_std = intercept_k(raw, (own[0], degree), (own[1], length))
            explains = abs(rest) < np.hypot(SURE_STD * rest_std, LOW_INTERCEPT_K)
            explains = explains and _made_by(raw, own[0], degree, high, error)
        if explains:
            found["instead"].append({"units": changed, "gradient_k_km": gradient})
    found["instead"].sort(
        key=lambda each: (len(each["units"]), abs(each["gradient_k_km"] - USUAL_K_KM))
    )
    return found


def depth_ratio(raw: Raw) -> tuple[float, int]:
    """Return the median of deepest reading over total depth, and the wells it rests on."""
    known = np.isfinite(raw.depth_m) & (raw.total_depth_m > 0.0)
    share = np.full(raw.well.max(initial=-1) + 1, -np.inf)
    np.maximum.at(share, raw.well[known], raw.depth_m[known] / raw.total_depth_m[known])
    share = share[np.isfinite(share)]
    return (float(np.median(share)), len(share)) if len(share) >= FEWEST else (np.nan, len(share))


def _made_by(raw: Raw, own: str, other: str, found_k: float, error_k: float) -> bool:
    """Tell whether an intercept is that of readings in another unit of temperature.

    The surface temperature written in the other unit and read in the own one ends there: degF read
    as degC at 32 + 0.8 T0 above the surface.
    """
    surface = float(np.nanmedian(raw.surface_degc))
    due = float(_as_if(np.array([surface]), other, own, "degC")[0]) - surface
    # As wide in the unit of the numbers as right readings are off their surface temperature.
    return bool(abs(found_k - due) <= np.hypot(SURE_STD * error_k, 1.8 * LOW_INTERCEPT_K))


def _units(own: str, usual: tuple[str, ...]) -> tuple[str, ...]:
    """Return the unit as given first, then the usual others."""
    scale = conversion(own, usual[0])
    return (own, *(unit for unit in usual if conversion(unit, usual[0]) != scale))


def _as_if(values: Array, own: str, other: str, unit: str) -> Array:
    """Return numbers read in one unit as if they had been written in another."""
    if own == other:
        return values
    scale, offset = conversion(own, unit)
    to_scale, to_offset = conversion(other, unit)
    return (values - offset) / scale * to_scale + to_offset
