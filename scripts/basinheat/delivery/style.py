"""One colour ramp and one range per family of quantities: equal colours mean equal values."""

from __future__ import annotations

import numpy as np
import pandas as pd

from basinheat.delivery import contours
from basinheat.delivery.metadata import About, quantity

# Perceptually uniform ramps that come with matplotlib (Smith and van der Walt 2015; Nuñez,
# Anderton and Renslow 2018 for cividis).
_RAMPS = {
    "temperature": "inferno",
    "heat_flow": "plasma",
    "gradient": "plasma",
    "isotherm": "viridis_r",
    "probability": "cividis",
    "well_distance": "cividis",
    "deepest_reading": "viridis_r",
}
_UNCERTAINTY = "magma"
_FIXED = {"probability": (0.0, 1.0)}
_TAILS = (1.0, 99.0)  # percent: a few odd cells must not flatten the colours of the rest


def ramp(family: str) -> str:
    """Return the name of the matplotlib colour map of a family."""
    return _UNCERTAINTY if family.endswith("_std") else _RAMPS[family]


def limits(maps: pd.DataFrame, about: About) -> dict[str, tuple[float, float]]:
    """Return the range of colours of every family in the maps, the same for all its members.

    Parameters
    ----------
    maps : DataFrame
        ``tables.Maps``.
    about : About
        Of the delivery.

    Returns
    -------
    dict
        Family to (low, high), rounded outwards; families without any value are left out.
    """
    ends: dict[str, list[np.ndarray]] = {}
    for name in maps.columns.drop(["row", "col"]):
        values = maps[name].to_numpy(float)
        values = values[np.isfinite(values)]
        if values.size:
            ends.setdefault(quantity(name, about).family, []).append(np.percentile(values, _TAILS))
    ends.pop("status", None)
    return {family: _FIXED.get(family) or _round_out(pairs) for family, pairs in ends.items()}


def contour_steps(maps: pd.DataFrame, about: About) -> dict[str, float]:
    """Return the contour step of every family, a round number, the same for all its members."""
    return {name: contours.step(*ends) for name, ends in limits(maps, about).items()}


def _round_out(pairs: list[np.ndarray]) -> tuple[float, float]:
    low, high = min(pair[0] for pair in pairs), max(pair[1] for pair in pairs)
    size = contours.step(low, high)
    low, high = np.floor(low / size + 1e-9) * size, np.ceil(high / size - 1e-9) * size
    return float(low), float(high if high > low else low + size)
