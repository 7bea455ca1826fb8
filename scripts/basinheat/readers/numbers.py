"""Text cells to numbers: words for missing, units in cells, bounds and approximate values."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
import pandas as pd

from basinheat.readers.cells import counted, is_missing

# Numbers that stand for nothing: the null of well logs, and what databases write (common practice).
SENTINELS = (-999.25, -9999.0, -99999.0)
PLAIN = r"[-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?"
_ABOUT = r"(?P<about>~|≈|ca\.?|circa|approx\.?)?\s*(?P<bound>[<>≤≥]=?)?\s*"


@dataclass
class Numbers:
    """Numbers as the cells have them.

    Parameters
    ----------
    values : ndarray, (n,)
        In the cell's own unit; NaN where blank, missing, a bound or no number.
    wrong : ndarray of bool, (n,)
        Cells that are neither blank nor a number; bounds among them.
    approximate, bound : ndarray of bool, (n,)
        Cells that say "about"; cells that say "less" or "more than".
    unit : ndarray of int, (n,)
        Place of the cell's own unit in ``units``, -1 for none.
    units : list of str
        Words behind numbers, as written.
    missing : dict of str to int
        Words and numbers that were taken for missing, and how often.
    """

    values: np.ndarray
    wrong: np.ndarray
    approximate: np.ndarray
    bound: np.ndarray
    unit: np.ndarray
    units: list[str]
    missing: dict[str, int] = field(default_factory=dict)


def numbers(
    cells: pd.Series,
    missing: Sequence[str] = (),
    decimal: str = ".",
    thousands: str = "",
    zero_is_missing: bool = False,
) -> Numbers:
    """Return the numbers of text cells.

    A missing-value word that is a number stands for all its spellings: "0" also for "0.00".

    Parameters
    ----------
    cells : Series of text, (n,)
        As written.
    missing : sequence of str
        Words that mean missing, beside those that always do.
    decimal, thousands : str
        Marks inside numbers; a comma is never guessed to be one or the other.
    zero_is_missing : bool, optional
        Whether 0 means that nothing was noted.

    Examples
    --------
    >>> found = numbers(pd.Series(["12,5", "x", "", "~7 ft", "<3"], dtype="str"), decimal=",")
    >>> found.values.tolist(), found.wrong.tolist()
    ([12.5, nan, nan, 7.0, nan], [False, True, False, False, True])
    >>> found.units, found.bound.tolist()
    (['ft'], [False, False, False, False, True])
    """
    text = cells.str.strip()
    count = len(text)
    values, left = _fast(_plain(text, decimal, thousands))
    no = np.zeros(count, bool)
    out = Numbers(values, no, no.copy(), no.copy(), np.full(count, -1, np.int64), [])
    if left.any():
        rest = text[left]
        blank = is_missing(rest, missing)
        out.missing = counted(rest, blank)
        place = np.flatnonzero(left)[~blank]
        if len(place):
            _slow(out, place, _one_mark(rest[~blank], thousands), decimal, thousands)
    nulls = [*SENTINELS, *(float(word) for word in missing if _is_number(word))]
    null = np.isin(out.values, [*nulls, 0.0] if zero_is_missing else nulls)
    out.missing |= counted(text, null)
    out.values[null] = np.nan
    return out


def _fast(text: pd.Series) -> tuple[np.ndarray, np.ndarray]:
    """Return the numbers of cells that are written plainly, and which cells are not."""
    import pyarrow as pa
    import pyarrow.compute as pc

    strings = pa.array(text, pa.string())
    if isinstance(strings, pa.ChunkedArray):
        strings = strings.combine_chunks()
    plain = pc.match_substring_regex(strings, f"^{PLAIN}$").to_numpy(zero_copy_only=False)
    kept = strings if plain.all() else pc.if_else(pa.array(plain), strings, None)
    values = np.array(pc.cast(kept, pa.float64()).to_numpy(zero_copy_only=False))
    finite = np.isfinite(values)
    return np.where(finite, values, np.nan), ~finite


def _slow(out: Numbers, place: np.ndarray, text: pd.Series, decimal: str, thousands: str) -> None:
    """Read cells that hold more than a number, each spelling once."""
    codes, spellings = pd.factorize(text)
    mark, point = re.escape(thousands or "\0"), re.escape(decimal)
    digits = rf"(?:\d{{1,3}}(?:{mark}\d{{3}})+|\d+)"
    number = rf"[-+]?(?:{digits}(?:{point}\d*)?|{point}\d+)(?:e[-+]?\d+)?"
    pattern = re.compile(
        rf"{_ABOUT}(?P<number>{number})(?![\d.,])\s*(?P<unit>\S.*)?", re.IGNORECASE | re.ASCII
    )
    known: dict[str, int] = {}
    rows = []
    for spelling in spellings:
        found = pattern.fullmatch(spelling)
        if found is None:
            rows.append((np.nan, True, False, False, -1))
            continue
        value = float(found["number"].replace(thousands or " ", "").replace(decimal, "."))
        rows.append(_read(value, found, known))
    columns = [np.array(column)[codes] for column in zip(*rows, strict=True)]
    arrays = (out.values, out.wrong, out.approximate, out.bound, out.unit)
    for array, column in zip(arrays, columns, strict=True):
        array[place] = column
    out.units += known


def _read(
    value: float, found: re.Match[str], known: dict[str, int]
) -> tuple[float, bool, bool, bool, int]:
    """Return value, wrong, approximate, bound and the number of the unit of one spelling."""
    if not np.isfinite(value):
        return np.nan, True, False, False, -1
    unit = known.setdefault(found["unit"], len(known)) if found["unit"] else -1
    if found["bound"]:
        return np.nan, True, False, True, unit
    return value, False, bool(found["about"]), False, unit


def _one_mark(text: pd.Series, thousands: str) -> pd.Series:
    """Return cells with one sort of minus, and of blank where blanks part thousands."""
    text = text.str.replace("\u2212", "-", regex=False)
    if thousands == " ":  # printers set narrow blanks and such that do not break
        text = text.str.replace("[\u00a0\u2009\u202f]", " ", regex=True)
    return text


def _plain(text: pd.Series, decimal: str, thousands: str) -> pd.Series:
    """Return numbers as Python writes them."""
    text = _one_mark(text, thousands)
    if thousands:
        # Groups of three only: "1,5" is then no number and not fifteen.
        mark, point = re.escape(thousands), re.escape(decimal)
        whole = text.str.fullmatch(rf"[-+]?\d{{1,3}}(?:{mark}\d{{3}})+(?:{point}\d*)?")
        whole = whole.to_numpy(bool)
        if whole.any():
            text = text.mask(whole, text.str.replace(thousands, "", regex=False))
    if decimal == ",":
        text = text.str.replace(".", "x", regex=False).str.replace(",", ".", regex=False)
    return text


def _is_number(word: str) -> bool:
    try:
        return bool(np.isfinite(float(word)))
    except ValueError:
        return False
