"""Input tables of the config to one frame each: canonical names, numbers in canonical units."""

from __future__ import annotations

import logging
import os
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np
import pandas as pd

from basinheat import units
from basinheat.errors import UserError
from basinheat.readers.cells import numbers, words
from basinheat.readers.raw import RawTable, headers, read_raw
from basinheat.settings.columns import INPUT_COLUMNS, InputColumn
from basinheat.settings.files import matches
from basinheat.settings.inputs import TableFile

_log = logging.getLogger(__name__)

# Where a zero can't be meant, it stands for missing (common practice in well tables).
ZERO_IS_MISSING = {
    "wells": {"total_depth"},
    "readings": {
        "depth",
        "vertical_depth",
        "temperature_std",
        "since_circulation",
        "circulation",
        "hole_diameter",
    },
    "layers": {"conductivity", "conductivity_std"},
    "surveys": frozenset(),
}


@dataclass(frozen=True)
class InputTable:
    """One input table of any number of files.

    Parameters
    ----------
    name : str
        wells, readings, layers or surveys.
    frame : DataFrame, (n,)
        A column per canonical name: numbers in canonical units or text; ``as_written:<name>`` and
        ``wrong:<name>`` beside each number; ``source_file, source_line, spec``; ``unit:depth`` and
        ``unit:temperature`` as the config states them.
    headers : list of dict
        Per ``spec`` of a row: canonical name to header in the file.
    broken : DataFrame
        Records that could not be split into cells: source_file, source_line, well, code, sentence.
    """

    name: str
    frame: pd.DataFrame
    headers: list[dict[str, str]]
    broken: pd.DataFrame

    def __len__(self) -> int:
        """Return the number of rows."""
        return len(self.frame)

    def where(self, mask: np.ndarray) -> InputTable:
        """Return the table with the rows of the mask only."""
        return replace(self, frame=self.frame[np.asarray(mask)].reset_index(drop=True))

    def with_frame(self, frame: pd.DataFrame) -> InputTable:
        """Return the table with other rows or columns."""
        return replace(self, frame=frame)

    def header(self, name: str, specs: pd.Series) -> list[str]:
        """Return the header of a canonical column in the files of rows."""
        return [self.headers[spec].get(name, name) for spec in specs]


def read_inputs(name: str, specs: Sequence[TableFile], folder: str | Path) -> InputTable:
    """Read all files of one input table.

    Parameters
    ----------
    name : str
        wells, readings, layers or surveys.
    specs : sequence of TableFile
        Files or globs, and how to read them.
    folder : str or Path
        Where relative paths start.

    Raises
    ------
    UserError
        With a line per file that is absent, column that is not there, unit that is no unit.
    """
    contract = INPUT_COLUMNS[name]
    parts, broken, mapped, faults = [], [], [], []
    for number, spec in enumerate(specs):
        files = matches(spec.file, folder)
        if not files:
            faults.append(f"inputs.{name}[{number}].file: no file {spec.file}.")
        for path in files:
            try:
                columns = _columns(path, spec, contract)
                raw = read_raw(path, spec, columns.values())
                frame = _canonical(raw, columns, spec, name)
            except UserError as error:
                faults += error.faults
                continue
            label = source_name(path, folder)
            frame["source_file"], frame["spec"], frame["config"] = label, len(mapped), number
            parts.append(frame)
            mapped.append(columns)
            broken += [(label, *fault) for fault in raw.broken]
    if faults:
        raise UserError(faults)
    nothing = RawTable(pd.DataFrame(), np.empty(0, np.int64))
    empty = _canonical(nothing, {}, TableFile(file=""), name)
    frame = pd.concat(parts, ignore_index=True) if parts else empty.assign(source_file="", spec=0)
    fields = ["source_file", "source_line", "well", "code", "sentence"]
    return InputTable(name, frame, mapped, pd.DataFrame(broken, columns=fields))


def source_name(path: str | Path, folder: str | Path) -> str:
    """Return how a file is named in tables: below the config's folder, else its name alone.

    Deliveries must not tell where on a machine a project lies.
    """
    path, folder = os.path.abspath(path), os.path.abspath(folder)
    if Path(path).is_relative_to(folder):
        return Path(os.path.relpath(path, folder)).as_posix()
    return os.path.basename(path)


def _columns(path: str, spec: TableFile, contract: Mapping[str, InputColumn]) -> dict[str, str]:
    """Return canonical name to header for what is read of a file."""
    present = headers(path, spec)
    if spec.columns:
        passed = [header for header in present if header and header not in spec.columns.values()]
        if passed:
            _log.info("%s: columns not read: %s", os.path.basename(path), ", ".join(passed))
        return dict(spec.columns)
    columns = {name: name for name in contract if name in present}
    absent = [n for n, column in contract.items() if column.required and n not in columns]
    if absent:
        raise UserError(f"{path}: there is no column {', '.join(absent)}. Map it under `columns`.")
    return columns


def _canonical(raw: RawTable, columns: dict[str, str], spec: TableFile, table: str) -> pd.DataFrame:
    """Return the cells as canonical columns; those that are not read are blank."""
    contract, rows = INPUT_COLUMNS[table], len(raw.lines)
    out: dict[str, object] = {}
    for name, column in contract.items():
        if column.text:
            out[name] = (
                words(raw.cells[columns[name]], spec.missing)
                if name in columns
                else pd.Series([""] * rows, dtype="str")
            )
            continue
        unit = spec.units.get(name, column.unit)
        out[name], out[f"wrong:{name}"] = np.full(rows, np.nan), np.zeros(rows, bool)
        out[f"as_written:{name}"] = pd.Series([""] * rows, dtype="str")
        if name in columns:
            cells = raw.cells[columns[name]]
            values, out[f"wrong:{name}"] = numbers(
                cells, spec.missing, spec.decimal, spec.thousands
            )
            if name in ZERO_IS_MISSING[table]:
                values = np.where(values == 0.0, np.nan, values)
            scale, offset = units.conversion(unit, column.unit)
            out[name], out[f"as_written:{name}"] = values * scale + offset, cells.str.strip()
        if name in ("depth", "temperature"):
            out[f"unit:{name}"] = pd.Series([unit] * rows, dtype="str")
    return pd.DataFrame(out).assign(source_line=raw.lines)
