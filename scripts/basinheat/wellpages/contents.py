"""What the page of the wells is made from."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import pandas as pd

from basinheat.conductivity.catalogue import Catalogue

_BY_WELL = ("wells", "readings", "layers", "rejected", "rejected_later", "estimates", "columns")


@dataclass(frozen=True)
class Contents:
    """Tables and records of one scenario, as loaded.

    ``closure`` has the rows of ``temperatures``, in their order. ``rejected`` is the ledger of
    reading and screening, ``rejected_later`` that of the correction: its readings stand in
    ``readings`` too.
    """

    run: str
    scenario: str
    wells: pd.DataFrame
    readings: pd.DataFrame
    layers: pd.DataFrame
    rejected: pd.DataFrame
    rejected_later: pd.DataFrame
    estimates: pd.DataFrame
    temperatures: pd.DataFrame
    closure: pd.DataFrame
    columns: pd.DataFrame
    sources: pd.DataFrame
    recovery: dict[str, Any]
    rocks: Catalogue
    settings: dict[str, Any]

    def of(self, wells: list[str]) -> Contents:
        """Return what concerns some wells only, rows in their order."""
        judged = self.temperatures["well"].isin(wells).to_numpy()
        rest = {
            name: frame[frame["well"].isin(wells)].reset_index(drop=True)
            for name in _BY_WELL
            for frame in (getattr(self, name),)
        }
        return replace(
            self,
            temperatures=self.temperatures[judged].reset_index(drop=True),
            closure=self.closure[judged].reset_index(drop=True),
            **rest,
        )

    @property
    def wells_drawn(self) -> int:
        """Return how many wells get pictures."""
        return int(self.settings["report"]["wells_drawn"])

    @property
    def holdout(self) -> frozenset[str]:
        """Return the wells that were kept out to judge the maps."""
        return frozenset(self.settings["validation"]["holdout"])

    @property
    def diffusivity_m2_s(self) -> float:
        """Return the diffusivity of the rock that the corrections assume, m2/s."""
        return float(self.settings["correction"]["diffusivity_m2_s"])

    @property
    def circulation_h(self) -> float:
        """Return the circulation time where none is noted: the basin's median, or the settings'."""
        learned = self.recovery.get("conductive_recovery", {})
        return float(
            learned.get("circulation_median_h") or self.settings["correction"]["circulation_h"]
        )
