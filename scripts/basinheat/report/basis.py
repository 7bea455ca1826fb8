"""Where a map rests on readings and where it is carried down below them."""

from __future__ import annotations

import re

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.report.contents import Contents

_FAMILIES = ("heat_flow", "gradient", "temperature", "isotherm")


def mapped(contents: Contents) -> list[str]:
    """Return the mapped quantities that have values, in reading order."""
    maps = contents.maps
    names = [name for name in maps if f"{name}_std" in maps and maps[name].notna().any()]
    return sorted(names, key=_order)


def _order(name: str) -> tuple[int, float]:
    family = next(i for i, stem in enumerate(_FAMILIES) if name.startswith(stem))
    value = re.search(r"-?\d+(\.\d+)?", name)
    return family, float(value.group()) if value else 0.0


def below_readings(name: str, contents: Contents) -> NDArray[np.bool_]:
    """Return the cells in which a quantity is carried down below every reading nearby.

    Parameters
    ----------
    name : str
        Column of the maps.
    contents : Contents
        Of the report.

    Returns
    -------
    ndarray, (cells,)
        The deepest reading among the nearest wells is shallower than the depth mapped there. All
        False for surface heat flow, which has no depth.
    """
    maps = contents.maps
    match = re.fullmatch(r"temperature_(\d+(?:\.\d+)?)m", name)
    depth: float | pd.Series = 0.0
    if match:
        depth = float(match.group(1))
    elif name.startswith("isotherm_"):
        depth = maps[name]
    elif name == "gradient":
        depth = contents.about.reference_depth_m
    return (maps["deepest_reading"] < depth).to_numpy()


def share_below(name: str, contents: Contents) -> float:
    """Return the share of a map's cells that are carried down below every reading nearby."""
    there = contents.maps[name].notna().to_numpy()
    return float(below_readings(name, contents)[there].mean())
