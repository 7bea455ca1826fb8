"""From tables to the arrays of the joint fit, and which sources act on what."""

from __future__ import annotations

import numpy as np
import pandas as pd

from basinheat.heatflow.joint import Basin
from basinheat.heatflow.points import Points
from basinheat.tables.sources import LITHOLOGY, PRODUCTION, PUBLISHED, ROCK, SURFACE


def in_order(
    sources: pd.DataFrame, surface_std_k: float, published_share: float | None
) -> pd.DataFrame:
    """Order the sources, with those of the surface and, where there is any, published heat flow.

    Temperature comes first, then ln k, other rock, heat production, published heat flow.
    """
    more = {"source": [SURFACE], "prior_std": [surface_std_k], "unit": ["K"]}
    if published_share is not None:
        more = {
            "source": [SURFACE, PUBLISHED],
            "prior_std": [surface_std_k, published_share],
            "unit": ["K", "1"],
        }
    sources = pd.concat([sources[sources["source"] != SURFACE], pd.DataFrame(more)])
    name = sources["source"]
    rank = np.select(
        [
            name == PUBLISHED,
            name == PRODUCTION,
            name.str.startswith(ROCK),
            name.str.startswith(LITHOLOGY),
        ],
        [4, 3, 2, 1],
        0,
    )
    order = np.lexsort([name.to_numpy(str), rank])
    return sources.iloc[order].reset_index(drop=True)


def starts(sources: pd.DataFrame, prefix: str) -> np.ndarray:
    """Mark the sources of a kind."""
    return sources["source"].str.startswith(prefix).to_numpy()


def of_temperature(sources: pd.DataFrame) -> np.ndarray:
    """Mark the sources that act on temperatures."""
    rock = starts(sources, LITHOLOGY) | starts(sources, ROCK)
    return ~rock & (sources["source"] != PUBLISHED).to_numpy()


def loadings_on(estimates: pd.DataFrame, names: pd.Series) -> np.ndarray:
    """Return the loadings on the named sources, 0 where a row carries none."""
    columns = [f"loading_{name}" for name in names]
    return estimates.reindex(columns=columns).fillna(0.0).to_numpy()


def arrange(
    used: pd.DataFrame,
    rock: pd.DataFrame,
    sources: pd.DataFrame,
    wells: pd.DataFrame,
    published: pd.DataFrame,
) -> tuple[Basin, list[str]]:
    """Arrange the tables as the arrays of the fit."""
    well = pd.Index(wells["well"]).get_indexer(used["well"])
    at = wells.iloc[well]
    lithology = starts(sources, LITHOLOGY)
    rocks = sources["source"][lithology].str.removeprefix(LITHOLOGY).tolist()
    changes = [f"change_{s}" for s in sources["source"][starts(sources, ROCK)] if s != PRODUCTION]
    resistance = rock[[f"resistance_{name}" for name in rocks]].to_numpy() * 1e-3
    radiogenic = rock[[f"radiogenic_{name}" for name in rocks]].to_numpy()
    temperature_sources = sources[of_temperature(sources)]
    classes, scale_class = np.unique(used["variance_class"].to_numpy(str), return_inverse=True)
    return Basin(
        well=well,
        temperature=used["temperature_degc"].to_numpy(),
        surface=at["surface_temperature_degc"].to_numpy(),
        resistance=resistance,
        radiogenic=radiogenic,
        resistance_fixed=rock["resistance_m2k_w"].to_numpy() * 1e-3 - resistance.sum(1),
        radiogenic_fixed=rock["radiogenic_k"].to_numpy() - radiogenic.sum(1),
        loadings=loadings_on(used, temperature_sources["source"]),
        std=used["temperature_std_k"].to_numpy(),
        well_std=used["well_std_k"].to_numpy(),
        surface_std=at["surface_temperature_std_k"].to_numpy(),
        resistance_std=rock["resistance_std_m2k_w"].to_numpy() * 1e-3,
        scale_class=scale_class,
        xy=wells[["easting_m", "northing_m"]].to_numpy(),
        change=rock[changes].to_numpy() * 1e-3,
        ln_std=sources["prior_std"].to_numpy()[lithology],
        surface_shift=np.where(
            temperature_sources["source"] == SURFACE, temperature_sources["prior_std"], 0.0
        ),
        production_std=sources["prior_std"][sources["source"] == PRODUCTION].to_numpy(),
        points=Points(
            xy=published[["easting_m", "northing_m"]].to_numpy(float),
            heat_flow=published["heat_flow_mw_m2"].to_numpy(float),
            std=published["heat_flow_std_mw_m2"].to_numpy(float),
            shared_share=sources["prior_std"][sources["source"] == PUBLISHED].to_numpy(),
        ),
    ), classes.tolist()
