"""Questions about units: headers, medians, gradients, depths, the surface temperature."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

import numpy as np

from basinheat.firstlook.gradients import AS_FEET, AS_METRES, Raw, depth_ratio, judge_units
from basinheat.firstlook.headers import unit_in
from basinheat.firstlook.inputfile import InputFile
from basinheat.firstlook.proposals import setting
from basinheat.firstlook.questions import (
    CAUSES,
    LIKELY,
    MANY,
    PRESSING,
    UNITS,
    UNITS_OF,
    WORTH_A_LOOK,
    Question,
    ask,
)
from basinheat.settings.columns import INPUT_COLUMNS
from basinheat.settings.wells import Screening
from basinheat.units import conversion

# Where the median of a column ordinarily lies, in its canonical unit, and the units it is often
# written in (common practice, no source).
ORDINARY = {
    "hole_diameter": (0.1, 0.7, ("in", "mm", "cm")),
    "since_circulation": (0.5, 60.0, ("min", "d")),
    "circulation": (0.2, 30.0, ("min",)),
    "drilling": (0.5, 500.0, ("min", "d")),
    "mud_temperature": (-2.0, 150.0, ("degF", "K")),
    "surface_temperature": (-15.0, 32.0, ("degF", "K")),
    "conductivity": (0.5, 8.0, ("mW/(m K)",)),
    "conductivity_std": (0.0, 3.0, ("mW/(m K)",)),
    "porosity": (0.0, 0.7, ("percent",)),
    "heat_production": (0.0, 10.0, ("nW/m3",)),
    "depth": (50.0, 6000.0, ("ft", "km")),
    "total_depth": (50.0, 6000.0, ("ft", "km")),
    "temperature": (5.0, 170.0, ("degF", "K")),
    "inclination": (0.0, 100.0, ("rad",)),
}
# Yearly means of the ground at the hottest places (common practice, no source).
WARMEST_GROUND_DEGC = 32.0
_FLAGS = {
    "elevation_suspect": "lie off the elevation raster. Is the unit or the datum of "
    "ground_elevation another one, or the crs of the file?",
    "rig_floor_suspect": "have a depth datum too high above the ground, or below it. Are "
    "datum_elevation and ground_elevation in the same unit, above sea level, and not exchanged?",
    "deeper_than_total_depth": "lie deeper than the well's total depth. Are both in the unit that "
    "is stated, and both along the hole?",
    "ballpark_datum_shift": "could be moved to the datum of the maps only roughly. Is the crs "
    "right?",
    "temperature_unit_suspect": "are doubted: another unit of temperature would explain them. Is "
    "a part of the file in another unit?",
    "depth_unit_suspect": "are doubted: another unit of depth would explain them. Is a part of the "
    "file in another unit?",
    "vertical_depth_below_measured": "have a vertical depth greater than the measured one. Are "
    "the columns exchanged?",
}


def about_header_units(file: InputFile, entry: Mapping[str, Any]) -> Iterator[Question]:
    """Ask where the header names another unit than the one the numbers are read in."""
    wrong = {}
    for column in entry["columns"]:
        name = column["name"]
        canonical = INPUT_COLUMNS[file.table][name]
        if canonical.text or name in ("x", "y") or column["unit"].startswith("by row"):
            continue
        named = unit_in(column["header"], canonical.unit)
        if named and not _same(named, file.unit(name), canonical.unit):
            wrong[name] = (column["header"], named, file.unit(name))
    if wrong:
        told = ", ".join(f'"{header[:60]}" is read in {read or "no unit"}'
                         for header, _, read in wrong.values())  # fmt: skip
        lines = {"units": {name: named for name, (_, named, _) in wrong.items()}}
        yield ask(file, PRESSING, f"Headers name another unit: {told}.",
                  f"Add to {file.place} {setting(**lines)}?", lines, cause=UNITS)  # fmt: skip


def about_medians(file: InputFile, entry: Mapping[str, Any]) -> Iterator[Question]:
    """Ask where the median of a column is an ordinary one in another unit only."""
    for column in entry["columns"]:
        name, middle = column["name"], column.get("middle")
        if name not in ORDINARY or middle is None or column["unit"].startswith("by row"):
            continue
        if column["stand_ins"]:
            continue  # asked about as such, and no unit explains them
        low, high, others = ORDINARY[name]
        if low <= middle <= high:
            continue
        canonical = INPUT_COLUMNS[file.table][name].unit
        scale, offset = conversion(file.unit(name), canonical)
        written = (middle - offset) / scale
        mended = (np.dot(conversion(unit, canonical), (written, 1.0)) for unit in others)
        better = [unit for unit, value in zip(others, mended, strict=True) if low <= value <= high]
        question = (
            f"Add {setting(units={name: better[0]})} to {file.place}?"
            if better
            else "Is this the right column, and the right unit?"
        )
        yield ask(
            file,
            LIKELY,
            f'The median of column "{column["header"][:60]}" is {written:.5g} '
            f"{file.unit(name) or ''}".rstrip()
            + f"; ordinary is {low:g} to {high:g} {canonical}".rstrip()
            + ".",
            question,
            {"units": {name: better[0]}} if better else {},
            cause=UNITS,
        )


def about_gradient(file: InputFile, raw: Raw, rules: Screening) -> Iterator[Question]:
    """Ask where the median gradient of the file is no ordinary one."""
    found = judge_units(file, raw, rules.gradient_low_k_km, rules.gradient_high_k_km)
    if found is None or not (found["impossible"] or found["instead"]):
        return
    seen = (
        f"The median gradient of {found['readings']:,} readings is "
        f"{found['gradient_k_km']:.0f} K/km."
    )
    if found["intercept_k"] is not None:
        seen += f" Carried up, they end {found['intercept_k']:.0f} K above the surface temperature."
    if not found["instead"]:
        question = "Are units, columns and surface_temperature right?"
        yield ask(file, PRESSING, seen, question, cause=UNITS, of=("temperature", "depth"))
        return
    least = len(found["instead"][0]["units"])
    choices = [
        f"{setting(units=each['units'])} (then {each['gradient_k_km']:.0f} K/km)"
        for each in found["instead"]
        if len(each["units"]) == least
    ]
    weight = PRESSING if found["impossible"] else LIKELY
    lines = {"units": found["instead"][0]["units"]} if len(choices) == 1 else {}
    question = f"Add to {file.place} {' or '.join(choices)}?"
    yield ask(file, weight, seen, question, lines, cause=UNITS, of=("temperature", "depth"))


def about_total_depth(file: InputFile, raw: Raw) -> Iterator[Question]:
    """Ask where depths of readings and total depths seem to be in different units."""
    ratio, wells = depth_ratio(raw)
    if AS_FEET[0] <= ratio <= AS_FEET[1]:
        lines = setting(units={"depth": "ft"})
        other = setting(units={"total_depth": "m"})
    elif AS_METRES[0] <= ratio <= AS_METRES[1]:
        lines = setting(units={"depth": "m"})
        other = setting(units={"total_depth": "ft"})
    else:
        return
    yield ask(
        file,
        PRESSING,
        f"In {wells:,} wells the deepest reading lies at {ratio:.2f} times the total depth "
        "(a metre is 3.28 ft).",
        f"Is {lines} missing in {file.place}, or is total_depth of the wells not in the unit "
        f"stated ({other} in inputs.wells)?",
        cause=UNITS,
        of=("depth", "total_depth"),
    )


def about_flags(file: InputFile, entry: Mapping[str, Any]) -> Iterator[Question]:
    """Ask about doubts that many kept rows share."""
    kept = max(entry["kept"], 1)
    for flag in entry["flags"]:
        unit = flag["code"].endswith("_unit_suspect")
        if flag["code"] in _FLAGS and (unit or flag["rows"] >= MANY * kept):
            what, _, question = _FLAGS[flag["code"]].partition(". ")
            share = 100.0 * flag["rows"] / kept
            yield ask(
                file,
                LIKELY if share >= 50.0 else WORTH_A_LOOK,
                f"{flag['rows']:,} of {kept:,} {file.table} {what} ({flag['code']}).",
                question,
                # Of a part of the file only, another unit of the whole file is no cause.
                cause=CAUSES.get(flag["code"], "") if share >= 50.0 else "",
                of=UNITS_OF.get(flag["code"], ()),
                rows=flag["rows"],
            )


def about_surface(surface: object, rows: int) -> Iterator[Question]:
    """Ask about a constant surface temperature that is warmer than any ground, but not in degF.

    Parameters
    ----------
    surface : object
        ``Settings.surface_temperature``.
    rows : int
        Readings: it concerns all.
    """
    degree = getattr(surface, "temperature_degc", None)
    if degree is None or not degree > WARMEST_GROUND_DEGC:
        return
    degc = round((degree - 32.0) / 1.8, 1)
    lines = {"temperature_degc": degc}
    yield Question(
        *("surface_temperature", "config", PRESSING),
        f"The surface temperature is {degree:g} degC; no ground is warmer than about "
        f"{WARMEST_GROUND_DEGC:g} degC in the mean of a year.",
        f"Is that degF? Then set {setting(**lines)} in surface_temperature.",
        lines,
        "surface_temperature",
        rows=rows,
        files=(("surface_temperature", "config"),),
    )


def _same(one: str, other: str, canonical: str) -> bool:
    """Tell whether two units convert alike."""
    return bool(np.allclose(conversion(one, canonical), conversion(other, canonical), rtol=1e-4))
