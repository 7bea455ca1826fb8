"""Some rows of a table as plain arrays: thousands of small data frames would take minutes."""

from __future__ import annotations

from collections import namedtuple
from collections.abc import Iterator
from functools import cache
from typing import Any

import numpy as np
import pandas as pd

_NONE = np.zeros(0, np.int64)


@cache
def _kind(names: tuple[str, ...]) -> Any:
    """Return the type of a row, made once per table."""
    return namedtuple("row", names)


class Rows:
    """Rows of a table.

    Parameters
    ----------
    arrays : dict of str to array
        All rows of the table, by column.
    places : array of int
        Which of them.
    """

    def __init__(self, arrays: dict[str, np.ndarray], places: np.ndarray) -> None:
        self._arrays = arrays
        self.places = places

    @classmethod
    def of(cls, frame: pd.DataFrame) -> Rows:
        """Return all rows of a data frame."""
        arrays = {str(name): frame[name].to_numpy() for name in frame.columns}
        return cls(arrays, np.arange(len(frame)))

    @classmethod
    def by_well(cls, frame: pd.DataFrame, wells: list[str]) -> dict[str, Rows]:
        """Return the rows of each well, in their order."""
        every = cls.of(frame)
        places = frame.groupby("well", sort=False).indices
        return {well: cls(every._arrays, places.get(well, _NONE)) for well in wells}

    def __len__(self) -> int:
        """Return the number of rows."""
        return len(self.places)

    def __getitem__(self, column: str) -> Any:
        """Return a column, (n,)."""
        return self._arrays[column][self.places]

    def take(self, which: np.ndarray) -> Rows:
        """Return some of the rows, by place or by yes and no, in that order."""
        return Rows(self._arrays, self.places[which])

    def each(self, most: int) -> Iterator[Any]:
        """Yield the first rows, with their columns as attributes."""
        names = [name for name in self._arrays if name.isidentifier()]
        row = _kind(tuple(names))
        columns = (self._arrays[name][self.places[:most]].tolist() for name in names)
        return map(row._make, zip(*columns, strict=True))
