"""What the report is made from."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import pandas as pd

from basinheat.delivery.metadata import About
from basinheat.grid import Grid


@dataclass(frozen=True)
class Contents:
    """Tables and records of one scenario, as loaded."""

    about: About
    grid: Grid
    maps: pd.DataFrame
    wells: pd.DataFrame
    readings: pd.DataFrame
    layers: pd.DataFrame
    rejected: pd.DataFrame
    temperatures: pd.DataFrame
    resistances: pd.DataFrame
    heat_flow: pd.DataFrame
    sources: pd.DataFrame
    crossval_heat_flow: pd.DataFrame
    crossval_temperature: pd.DataFrame
    scores: dict[str, Any]
    heat_flow_model: dict[str, Any]
    structure_model: dict[str, Any]
    recovery: dict[str, Any]
    settings: dict[str, Any]
    versions: dict[str, str]
