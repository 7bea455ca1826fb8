"""Large maps, some rows at a time: memory does not grow with the map."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from typing import Any

import numpy as np
from numpy.typing import NDArray

from basinheat.geostat.prediction import Prediction

Array = NDArray[np.float64]

ROWS = 128  # of a band: whole blocks of a tiled raster, and eight tiles of kriging


def predict_bands(
    engine: Any,
    eastings: Array,
    northings: Array,
    covariates: Callable[[Array], Array] | None = None,
    rows: int = ROWS,
) -> Iterator[tuple[int, Prediction]]:
    """Predict a grid by bands of rows.

    Parameters
    ----------
    engine : GlobalKriging or TileKriging
        Solved.
    eastings, northings : arrays, shapes (columns,) and (rows,), m
        Of the cells' centres, evenly spaced.
    covariates : callable, optional
        Returns the drift's covariates (cells, p) at places (cells, 2).
    rows : int
        Rows of a band.

    Yields
    ------
    int, Prediction
        First row of the band, and its cells row by row.
    """
    apart_m = cell_size(eastings, northings)
    for start in range(0, len(northings), rows):
        band = northings[start : start + rows]
        places = np.empty((len(band), len(eastings), 2))
        places[..., 0] = eastings
        places[..., 1] = band[:, None]
        flat = places.reshape(-1, 2)
        drift = None if covariates is None else covariates(flat)
        yield start, engine.predict(flat, drift, apart_m=apart_m)


def cell_size(eastings: Array, northings: Array) -> float:
    """Return the distance of neighbouring centres, m; 0 for a single cell."""
    steps = [abs(float(c[1] - c[0])) for c in (eastings, northings) if len(c) > 1]
    return float(np.sqrt(np.prod(steps))) if steps else 0.0
