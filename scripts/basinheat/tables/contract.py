"""What every table of the workflow promises: its columns, their units, and how it is stored."""

from __future__ import annotations

import os
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path
from typing import ClassVar

import numpy as np
import pandas as pd
import pyarrow as pa
import pyarrow.parquet as pq

from basinheat.errors import UserError

SIGNIFICANT_DIGITS = 10
_ARROW = {"text": pa.string(), "number": pa.float64(), "count": pa.int64(), "flag": pa.bool_()}


@dataclass(frozen=True)
class Column:
    """One column of a table.

    Parameters
    ----------
    kind : {"text", "number", "count", "flag"}
        What a cell holds; missing text is "", a missing number is NaN.
    unit : str
        Unit as in the column's name, "" for none.
    description : str
        What the column means, in one line.
    """

    kind: str
    unit: str
    description: str


def text(description: str) -> Column:
    """Declare a column of text."""
    return Column("text", "", description)


def number(unit: str, description: str) -> Column:
    """Declare a column of numbers."""
    return Column("number", unit, description)


def count(description: str) -> Column:
    """Declare a column of whole numbers."""
    return Column("count", "", description)


def flag(description: str) -> Column:
    """Declare a column of yes or no."""
    return Column("flag", "", description)


class Table:
    """A table contract: columns in order, and a family of open columns where one is declared.

    A subclass states ``columns`` and, where the number of columns depends on the run
    (``loading_<source>``), ``open_columns``: prefix to column.
    """

    columns: ClassVar[dict[str, Column]] = {}
    open_columns: ClassVar[dict[str, Column]] = {}

    @classmethod
    def empty(cls) -> pd.DataFrame:
        """Return a table without rows."""
        return cls.conform(pd.DataFrame({name: [] for name in cls.columns}))

    @classmethod
    def conform(cls, frame: pd.DataFrame) -> pd.DataFrame:
        """Return the frame with the contract's columns, in order and of the right type.

        Absent columns are filled with missing values; a column outside the contract is an error,
        because it would be lost on the way to the file.
        """
        extra = [name for name in frame.columns if name not in cls.columns]
        unknown = [name for name in extra if cls._open(name) is None]
        if unknown:
            raise KeyError(f"{cls.__name__}: columns outside the contract: {unknown}")
        names = [*cls.columns, *sorted(extra)]
        out = {name: _cast(frame.get(name), cls._column(name), len(frame)) for name in names}
        return pd.DataFrame(out, columns=names)

    @classmethod
    def save(cls, frame: pd.DataFrame, path: str | Path) -> None:
        """Write the table as Parquet, whole or not at all, with units in the field metadata."""
        cls.save_parts([frame], path)

    @classmethod
    def save_parts(cls, frames: Iterable[pd.DataFrame], path: str | Path) -> None:
        """Write a table that comes in parts, and is too long to be held at once, as ``save``."""
        part = Path(f"{path}.part")
        part.parent.mkdir(parents=True, exist_ok=True)
        writer = None
        try:
            for frame in frames:
                table = cls._arrow(cls.conform(frame))
                writer = writer or pq.ParquetWriter(part, table.schema)
                writer.write_table(table)
        finally:
            if writer is not None:
                writer.close()
        if writer is None:
            raise ValueError(f"{path}: no part to write")
        os.replace(part, path)

    @classmethod
    def _arrow(cls, frame: pd.DataFrame) -> pa.Table:
        fields = [
            pa.field(
                name,
                _ARROW[cls._column(name).kind],
                metadata={
                    "unit": cls._column(name).unit,
                    "description": cls._column(name).description,
                },
            )
            for name in frame.columns
        ]
        arrays = [
            pa.array(_rounded(frame[name]), type=field.type, from_pandas=True)
            for name, field in zip(frame.columns, fields, strict=True)
        ]
        return pa.Table.from_arrays(arrays, schema=pa.schema(fields))

    @classmethod
    def load(cls, path: str | Path) -> pd.DataFrame:
        """Read the table; another unit or an absent column is refused."""
        table = pq.read_table(path)
        faults = []
        for name, column in cls.columns.items():
            if name not in table.column_names:
                faults.append(f"{path}: column {name} is absent")
                continue
            unit = (table.schema.field(name).metadata or {}).get(b"unit", b"").decode()
            if unit != column.unit:
                faults.append(f"{path}: column {name} is in {unit!r}, expected {column.unit!r}")
        if faults:
            raise UserError([f"{fault}. Delete the file and run again." for fault in faults])
        return cls.conform(table.to_pandas())

    @classmethod
    def load_all(cls, paths: Iterable[str | Path]) -> pd.DataFrame:
        """Read several tables of this kind as one, in the order of the paths."""
        return cls.conform(pd.concat([cls.load(path) for path in paths], ignore_index=True))

    @classmethod
    def _open(cls, name: str) -> Column | None:
        return next((c for prefix, c in cls.open_columns.items() if name.startswith(prefix)), None)

    @classmethod
    def _column(cls, name: str) -> Column:
        column = cls.columns.get(name) or cls._open(name)
        if column is None:
            raise KeyError(f"{cls.__name__} has no column {name}")
        return column


def _cast(values: pd.Series | None, column: Column, rows: int) -> pd.Series | np.ndarray:
    """Return the values as the column's type."""
    if column.kind == "text":
        if values is None:
            return pd.Series([""] * rows, dtype=object)
        if isinstance(values.dtype, pd.StringDtype):
            return values.fillna("").astype(object).array
        return values.astype(object).where(values.notna(), "").astype(str).astype(object).array
    if values is None:
        return {"number": np.full(rows, np.nan), "count": np.zeros(rows, np.int64)}.get(
            column.kind, np.zeros(rows, bool)
        )
    kind = {"number": np.float64, "count": np.int64, "flag": bool}[column.kind]
    return (
        values.to_numpy(dtype=kind, na_value=np.nan)
        if kind is np.float64
        else values.to_numpy(kind)
    )


def _rounded(values: pd.Series) -> pd.Series:
    """Round numbers to significant digits, so that the last bits of a sum do not change a file."""
    if values.dtype != np.float64:
        return values
    array = values.to_numpy()
    with np.errstate(divide="ignore", invalid="ignore"):
        scale = 10.0 ** (SIGNIFICANT_DIGITS - 1 - np.floor(np.log10(np.abs(array))))
        rounded = np.round(array * scale) / scale
    return pd.Series(np.where(np.isfinite(rounded) & (array != 0.0), rounded, array))
