"""What the report is made from."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import pandas as pd

from basinheat.conductivity.catalogue import Catalogue
from basinheat.delivery.metadata import About
from basinheat.grid import Grid


@dataclass(frozen=True)
class Contents:
    """Tables and records of one scenario, as loaded.

    ``rejected`` is the ledger of reading and screening, ``rejected_later`` that of the stages after
    it: its rows stand in ``readings`` and ``layers`` too. ``first_look`` is the
    record of the inputs.
    """

    about: About
    grid: Grid
    maps: pd.DataFrame
    wells: pd.DataFrame
    readings: pd.DataFrame
    layers: pd.DataFrame
    rejected: pd.DataFrame
    rejected_later: pd.DataFrame
    first_look: dict[str, Any]
    temperatures: pd.DataFrame
    correction_summary: pd.DataFrame
    anchor_differences: pd.DataFrame
    intercepts: pd.DataFrame
    method_sigmas: pd.DataFrame
    resistances: pd.DataFrame
    heat_flow: pd.DataFrame
    sources: pd.DataFrame
    crossval_heat_flow: pd.DataFrame
    crossval_temperature: pd.DataFrame
    scores: dict[str, Any]
    heat_flow_model: dict[str, Any]
    structure_model: dict[str, Any]
    recovery: dict[str, Any]
    calibration: pd.DataFrame
    rocks: Catalogue
    settings: dict[str, Any]
    versions: dict[str, str]

    @property
    def depths_m(self) -> list[float]:
        """Return the depths of the temperature maps, shallow to deep; m."""
        return sorted(self.settings["maps"]["depths_m"])

    @property
    def holdout(self) -> list[str]:
        """Return the wells that were kept out to judge the maps."""
        return list(self.settings["validation"]["holdout"])
