"""Rules that need one reading and its well."""

from __future__ import annotations

import numpy as np
import pandas as pd

from basinheat.flags import mark
from basinheat.ledger import Ledger
from basinheat.projection import WGS84, project
from basinheat.readers import InputTable
from basinheat.screening.remarks import screen_remarks
from basinheat.screening.rounding import Heaped, widen_rounded
from basinheat.settings.wells import Screening

SMALLEST_HOLE_M, LARGEST_HOLE_M = 0.05, 1.5  # diameters drilled for wells (common practice)
LARGEST_STD_K = 50.0
# The air of a hot afternoon above the mean of the year (common practice, no source).
SUMMER_K = 25.0
TROPICS_DEG = 23.4  # within them it is hot in any month
NORTHERN_SUMMER, SOUTHERN_SUMMER = (5, 6, 7, 8, 9), (11, 12, 1, 2, 3)


def screen_records(
    table: InputTable, ledger: Ledger, rules: Screening, std_k: float, crs: str
) -> tuple[InputTable, list[Heaped]]:
    """Apply the rules that need one reading, its well, or the habits of its file.

    Parameters
    ----------
    table : InputTable
        Readings with ``depth_m, total_depth_m, surface_temperature_degc``.
    ledger : Ledger
        Takes refused readings.
    rules : Screening
        Thresholds.
    std_k : float
        Standard uncertainty of a reading that states none, K.
    crs : str
        CRS of easting and northing: where on Earth the summer is.

    Returns
    -------
    table : InputTable
        Without what was refused; gains ``step_k``.
    heaped : list of Heaped
        Files whose temperatures were rounded.
    """
    _times(table, ledger, rules)
    table = _temperature(table, ledger, rules)
    table = screen_remarks(table, ledger, rules, std_k)
    frame = table.frame
    heaped = widen_rounded(frame, rules, std_k)
    gradient = gradient_k_km(frame)
    mark(frame, gradient < rules.gradient_low_k_km, "gradient_low")
    mark(frame, gradient > rules.gradient_high_k_km, "gradient_high")
    deeper = frame["depth"] > frame["total_depth_m"] + rules.deeper_than_total_m
    mark(frame, deeper.to_numpy(), "deeper_than_total_depth")
    logged = (frame["kind"] == "bht").to_numpy()
    mark(frame, logged & (frame["depth"] < frame["casing_shoe"]).to_numpy(), "inside_casing")
    mark(frame, logged & _surface_heat(frame, rules, crs), "surface_heat_possible")
    hot = frame["temperature"].to_numpy(float) > boiling_point_degc(frame["depth_m"].to_numpy())
    mark(frame, hot, "above_boiling_point")
    _vintage(frame, rules, std_k)
    return table, heaped


def boiling_point_degc(depth_m: np.ndarray) -> np.ndarray:
    """Return the boiling point of water under a column of cold water, (n,) in degC.

    ``T = 100 p^(1/4)``, p in bar: within 2 % of the steam tables from 1 to 100 bar (a rule of
    thumb of steam engineers, from memory).

    Parameters
    ----------
    depth_m : ndarray, (n,)
        Below ground, m.
    """
    return 100.0 * (1.013 + 0.0981 * np.maximum(depth_m, 0.0)) ** 0.25


def gradient_k_km(frame: pd.DataFrame) -> np.ndarray:
    """Return the gradient from the surface to each reading, K/km, raw."""
    above = frame["temperature"] - frame["surface_temperature_degc"]
    return (1000.0 * above / frame["depth_m"]).to_numpy(float)


def _temperature(table: InputTable, ledger: Ledger, rules: Screening) -> InputTable:
    """Refuse temperatures that no rock at that depth can have."""
    degc = table.frame["temperature"].to_numpy(float)
    table = ledger.screen(
        table,
        (degc < 0.0) | (degc > rules.hottest_degc),
        "temperature",
        "temperature_impossible",
        f"temperature is {{temperature:.1f}} degC; it must lie between 0 and "
        f'{rules.hottest_degc:g} degC (screening.hottest_degc). Check column "{{header}}" and its '
        "unit.",
    )
    frame = table.frame
    limit = frame["surface_temperature_degc"] + rules.above_surface_k
    return ledger.screen(
        table,
        (frame["temperature"] <= limit).to_numpy(),
        "temperature",
        "not_above_surface_temperature",
        "temperature is {temperature:.1f} degC at {depth_m:.0f} m, less than "
        f"{rules.above_surface_k:g} K above the surface temperature of "
        "{surface_temperature_degc:.1f} degC: air or mud was read, or the unit of column "
        '"{header}" is not {unit_temperature}.',
    )


