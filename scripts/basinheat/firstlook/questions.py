"""Questions to the user: what looks wrong in a file, and the line of the config that may mend it.

Nothing is ever changed: each question says what was seen and asks. The most pressing come first.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from basinheat.firstlook.headers import SURE, likeness
from basinheat.firstlook.inputfile import InputFile
from basinheat.firstlook.proposals import columns_and_units, setting
from basinheat.ingest.identity import keys

PRESSING, LIKELY, WORTH_A_LOOK = 0, 1, 2
UNITS, NAMES, PLACES, ROCKS = "units", "names", "places", "rocks"
# Refusals and flags that a whole file in another unit, of other names or in another CRS brings.
# Refusals and flags that a whole file in another unit, of other names or in another CRS brings: the
# columns whose unit may be wrong.
UNITS_OF = {
    "temperature_impossible": ("temperature",),
    "temperature_unit_suspect": ("temperature",),
    "not_above_surface_temperature": ("temperature", "depth"),
    "depth_above_ground": ("depth",),
    "depth_impossible": ("depth", "top", "base"),
    "depth_unit_suspect": ("depth",),
    "deeper_than_total_depth": ("depth", "total_depth"),
    "no_base": ("top",),
    "no_thickness": ("top", "base"),
    "elevation_suspect": ("ground_elevation",),
    "rig_floor_suspect": ("ground_elevation", "datum_elevation"),
}
CAUSES = {
    **dict.fromkeys(UNITS_OF, UNITS),
    "unknown_well": NAMES,
    **dict.fromkeys(("coordinates_suspect", "coordinates_impossible", "coordinates_zero"), PLACES),
}
MANY = 0.1  # share of a file's rows from which a reason is no matter of single rows

_ADVICE = {
    "unknown_well": "Are the names those of inputs.wells, from the right column?",
    "temperature_impossible": "Is the unit of the temperatures right?",
    "not_above_surface_temperature": "Are unit and column of the temperatures right, and "
    "surface_temperature?",
    "depth_negative": "Are the depths elevations, or counted upwards?",
    "depth_above_ground": "Do depths count from the datum, and is its unit right?",
    "depth_impossible": "Is the unit of the depths right?",
    "coordinates_suspect": "Is the crs of the file right?",
    "coordinates_impossible": "Are x and y in the right order, and is the crs right?",
    "wrong_number_of_cells": "Are delimiter and skip_lines right?",
    "unclosed_quote": "Does a quote stand for inches?",
    "no_thickness": "Are top and base in the right columns, in the same unit and datum?",
    "layer_overlap": "Do the rows state groups and their formations both?",
    "water_depth_negative": "Is the column an elevation of the sea floor (ground_elevation)?",
    "temperature_unit_suspect": "Is a part of the file in another unit? Then split it, name the "
    "column that holds the unit under unit_columns, or mend the rows",
    "depth_unit_suspect": "Is a part of the file in another unit? Then split it, name the column "
    "that holds the unit under unit_columns, or mend the rows",
}


@dataclass(frozen=True)
class Question:
    """What was seen, and what it may call for.

    Parameters
    ----------
    place : str
        File of the config: ``inputs.readings[0]``.
    file : str
        How the file is called.
    weight : int
        ``PRESSING, LIKELY`` or ``WORTH_A_LOOK``.
    seen : str
        Sentence with the numbers.
    ask : str
        Question with the line of the config.
    lines : dict
        What a yes would add to the config, empty where there is more than one answer.
    at : str
        Where it would be added.
    cause : str
        What it would be the answer to (``UNITS, NAMES, PLACES`` ...): questions of one file and
        cause are asked once; "" for one that stands alone.
    rows : int
        How many rows it concerns.
    of : tuple of str
        Columns that a question about units is about, beside those of its lines.
    files : tuple
        Place and file of all that it is about.
    """

    place: str
    file: str
    weight: int
    seen: str
    ask: str
    lines: dict[str, Any]
    at: str
    cause: str = ""
    rows: int = 0
    of: tuple[str, ...] = ()
    files: tuple[tuple[str, str], ...] = ()


def ask(
    file: InputFile,
    weight: int,
    seen: str,
    question: str,
    lines: Mapping[str, Any] | None = None,
    at: str = "",
    cause: str = "",
    rows: int | None = None,
    of: Sequence[str] = (),
) -> Question:
    """Return a question about a file, and the lines that a yes would add to its entry."""
    concerned = len(file.frame) if rows is None else rows
    given, at = dict(lines or {}), at or file.place
    return Question(
        *(file.place, file.label, weight, seen, question, given, at, cause, concerned),
        tuple(of),
        ((file.place, file.label),),
    )


def about_rows(file: InputFile, entry: Mapping[str, Any]) -> Iterator[Question]:
    """Ask about reasons that refuse, or flags that doubt, a good part of a file."""
    rows = entry["rows"]
    if rows == 0:
        yield ask(file, PRESSING, "The file holds no rows.", "Is it the right file?")
    for reason in entry["reasons"]:
        advice = _ADVICE.get(reason["code"], "")
        few = reason["rows"] < MANY * rows
        if few and reason["code"].endswith("_unit_suspect"):
            advice = "Mend them in the file, or set or keep them by a decision?"
        elif few or not advice:
            continue
        yield ask(
            file,
            WORTH_A_LOOK if few else PRESSING if reason["rows"] >= 0.5 * rows else LIKELY,
            f"{count_rows(reason['rows'])} ({share(reason['rows'], rows)}) refused as "
            f"{reason['code']}, the first in line {reason['line']}.",
            advice if advice.endswith("?") else f"{advice}.",
            # Single rows are no matter of the whole file.
            cause="" if few else CAUSES.get(reason["code"], ""),
            of=UNITS_OF.get(reason["code"], ()),
            rows=reason["rows"],
        )


def about_headers(file: InputFile, entry: Mapping[str, Any]) -> Iterator[Question]:
    """Ask about headers that look like columns which nothing is read into."""
    own = [each["header"] for each in entry["not_read"] if each["table"] == file.table]
    elsewhere: dict[str, dict[str, str]] = {}
    for each in entry["not_read"]:
        if each["table"] not in ("", file.table):
            elsewhere.setdefault(each["table"], {}).setdefault(each["name"], each["header"])
    found, units = columns_and_units(file.table, own, file.columns)
    if found:
        lines: dict[str, Any] = {"columns": file.with_columns(found)}
        lines |= {"units": units} if units else {}
        yield ask(
            file,
            WORTH_A_LOOK,
            f"{listed(found.values())} {'is' if len(found) == 1 else 'are'} not read.",
            f"Add to {file.place} {setting(**lines)}?",
            lines,
            rows=0,
        )
    for table, columns in sorted(elsewhere.items()):
        if _worth_reading(table, columns):
            yield ask(
                file,
                WORTH_A_LOOK,
                f"The file seems to hold {table} too: {listed(columns.values())}.",
                f"Name it under inputs.{table} also, with {setting(columns=columns)}?",
                rows=0,
            )


def about_kinds(file: InputFile, entry: Mapping[str, Any]) -> Iterator[Question]:
    """Ask about words that are no kind, and about readings whose kind nobody stated."""
    unknown = [each for each in entry["kinds"] if not each["kind"]]
    if unknown:
        rows = sum(each["rows"] for each in unknown)
        lines = {each["word"]: each["guess"] or "?" for each in unknown}
        yield ask(
            file,
            PRESSING if rows > MANY * max(entry["rows"], 1) else LIKELY,
            f"{count_rows(rows)} of a kind that is not known: "
            f"{listed(each['word'] for each in unknown)}.",
            f"Which of bht, dst, equilibrium, corrected are they? Add to {file.place} "
            f"{setting(kinds=lines)}?",
            {"kinds": lines},
            rows=rows,
        )
    taken = file.spec.kind
    if "kind" not in file.columns and entry["rows"] and taken == "bht":
        yield ask(
            file,
            WORTH_A_LOOK,
            f"No column says what kind the readings are: all are taken as {taken}.",
            "Are there tests or logs at rest among them? Then name the column under `columns: "
            "{kind: ...}`, or state `kind` of the file.",
        )


def about_names(
    file: InputFile, rule: str, wells: Sequence[str], rows_of: Mapping[str, int]
) -> Iterator[Question]:
    """Ask whether another rule for names would find the wells of more rows.

    Parameters
    ----------
    file : InputFile
        A file of readings, layers or surveys.
    rule : str
        ``inputs.well_names``.
    wells : sequence of str
        All names in the files of wells.
    rows_of : mapping
        Name in this file that no well has: its rows.
    """
    if not rows_of or rule != "exact":
        return
    names, total = list(rows_of), sum(rows_of.values())
    found = {}
    for other in ("us_api", "normalised"):
        known = set(keys(list(wells), other))
        joined = [name for name, key in zip(names, keys(names, other), strict=True) if key in known]
        found[other] = sum(rows_of[name] for name in joined), next(iter(joined), "")
    best = max(found, key=lambda other: (found[other][0], other == "normalised"))
    rows, example = found[best]
    if rows:
        yield ask(
            file,
            PRESSING if rows > 0.5 * len(file.frame) else LIKELY,
            f"{count_rows(rows)} of {total:,} without a well would find one if names were "
            f"compared as {best}, such as {told(example)}.",
            f"Set {setting(well_names=best)} under inputs?",
            {"well_names": best},
            "inputs",
            NAMES,
            rows,
        )


def _worth_reading(table: str, columns: Mapping[str, str]) -> bool:
    """Tell whether a file holds enough to be read as another table."""
    needed = {
        "wells": {"x", "y"},
        "readings": {"temperature"},
        "layers": {"top"},
        "surveys": {"inclination"},
        "heat_flow": {"heat_flow"},
    }[table]
    return needed <= set(columns) and all(likeness(columns[name], name) >= SURE for name in needed)


def count_rows(count: int) -> str:
    """Return a number of rows in words."""
    return f"{count:,} row" + ("" if count == 1 else "s")


def share(part: int, whole: int) -> str:
    """Return a part in percent."""
    percent = 100.0 * part / whole if whole else np.nan
    return "under 1 %" if 0.0 < percent < 1.0 else f"{percent:.0f} %"


def told(text: str) -> str:
    """Return text from the data in quotes, shortened."""
    return f'"{text if len(text) <= 60 else text[:59] + "…"}"'


def listed(words: Iterable[str], most: int = 8) -> str:
    """Return words in quotes, the last ones left out where they are many."""
    quoted = [told(word) for word in words]
    more = f" and {len(quoted) - most} more" if len(quoted) > most else ""
    return ", ".join(quoted[:most]) + more
