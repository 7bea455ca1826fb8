"""Rules that need one reading and its well."""

from __future__ import annotations

import numpy as np
import pandas as pd

from basinheat.flags import mark
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.settings.wells import Screening

# Words that say a temperature was not read (common practice).
ESTIMATED = r"(?i)\b(?:est|estd|estim|estimate|estimated|calc|calculated|nominal|assumed)\b"
SMALLEST_HOLE_M, LARGEST_HOLE_M = 0.05, 1.5  # diameters drilled for wells (common practice)
LARGEST_STD_K = 50.0


def screen_records(table: InputTable, ledger: Ledger, rules: Screening, std_k: float) -> InputTable:
    """Apply the rules that need one reading and its well.

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
    """
    _times(table, ledger, rules)
    table = _temperature(table, ledger, rules)
    frame = table.frame
    gradient = gradient_k_km(frame)
    mark(frame, gradient < rules.gradient_low_k_km, "gradient_low")
    mark(frame, gradient > rules.gradient_high_k_km, "gradient_high")
    deeper = frame["depth"] > frame["total_depth_m"] + rules.deeper_than_total_m
    mark(frame, deeper.to_numpy(), "deeper_than_total_depth")
    _vintage(frame, rules, std_k)
    return table


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


def _vintage(frame: pd.DataFrame, rules: Screening, std_k: float) -> None:
    """Widen the uncertainty of readings from the time before good thermometers."""
    year = pd.to_numeric(frame["date"].str.slice(0, 4), errors="coerce").to_numpy(float)
    old = year < rules.vintage_year
    stated = frame["temperature_std"].to_numpy(float)
    base = np.where(np.isfinite(stated), stated, std_k)
    frame["temperature_std"] = np.where(old, np.hypot(base, rules.vintage_std_k), stated)
    mark(frame, old, "old_reading")
