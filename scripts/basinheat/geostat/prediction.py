"""What every kriging engine returns."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Target = Literal["point", "signal"]

_BLOCK_ELEMENTS = 4_000_000  # of the data x cells block: 32 MB, whatever the grid


@dataclass(frozen=True)
class Prediction:
    """The field at places, given the data.

    Parameters
    ----------
    mean : array, shape (cells,), value units
        Posterior mean.
    variance : array, shape (cells,), value units squared
        Posterior variance, with the drift's and the shared sources' part.
    cross : array, shape (cells, m), value units
        Posterior covariance of the field with the amplitudes of the shared sources.
    """

    mean: Array
    variance: Array
    cross: Array


def row_blocks(rows: int, columns: int, block: int | None = None) -> Iterator[slice]:
    """Cut rows into slices of ``block``, by default as many as hold 32 MB with these columns."""
    size = block or max(16, _BLOCK_ELEMENTS // columns)
    return (slice(start, min(start + size, rows)) for start in range(0, rows, size))
