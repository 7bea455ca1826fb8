"""Input tables of the config to one frame each: canonical names, numbers in canonical units."""

from __future__ import annotations

import logging
import os
from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path

import numpy as np
import pandas as pd

from basinheat.errors import UserError
from basinheat.readers.canonical import Note, Reading, canonical, filled
from basinheat.readers.header import clean, fault_of
from basinheat.readers.raw import Head, RawTable, look, read_raw
from basinheat.settings import schemas
from basinheat.settings.files import matches
from basinheat.settings.inputs import PlacesFile, TableFile

_log = logging.getLogger(__name__)


@dataclass(frozen=True)
class InputTable:
    """One input table of any number of files.

    Parameters
    ----------
    name : str
        wells, readings, layers, surveys or heat_flow.
    frame : DataFrame, (n,)
        A column per canonical name: numbers in canonical units or text; ``as_written:<name>`` and
        ``wrong:<name>`` beside each number; ``source_file, source_line, spec``; ``unit:depth`` and
        ``unit:temperature``, the unit each was read in. Only where there is something to tell:
        ``bound:<name>`` (the cell states a bound; it is wrong too), ``unit_unknown:<name>`` and
        ``row_unit:<name>`` (the row's unit is none; its word; it is wrong too), ``crs_word`` (the
        CRS that the row, its file or its standard names, "" for the config's), and the flags
        ``flag:unit_in_cell``, ``flag:approximate``.
    headers : list of dict
        Per ``spec`` of a row: canonical name to header in the file.
    broken : DataFrame
        Records that could not be split into cells: source_file, source_line, well, code, sentence.
    notes : list of dict
        What was found in the files: file, what, column ("" for the file as a whole), value, count.
        ``what`` is rows, broken, encoding, delimiter, header_line, sheet, layer, crs, missing,
        unit_in_cell or row_unit.
    """

    name: str
    frame: pd.DataFrame
    headers: list[dict[str, str]]
    broken: pd.DataFrame
    notes: list[Note] = field(default_factory=list)

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
    parts, broken, mapped, faults = [], [], [], []
    notes: list[Note] = []
    for number, spec in enumerate(specs):
        files = matches(spec.file, folder)
        if not files:
            faults.append(f"inputs.{name}[{number}].file: no file {spec.file}.")
        for path in files:
            try:
                how = _reading(path, spec, name)
                raw = read_raw(path, spec, how.headers())
                frame, found = canonical(raw, how, spec, name)
            except UserError as error:
                faults += error.faults
                continue
            label = source_name(path, folder)
            frame["source_file"], frame["spec"], frame["config"] = label, len(mapped), number
            parts.append(frame)
            mapped.append(how.columns)
            broken += [(label, *fault) for fault in raw.broken]
            notes += _of_file(label, raw, found)
    if faults:
        raise UserError(faults)
    nothing = RawTable(pd.DataFrame(), np.empty(0, np.int64))
    empty, _ = canonical(nothing, Reading(), TableFile(file=""), name)
    frame = pd.concat(parts, ignore_index=True) if parts else empty.assign(source_file="", spec=0)
    fields = ["source_file", "source_line", "well", "code", "sentence"]
    return InputTable(
        name, filled(frame), mapped, pd.DataFrame(broken, columns=fields), _once(notes)
    )


def source_name(path: str | Path, folder: str | Path) -> str:
    """Return how a file is named in tables: below the config's folder, else its name alone.

    Deliveries must not tell where on a machine a project lies.
    """
    path, folder = os.path.abspath(path), os.path.abspath(folder)
    if Path(path).is_relative_to(folder):
        return Path(os.path.relpath(path, folder)).as_posix()
    return os.path.basename(path)


def no_crs(path: str | Path, spec: TableFile, head: Head) -> str:
    """Return the fault of points whose CRS nobody states, "" for none."""
    stated = head.crs or getattr(spec, "crs", None) or getattr(spec, "crs_column", None)
    if stated or not schemas.is_places(path) or not isinstance(spec, PlacesFile):
        return ""
    return f"{path}: the file names no CRS; state crs."


def _reading(path: str, spec: TableFile, table: str) -> Reading:
    """Return how a file is read; everything that is named must be there."""
    places = schemas.is_places(path)
    needed = schemas.all_needed(spec, table, places)
    head = look(path, spec, needed)
    present = head.headers
    columns = schemas.found(spec, table, present, places)
    faults = [fault_of(header, present, path) for header in [*needed, *columns.values()]]
    faults = [fault for fault in dict.fromkeys([*faults, no_crs(path, spec, head)]) if fault]
    if faults:
        raise UserError(faults)
    default, column = schemas.crs_of(spec, table, present)
    how = Reading(
        _clean(columns),
        schemas.units_of(spec, table),
        _clean(schemas.unit_columns(spec, table, present)),
        [*spec.missing, *schemas.column_list(spec, table).missing],
        head.crs if head.crs and not getattr(spec, "crs", None) else default,
        clean(column),
    )
    passed = [header for header in present if header and header not in how.headers()]
    if passed:
        _log.info("%s: columns not read: %s", os.path.basename(path), ", ".join(passed))
    return how


def _clean(headers: dict[str, str]) -> dict[str, str]:
    """Return headers as the files are compared by them: two spellings of one are one."""
    return {name: clean(header) for name, header in headers.items()}


def _of_file(label: str, raw: RawTable, found: list[Note]) -> list[Note]:
    """Return the notes on one file, and log what is not plain."""
    whole = [("rows", "", len(raw.lines)), ("broken", "", len(raw.broken))]
    whole += [(what, value, len(raw.lines)) for what, value in raw.notes]
    for note in found:
        place = (label, note["column"], note["what"], note["value"], note["count"])
        _log.info('%s: %s: %s: "%s" in %s rows', *place)
    return [
        {"file": label, "what": what, "column": "", "value": value, "count": count}
        for what, value, count in whole
    ] + [{"file": label, **note} for note in found]


def _once(notes: list[Note]) -> list[Note]:
    """Return the notes, those of a file that is read several times once."""
    return list({tuple(note.items()): note for note in notes}.values())
