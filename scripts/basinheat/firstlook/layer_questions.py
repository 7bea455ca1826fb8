"""Questions about layers: rocks, tops in another unit, formations that begin at the surface."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

import numpy as np
import pandas as pd

from basinheat.firstlook.gradients import of_wells
from basinheat.firstlook.inputfile import InputFile
from basinheat.firstlook.proposals import setting
from basinheat.firstlook.questions import (
    LIKELY,
    MANY,
    PRESSING,
    ROCKS,
    UNITS,
    WORTH_A_LOOK,
    Question,
    ask,
    count_rows,
    listed,
    share,
)

MOST_ROCKS = 5  # named in a question
FEWEST_TOPS = 5
# Tops in feet read as metres: what lies below two sevenths of a hole seems to lie below it.
BELOW, INSIDE = 0.2, 0.95  # share of tops below total depth as read; inside in the other unit
M_PER_FT = 0.3048  # by definition


def about_rocks(file: InputFile, entry: Mapping[str, Any]) -> Iterator[Question]:
    """Ask about rocks that the catalogue does not know."""
    unknown = [each for each in entry["rocks"] if each["unknown"]]
    if not unknown:
        return
    few = unknown[:MOST_ROCKS]
    near = "; ".join(f"{each['word'][:40]} ({each['unknown']})" for each in few)
    lines = {"lithologies": {each["word"][:60]: _nearest(each["unknown"]) for each in few}}
    rows = sum(each["rows"] for each in unknown)
    yield ask(
        file,
        LIKELY if rows >= MANY * entry["rows"] else WORTH_A_LOOK,
        f"{count_rows(rows)} of rocks that the catalogue does not know: {near}"
        f"{' and others' if len(unknown) > MOST_ROCKS else ''}.",
        f"Add {setting(**lines)} to conductivity?",
        lines,
        "conductivity",
        ROCKS,
        rows,
    )


def about_tops(file: InputFile, wells: pd.DataFrame, rule: str) -> Iterator[Question]:
    """Ask where tops lie below the holes they were met in, and in feet do not.

    Parameters
    ----------
    file : InputFile
        A file of layers.
    wells : DataFrame
        ``tables.Wells``.
    rule : str
        What makes two names one well (``inputs.well_names``).
    """
    frame = file.frame
    along = getattr(file.spec, "depth_reference", "measured") == "measured"
    if not len(frame) or not along or "top" in file.unit_columns or file.unit("top") != "m":
        return
    # Names that differ in spelling alone are enough for a look at depths.
    place = of_wells(frame["well"], wells, "normalised" if rule == "exact" else rule)[1]
    total = np.append(wells["total_depth_m"].to_numpy(float), np.nan)[place]
    top = frame["top"].to_numpy(float)
    known = np.isfinite(top) & np.isfinite(total)
    count, below = int(known.sum()), int((top > total)[known].sum())
    inside = int((M_PER_FT * top <= total)[known].sum())
    if below < max(BELOW * count, FEWEST_TOPS) or inside < INSIDE * count:
        return
    units = {name: "ft" for name in ("top", "base") if name in file.columns}
    yield ask(
        file,
        PRESSING,
        f"{below:,} of {count:,} tops ({share(below, count)}) lie below the total depth of their "
        f"well; read in feet, {inside:,} lie inside.",
        f"Add to {file.place} {setting(units=units)}?",
        {"units": units},
        cause=UNITS,
        rows=below,
    )


def about_formations(file: InputFile, entry: Mapping[str, Any]) -> Iterator[Question]:
    """Ask whether the shallowest formation of a file of columns begins at the surface."""
    told = entry["formations"]
    first = _shallowest(told)
    if first is None or file.spec.zero_is_missing is not None:
        return
    wells = max(entry["wells"], 1)
    if first["zeros"] < 0.5 * wells:
        return
    others = [each["header"] for each in told if each is not first and each["zeros"]]
    more = f" Then clear the zeros of {listed(others)} first, where it is absent." if others else ""
    yield ask(
        file,
        LIKELY,
        f"{listed([first['header']])}, the shallowest formation, is 0 in {first['zeros']:,} of "
        f"{wells:,} wells, which is taken as absent.",
        f"Does it start at the surface? Then add {setting(zero_is_missing=[])} to {file.place}."
        + more,
        {} if others else {"zero_is_missing": []},
        rows=first["zeros"],
    )


def _shallowest(told: list[dict[str, Any]]) -> dict[str, Any] | None:
    """Return the formation with the shallowest tops; one with zeros alone is shallower than any."""
    zero = [each for each in told if each["zeros"] and not each["tops"]]
    if zero:
        return max(zero, key=lambda each: each["zeros"])
    tops = [each for each in told if each["tops"]]
    return min(tops, key=lambda each: each["middle_m"], default=None)


def _nearest(near: str) -> str:
    """Return the rock that the catalogue's hint names, a question mark where it lists them all."""
    return near.removeprefix("the nearest is ") if near.startswith("the nearest is ") else "?"
