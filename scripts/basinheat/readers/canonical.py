"""Cells of one file to canonical columns: numbers in canonical units, words, what was found."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
import pandas as pd

from basinheat import units
from basinheat.flags import PREFIX
from basinheat.readers.cells import counted, from_serials, is_missing, stripped, words
from basinheat.readers.numbers import Numbers, numbers
from basinheat.readers.raw import RawTable
from basinheat.settings.columns import INPUT_COLUMNS, InputColumn
from basinheat.settings.inputs import TableFile

# Where a zero can't be meant, it stands for missing (common practice in well tables).
ZERO_IS_MISSING: dict[str, set[str]] = {
    "wells": {"total_depth"},
    "readings": {
        *("depth", "vertical_depth", "temperature_std"),
        *("since_circulation", "circulation", "drilling", "hole_diameter"),
    },
    "layers": {"conductivity", "conductivity_std"},
    "surveys": set(),
    "heat_flow": {"heat_flow_std", "gradient_std", "conductivity", "conductivity_std"},
}
DATES = ("date", "circulation_stopped", "logger_on_bottom")
# Columns that are there only where something was found: what they hold elsewhere.
SOMETIMES = {PREFIX: False, "bound:": False, "unit_unknown:": False, "row_unit:": ""}
MOST_NOTES = 50  # words of a column: one that holds remarks must not fill the page
Note = dict[str, object]


@dataclass(frozen=True)
class Reading:
    """How a file is read: which headers, in which units.

    Parameters
    ----------
    columns : dict
        Canonical name to header.
    units : dict
        Canonical name to unit, where one is stated.
    unit_columns : dict
        Canonical name to the header of the column of units.
    missing : list of str
        Words that mean missing.
    crs : str
        CRS of rows that state none, "" where the config's own counts.
    crs_column : str
        Header of the column of each row's CRS, "" for none.
    """

    columns: dict[str, str] = field(default_factory=dict)
    units: dict[str, str] = field(default_factory=dict)
    unit_columns: dict[str, str] = field(default_factory=dict)
    missing: list[str] = field(default_factory=list)
    crs: str = ""
    crs_column: str = ""

    def headers(self) -> list[str]:
        """Return every header that is read, once."""
        more = [self.crs_column] if self.crs_column else []
        return list(dict.fromkeys([*self.columns.values(), *self.unit_columns.values(), *more]))


def canonical(
    raw: RawTable, how: Reading, spec: TableFile, table: str
) -> tuple[pd.DataFrame, list[Note]]:
    """Return the cells as canonical columns, and notes on what was found in them.

    Columns that are not read are blank. See ``InputTable.frame`` for the columns.

    Parameters
    ----------
    raw : RawTable
        The headers of ``how``.
    how : Reading
        Which headers are which columns.
    spec : TableFile
        Marks of numbers; where zero is missing.
    table : str
        Which of the input tables.
    """
    made = _Numbers(raw, how, spec)
    out: dict[str, object] = {}
    for name, column in INPUT_COLUMNS[table].items():
        if column.text:
            cells = raw.cells[how.columns[name]] if name in how.columns else None
            out[name] = _words(cells, name, raw, how, made.notes)
        else:
            zero = name in ZERO_IS_MISSING[table] or name in (spec.zero_is_missing or ())
            out |= made.columns(name, column, zero)
    if how.crs or how.crs_column:
        out["crs_word"] = _crs_words(raw, how)
    out |= {f"{PREFIX}{name}": mask for name, mask in made.flags.items() if mask.any()}
    return pd.DataFrame(out).assign(source_line=raw.lines), made.notes


def filled(frame: pd.DataFrame) -> pd.DataFrame:
    """Return frames of several files, laid below each other, without gaps in their columns."""
    for name in frame.columns:
        blank = next((value for start, value in SOMETIMES.items() if name.startswith(start)), None)
        if blank is not None:
            frame[name] = frame[name].fillna(blank).astype("str" if blank == "" else bool)
    if "crs_word" in frame:
        frame["crs_word"] = frame["crs_word"].fillna("").astype("str")
    return frame


def _words(
    cells: pd.Series | None, name: str, raw: RawTable, how: Reading, notes: list[Note]
) -> pd.Series:
    """Return a column of words; note which of them meant missing."""
    if cells is None:
        return _blanks(len(raw.lines))
    text = stripped(cells)
    if name in DATES and raw.serial_day:
        text = from_serials(text, raw.serial_day)
    blank = is_missing(text, how.missing)
    notes += _noted("missing", name, counted(text, blank))
    return text.mask(blank, "")


class _Numbers:
    """Columns of numbers while they are made, and what is found on the way."""

    def __init__(self, raw: RawTable, how: Reading, spec: TableFile) -> None:
        self._raw, self._how, self._spec = raw, how, spec
        self._rows = len(raw.lines)
        self.flags = {name: np.zeros(self._rows, bool) for name in ("unit_in_cell", "approximate")}
        self.notes: list[Note] = []

    def columns(self, name: str, column: InputColumn, zero: bool) -> dict[str, object]:
        """Return a number in its canonical unit, as written, and what is wrong with it."""
        how, rows = self._how, self._rows
        unit = how.units.get(name, column.unit)
        into = _Conversion(rows, unit, column.unit)
        out: dict[str, object] = {}
        if name in how.columns:
            cells = self._raw.cells[how.columns[name]]
            spec = self._spec
            found = numbers(cells, how.missing, spec.decimal, spec.thousands, zero)
            self.notes += _noted("missing", name, found.missing)
            if name in how.unit_columns:
                out |= self._units_of_rows(name, found, into)
            self._units_of_cells(name, found, into)
            self.flags["approximate"] |= found.approximate & ~found.wrong
            out[name] = found.values * into.scale + into.offset
            out[f"wrong:{name}"], out[f"as_written:{name}"] = found.wrong, cells.str.strip()
            if found.bound.any():
                out[f"bound:{name}"] = found.bound
        else:
            out[name], out[f"wrong:{name}"] = np.full(rows, np.nan), np.zeros(rows, bool)
            out[f"as_written:{name}"] = _blanks(rows)
        if name in ("depth", "temperature"):
            out[f"unit:{name}"] = pd.Series(into.names, dtype="str")
        return out

    def _units_of_rows(self, name: str, found: Numbers, into: _Conversion) -> dict[str, object]:
        """Take the units that rows name; a value whose unit is none of its kind is no number."""
        told = words(self._raw.cells[self._how.unit_columns[name]], self._how.missing)
        codes, spellings = pd.factorize(told.mask(told == ""))
        unknown = into.take(codes, list(spellings))
        unknown &= (np.isfinite(found.values) | found.wrong) & (found.unit < 0)
        counts = dict(told[told != ""].value_counts().head(MOST_NOTES))
        self.notes += _noted("row_unit", name, {str(w): int(n) for w, n in counts.items()})
        if not unknown.any():
            return {}
        found.values[unknown], found.wrong[unknown] = np.nan, True
        return {f"unit_unknown:{name}": unknown, f"row_unit:{name}": told}

    def _units_of_cells(self, name: str, found: Numbers, into: _Conversion) -> None:
        """Take the units that cells name; a cell with a unit of another kind is no number."""
        # A coordinate has the unit of its CRS, and no other.
        none = found.unit >= 0 if name in ("x", "y") else into.take(found.unit, found.units)
        found.values[none], found.wrong[none], found.bound[none] = np.nan, True, False
        read = (found.unit >= 0) & ~found.wrong
        self.flags["unit_in_cell"] |= read
        counts = np.bincount(found.unit[read], minlength=len(found.units))
        told = {word: int(n) for word, n in zip(found.units, counts, strict=True) if n}
        self.notes += _noted("unit_in_cell", name, told)


class _Conversion:
    """What turns the number of each row into the canonical unit: ``number * scale + offset``."""

    def __init__(self, rows: int, unit: str, canonical: str) -> None:
        self._canonical = canonical
        scale, offset = units.conversion(unit, canonical)
        self.scale, self.offset = np.full(rows, scale), np.full(rows, offset)
        self.names = np.full(rows, unit, object)

    def take(self, codes: np.ndarray, spellings: list[str]) -> np.ndarray:
        """Use the units that rows name by their place in a list; tell which name none that fits."""
        if not spellings:
            return np.zeros(len(codes), bool)
        known = units.named_all(spellings, self._canonical)
        fits = np.array([unit is not None for unit in known])
        factors = np.array([units.conversion(unit, self._canonical) if unit else (1.0, 0.0)
                            for unit in known])  # fmt: skip
        rows = (codes >= 0) & fits[codes]
        self.scale[rows], self.offset[rows] = factors[codes[rows]].T
        self.names[rows] = np.array(known, object)[codes[rows]]
        return np.asarray((codes >= 0) & ~fits[codes])


def _crs_words(raw: RawTable, how: Reading) -> pd.Series:
    """Return the CRS that rows name, where they name none that of the file or standard."""
    if not how.crs_column:
        return pd.Series([how.crs] * len(raw.lines), dtype="str")
    found = words(raw.cells[how.crs_column], how.missing)
    return found.mask(found == "", how.crs)


def _noted(what: str, name: str, counts: Mapping[str, int]) -> list[Note]:
    """Return a note per word of a column."""
    return [
        {"what": what, "column": name, "value": word, "count": count}
        for word, count in counts.items()
    ]


def _blanks(rows: int) -> pd.Series:
    return pd.Series([""], dtype="str").repeat(rows).reset_index(drop=True)
