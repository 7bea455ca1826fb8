"""The maps, derived cell by cell from heat flow, conductivity and surface temperature."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.mapnames import isotherm_name, temperature_name
from basinheat.rebuild import (
    Columns,
    HeatFlow,
    Sources,
    Structure,
    at_depths,
    isotherm_depths,
    rebuild_columns,
)
from basinheat.tables.maps import STATUS
from basinheat.tables.sources import LITHOLOGY, PRODUCTION, ROCK, SURFACE

Floats = NDArray[np.float64]

BLOCK = 20_000  # cells at once: bounds memory whatever the grid


def derive(
    cells: pd.DataFrame,
    heat_flow: pd.DataFrame,
    structure: pd.DataFrame,
    sources: pd.DataFrame,
    source_covariance: pd.DataFrame,
    vertical_correlation_m: float,
    depths_m: list[float],
    isotherms_degc: list[float],
    reference_depth_m: float,
) -> pd.DataFrame:
    """Rebuild the temperature column of every cell and read all maps from it.

    Temperature slices, isotherm depths and the gradient come from the same columns, so they agree
    with each other and slices never cross.

    Returns
    -------
    DataFrame
        Maps, one row per cell.
    """
    shared = shared_sources(sources, source_covariance)
    n_intervals = len(structure) // len(cells)
    blocks = []
    for start in range(0, len(cells), BLOCK):
        part = slice(start, start + BLOCK)
        rows = slice(start * n_intervals, (start + BLOCK) * n_intervals)
        columns = rebuild(
            cells.iloc[part],
            heat_flow.iloc[part],
            structure.iloc[rows],
            sources,
            shared,
            vertical_correlation_m,
        )
        blocks.append(
            _read_maps(
                cells.iloc[part],
                heat_flow.iloc[part],
                columns,
                depths_m,
                isotherms_degc,
                reference_depth_m,
            )
        )
    return pd.concat(blocks, ignore_index=True)


def shared_sources(sources: pd.DataFrame, source_covariance: pd.DataFrame) -> Sources:
    """Arrange the posterior of the sources for rebuilding."""
    names = sources["source"]
    return Sources(
        mean=source_covariance["mean"].to_numpy(),
        covariance=source_covariance[[f"covariance_{name}" for name in names]].to_numpy(),
        surface_shift=np.where(names == SURFACE, sources["prior_std"], 0.0),
        production_share=np.where(names == PRODUCTION, sources["prior_std"], 0.0),
        rock=np.flatnonzero(names.str.startswith((LITHOLOGY, ROCK))),
    )


def rebuild(
    cells: pd.DataFrame,
    heat_flow: pd.DataFrame,
    structure: pd.DataFrame,
    sources: pd.DataFrame,
    shared: Sources,
    vertical_correlation_m: float,
) -> Columns:
    """Rebuild the columns of some cells; ``structure`` holds all their intervals, by cell."""
    n = len(cells)
    tops = structure["top_m"].to_numpy().reshape(n, -1)[0]
    bases = structure["base_m"].to_numpy().reshape(n, -1)[0]
    names = sources["source"]

    def by_cell(column: str) -> Floats:
        return structure[column].to_numpy().reshape(n, -1)

    rock = [f"loading_{name}" for name in names.iloc[shared.rock]]
    loadings = structure.reindex(columns=rock, fill_value=0.0).to_numpy().reshape(n, len(tops), -1)
    middle = 0.5 * (tops + bases)
    correlation = np.exp(-np.diff(middle, prepend=middle[0]) / vertical_correlation_m)
    return rebuild_columns(
        cells["surface_temperature_degc"].to_numpy(),
        cells["surface_temperature_std_k"].to_numpy() ** 2,
        HeatFlow(
            heat_flow["heat_flow_mw_m2"].to_numpy(),
            heat_flow["variance_mw2_m4"].to_numpy(),
            heat_flow[[f"cross_{name}" for name in names]].to_numpy(),
        ),
        Structure(
            edges=np.append(tops, bases[-1]),
            ln_conductivity=by_cell("ln_conductivity"),
            variance=by_cell("variance"),
            heat_production=by_cell("heat_production_uw_m3"),
            reference_temperature=by_cell("reference_temperature_degc"),
            temperature_slope=by_cell("temperature_slope_per_k"),
            loadings=loadings,
            vertical_correlation=correlation,
        ),
        shared,
    )


def _read_maps(
    cells: pd.DataFrame,
    heat_flow: pd.DataFrame,
    columns: Columns,
    depths_m: list[float],
    isotherms_degc: list[float],
    reference_depth_m: float,
) -> pd.DataFrame:
    """Read temperatures, isotherms and the gradient from the rebuilt columns."""
    depths = np.asarray(depths_m, float)
    temperature = at_depths(columns, columns.temperature, depths)
    std = np.sqrt(at_depths(columns, columns.variance, depths))
    reference = np.array([reference_depth_m])
    rise = at_depths(columns, columns.temperature, reference)[:, 0] - columns.temperature[:, 0]
    rise_std = np.sqrt(at_depths(columns, columns.variance_above_surface, reference)[:, 0])
    maps = {
        "row": cells["row"].to_numpy(),
        "col": cells["col"].to_numpy(),
        "well_distance": cells["well_distance_m"].to_numpy(),
        "deepest_reading": cells["deepest_reading_m"].to_numpy(),
        "heat_flow": heat_flow["heat_flow_mw_m2"].to_numpy(),
        "heat_flow_std": np.sqrt(heat_flow["variance_mw2_m4"].to_numpy()),
        "gradient": rise / reference_depth_m * 1e3,
        "gradient_std": rise_std / reference_depth_m * 1e3,
    }
    for i, depth in enumerate(depths):
        name = temperature_name(depth)
        maps[name], maps[f"{name}_std"] = temperature[:, i], std[:, i]
    too_deep = np.zeros(len(cells), bool)
    for degc in isotherms_degc:
        depth, depth_std = isotherm_depths(columns, degc)
        name = isotherm_name(degc)
        maps[name], maps[f"{name}_std"] = depth, depth_std
        too_deep |= columns.temperature[:, -1] < degc
    extrapolated = cells["deepest_reading_m"].to_numpy() < depths.max()
    maps["status"] = np.select(
        [too_deep, extrapolated],
        [STATUS["isotherm_too_deep"], STATUS["below_readings"]],
        STATUS["interpolated"],
    )
    return pd.DataFrame(maps)
