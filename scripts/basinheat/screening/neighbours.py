"""Rules that compare a reading with the wells around it, and suspected units."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.flags import mark
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.screening.one_record import gradient_k_km
from basinheat.settings.wells import Screening
from basinheat.units import conversion

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]

FEWEST_NEIGHBOURS = 5
DEPTH_CLASSES = 10
READINGS_A_CLASS = 30  # fewer let single readings move the basin's median
SMALLEST_SCALE_K_KM = 2.0  # neighbours closer than this agree by chance
SCATTER_K = 5.0  # raw readings differ by mud cooling (common practice)
MAD_TO_STD = 1.4826  # of a normal distribution
# A slip of unit explains a reading where the gradient it leads to is an ordinary one (METHODS K).
ORDINARY_K_KM = (20.0, 50.0)
IMPLAUSIBLE_K = 10.0  # so far below the lowest of them, a shallow reading is only uncertain
SHALLOW_M = 3000.0
FOOT = 0.3048


@dataclass(frozen=True)
class Expected:
    """What the wells around say about each reading's gradient from the surface.

    Parameters
    ----------
    gradient_k_km, scale_k_km : ndarray, (n,)
        Median and robust scale among the neighbours, at the reading's depth; NaN with too few.
    """

    gradient_k_km: Array
    scale_k_km: Array

    def score(self, gradient_k_km: Array) -> Array:
        """Return how many scales a gradient lies off."""
        return (gradient_k_km - self.gradient_k_km) / self.scale_k_km


def screen_against_neighbours(table: InputTable, ledger: Ledger, rules: Screening) -> InputTable:
    """Refuse readings that only a slip of unit explains; flag outliers among the neighbours.

    A reading is refused where it is an ordinary one in the other unit, the neighbours contradict
    it as it stands and not in the other unit, and neither the total depth nor other depths of the
    same well speak for it; otherwise it is flagged and stays. A unit is proposed, never put in.
    Outliers are flagged, never refused.

    Parameters
    ----------
    table : InputTable
        Readings with ``easting_m, northing_m, depth_m, surface_temperature_degc``.
    ledger : Ledger
        Takes refused readings.
    rules : Screening
        Thresholds.
    """
    if not len(table):
        return table
    around = expected(table.frame, rules.neighbours)
    _note_expected(table.frame, around)
    own_well = _own_well_agrees(table.frame)
    before = len(table)
    for suspected in (_temperature_unit, _depth_unit):
        column, other, mended = suspected(table.frame)
        refuse, doubt = _suspect(table.frame, column, mended, around, own_well, rules)
        mark(table.frame, doubt, f"{column}_unit_suspect")
        table.frame[f"_{column}"], table.frame[f"_{column}_unit"] = refuse, other
        table.frame[f"_{column}_mended"] = mended
    for column in ("temperature", "depth"):
        sentence = (
            "{temperature:.1f} degC at {depth_m:.0f} m is {gradient_k_km:.1f} K/km from the "
            f'surface; with column "{{header}}" in {{_{column}_unit}} it would be '
            f"{{_{column}_mended:.0f}} K/km. Mend the unit or the value; to use it as it is, add "
            "to the decisions: reading {reading_id}, keep."
        )
        refuse = table.frame.pop(f"_{column}").to_numpy(bool)
        table = ledger.screen(table, refuse, column, f"{column}_unit_suspect", sentence)
        del table.frame[f"_{column}_unit"], table.frame[f"_{column}_mended"]
    if len(table) < before:
        around = expected(table.frame, rules.neighbours)
    _note_expected(table.frame, around)
    off = np.abs(table.frame["score"].to_numpy(float)) > rules.outlier_score
    mark(table.frame, off, "spatial_outlier")
    return table


def _note_expected(frame: pd.DataFrame, around: Expected) -> None:
    """Give readings the gradient they show, the temperature expected of them, and the score."""
    frame["gradient_k_km"] = gradient_k_km(frame)
    rise = around.gradient_k_km * frame["depth_m"].to_numpy(float) / 1000.0
    frame["expected_degc"] = frame["surface_temperature_degc"].to_numpy(float) + rise
    frame["score"] = around.score(frame["gradient_k_km"].to_numpy(float))


def expected(frame: pd.DataFrame, neighbours: int) -> Expected:
    """Return the gradient that the nearest wells lead to expect, at each reading's depth.

    The basin's median gradient by depth is taken off first, so that deep and shallow readings can
    be compared; then each well has the median of its readings, and the neighbours have the median
    and the median absolute deviation of theirs.

    Parameters
    ----------
    frame : DataFrame, (n,)
        Columns ``row`` (of the well), ``easting_m, northing_m, depth_m, temperature,
        surface_temperature_degc``.
    neighbours : int
        Nearest other wells to compare with.
    """
    from scipy.spatial import cKDTree

    gradient, depth = gradient_k_km(frame), frame["depth_m"].to_numpy(float)
    regional = _by_depth(depth, gradient)
    code, names = pd.factorize(frame["row"], sort=True)
    wells = (
        frame[["easting_m", "northing_m"]]
        .assign(value=gradient - regional, code=code)
        .groupby("code")
        .median()
    )
    nothing = np.full(len(frame), np.nan)
    count = min(neighbours, len(names) - 1)
    if count < FEWEST_NEIGHBOURS:
        return Expected(nothing, nothing)
    places = wells[["easting_m", "northing_m"]].to_numpy(float)
    nearest = cKDTree(places).query(places, k=count + 1)[1]
    values = wells["value"].to_numpy(float)
    own = nearest == np.arange(len(names))[:, None]
    # A well on the very spot of another may not find itself: then the last neighbour goes.
    own[~own.any(axis=1), -1] = True
    around = values[nearest[~own].reshape(len(names), count)]
    # The median that looks for gaps takes ten times as long.
    median = np.nanmedian if np.isnan(values).any() else np.median
    middle = median(around, axis=1)
    mad = median(np.abs(around - middle[:, None]), axis=1)
    overall = np.nanmedian(np.abs(values - np.nanmedian(values)))
    floor = max(0.5 * MAD_TO_STD * overall, SMALLEST_SCALE_K_KM)
    scale = np.hypot(np.maximum(MAD_TO_STD * mad, floor)[code], 1000.0 * SCATTER_K / depth)
    return Expected(regional + middle[code], scale)


def _by_depth(depth_m: Array, gradient_k_km: Array) -> Array:
    """Return the basin's median gradient at each depth, straight lines between depth classes."""
    known = np.isfinite(gradient_k_km)
    number = int(np.clip(known.sum() // READINGS_A_CLASS, 1, DEPTH_CLASSES))
    edges = np.unique(np.quantile(depth_m[known], np.linspace(0.0, 1.0, number + 1)))
    place = np.clip(np.searchsorted(edges, depth_m[known], side="right") - 1, 0, len(edges) - 2)
    classes = pd.DataFrame({"z": depth_m[known], "g": gradient_k_km[known]}).groupby(
        np.maximum(place, 0)
    )
    middle = classes.median()
    return np.interp(depth_m, middle["z"].to_numpy(), middle["g"].to_numpy())


def _temperature_unit(frame: pd.DataFrame) -> tuple[str, Array, Array]:
    """Return the column, the other unit, and the gradient if the number were in that unit."""
    scales = {unit: conversion(unit, "degC")[0] for unit in frame["unit:temperature"].unique()}
    scale = frame["unit:temperature"].map(scales).to_numpy(float)
    degc = frame["temperature"].to_numpy(float)
    fahrenheit = scale < 0.9
    mended = np.where(fahrenheit, degc * 1.8 + 32.0, (degc - 32.0) / 1.8)
    above = mended - frame["surface_temperature_degc"].to_numpy(float)
    gradient = 1000.0 * above / frame["depth_m"].to_numpy(float)
    return "temperature", np.where(fahrenheit, "degC", "degF"), gradient


def _depth_unit(frame: pd.DataFrame) -> tuple[str, Array, Array]:
    """Return the column, the other unit, and the gradient if the number were in that unit."""
    scales = {unit: conversion(unit, "m")[0] for unit in frame["unit:depth"].unique()}
    feet = frame["unit:depth"].map(scales).to_numpy(float) < 0.5
    factor = np.where(feet, 1.0 / FOOT, FOOT)
    below = frame["vertical_m"].to_numpy(float)
    depth = below * factor - (below - frame["depth_m"].to_numpy(float))
    above = (frame["temperature"] - frame["surface_temperature_degc"]).to_numpy(float)
    gradient = np.where(depth > 0.0, 1000.0 * above / np.where(depth > 0.0, depth, 1.0), np.nan)
    return "depth", np.where(feet, "m", "ft"), gradient


def _suspect(
    frame: pd.DataFrame,
    column: str,
    mended: Array,
    around: Expected,
    own_well: tuple[Flags, Flags],
    rules: Screening,
) -> tuple[Flags, Flags]:
    """Return which readings a slip of unit makes unusable, and which it makes doubtful."""
    gradient, depth = (frame[name].to_numpy(float) for name in ("gradient_k_km", "depth_m"))
    lowest, highest = ORDINARY_K_KM
    explained = (mended >= lowest) & (mended <= highest)
    short = (lowest - gradient) * depth / 1000.0 > IMPLAUSIBLE_K
    score, limit = around.score(gradient), rules.outlier_score
    agrees = np.abs(around.score(mended)) <= limit
    # Mud cools shallow rock below 10 K/km: without the neighbours' word that is a doubt only.
    cold = (gradient < lowest) & short & explained
    hot = gradient > rules.gradient_high_k_km
    colder, hotter = own_well
    alone = ~hotter
    if column == "temperature":
        warm = frame["temperature"].to_numpy(float) > rules.unit_suspect_degc
        hot |= warm & (depth < SHALLOW_M)
    else:
        as_given, in_other = _total_depth(frame)
        alone = (alone | in_other) & ~as_given
    hot &= explained & (mended < gradient)
    likely = hot
    if column == "depth":
        # With a total depth that only the other unit reaches, an ordinary excess is enough.
        likely = hot | (explained & in_other & (gradient > highest))
    refuse = (cold & (score < -limit) & ~colder) | (likely & (score > limit) & alone)
    refuse &= agrees
    return refuse, (hot | (cold & (gradient < rules.gradient_low_k_km))) & ~refuse


def _total_depth(frame: pd.DataFrame) -> tuple[Flags, Flags]:
    """Tell where the well's total depth speaks for a depth as given, and where for metres."""
    total, depth = (frame[name].to_numpy(float) for name in ("total_depth_m", "depth"))
    other = depth / FOOT
    as_given = other > 1.05 * total + 10.0
    # Only a log is read at the bottom; tests and equilibrium logs may stand anywhere above.
    bottom = (frame["kind"] == "bht").to_numpy()
    return as_given, bottom & (other <= total + 10.0) & (depth < 0.5 * total)


def _own_well_agrees(frame: pd.DataFrame) -> tuple[Flags, Flags]:
    """Tell which readings those at other depths of their well say are not too cold, too hot."""
    gradient = frame["gradient_k_km"].to_numpy(float)
    values = frame[["row", "depth_m"]].assign(gradient=gradient)
    wells = values.groupby("row")
    deepest, shallowest = (wells["depth_m"].transform(how) for how in ("max", "min"))
    spread = (deepest - shallowest > 0.2 * deepest).to_numpy()
    middle = wells["gradient"].transform("median").to_numpy()
    return spread & (gradient >= 0.75 * middle), spread & (middle >= 0.75 * gradient)