def _times(table: InputTable, ledger: Ledger, rules: Screening) -> None:
    """Drop times, sizes and uncertainties that can't be; doubt those that rarely are."""
    frame = table.frame
    since = frame["since_circulation"].to_numpy(float)
    longest = rules.longest_since_circulation_h
    ledger.drop(
        table,
        (since <= 0.0) | (since > longest),
        "since_circulation",
        "since_circulation_dropped",
        f"time since circulation is {{since_circulation:.2f}} h, must be above 0 and at most "
        f"{longest:g} h; the reading is used without it.",
    )
    ledger.drop(
        table,
        frame["circulation"].to_numpy(float) <= 0.0,
        "circulation",
        "circulation_dropped",
        "circulation lasted {circulation:.2f} h, must be above 0; used without it.",
    )
    drilled = frame["drilling"].to_numpy(float)
    ledger.drop(
        table,
        (drilled <= 0.0) | (drilled < frame["circulation"].to_numpy(float)),
        "drilling",
        "drilling_dropped",
        "drilling took {drilling:.2f} h, must be above 0 and no less than circulation; used "
        "without it.",
    )
    size = frame["hole_diameter"].to_numpy(float)
    ledger.drop(
        table,
        (size < SMALLEST_HOLE_M) | (size > LARGEST_HOLE_M),
        "hole_diameter",
        "hole_diameter_dropped",
        f"the hole is {{hole_diameter:.3f}} m wide, must lie between {SMALLEST_HOLE_M:g} and "
        f'{LARGEST_HOLE_M:g} m; used without it. Check the unit of column "{{header}}".',
    )
    mud = frame["mud_temperature"].to_numpy(float)
    ledger.drop(
        table,
        (mud < -5.0) | (mud > rules.hottest_degc),
        "mud_temperature",
        "mud_temperature_dropped",
        "the mud is {mud_temperature:.1f} degC, which can't be; used without it.",
    )
    std = frame["temperature_std"].to_numpy(float)
    ledger.drop(
        table,
        (std < 0.0) | (std > LARGEST_STD_K),
        "temperature_std",
        "temperature_std_dropped",
        "the standard uncertainty is {temperature_std:.1f} K, must lie between 0 and "
        f"{LARGEST_STD_K:g} K; used without it.",
    )
    lasted = frame["circulation"].to_numpy(float)
    mark(frame, lasted > rules.longest_circulation_h, "circulation_long")
    mark(frame, lasted > frame["since_circulation"].to_numpy(float), "circulation_exceeds_rest")


def _surface_heat(frame: pd.DataFrame, rules: Screening, crs: str) -> np.ndarray:
    """Tell which temperatures a maximum thermometer may have met in the sun and not in the hole."""
    degc = frame["temperature"].to_numpy(float)
    air = frame["surface_temperature_degc"].to_numpy(float) + SUMMER_K
    cool = degc < np.minimum(air, rules.hottest_air_degc)
    if not cool.any():
        return cool
    month = _number_in_date(frame["date"], 5, 7)
    middle = frame[["easting_m", "northing_m"]].median().to_numpy()
    latitude = float(project(middle[:1], middle[1:], crs, WGS84).y[0])
    if abs(latitude) < TROPICS_DEG:
        return cool
    return cool & np.isin(month, NORTHERN_SUMMER if latitude > 0.0 else SOUTHERN_SUMMER)


def _number_in_date(date: pd.Series, start: int, end: int) -> np.ndarray:
    """Return the year or month of ISO 8601 dates, NaN where it is not noted."""
    # Few different days fill many cells.
    codes, days = pd.factorize(date)
    part = pd.Series(days, dtype="str").str.slice(start, end)
    return pd.to_numeric(part, errors="coerce").to_numpy(float)[codes] if len(days) else np.zeros(0)


def _vintage(frame: pd.DataFrame, rules: Screening, std_k: float) -> None:
    """Widen the uncertainty of readings from the time before good thermometers."""
    year = _number_in_date(frame["date"], 0, 4)
    old = (year < rules.vintage_year) & (frame["kind"] != "corrected").to_numpy()
    stated = frame["temperature_std"].to_numpy(float)
    base = np.where(np.isfinite(stated), stated, std_k)
    frame["temperature_std"] = np.where(old, np.hypot(base, rules.vintage_std_k), stated)
    mark(frame, old, "old_reading")
