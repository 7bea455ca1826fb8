"""Kriging of heat flow onto map cells, the shared sources with it."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import pandas as pd

from basinheat.geostat.engines import engine_class
from basinheat.geostat.models import Covariance

PART = 1_048_576  # cells kriged and written at a time: a row group of Parquet


def krige_heat_flow(
    points: pd.DataFrame,
    information: pd.DataFrame,
    fitted: dict[str, Any],
    cells: pd.DataFrame,
    engine: str = "auto",
    trend: str = "none",
) -> pd.DataFrame:
    """Krige surface heat flow, the shared sources with it.

    Parameters
    ----------
    points : DataFrame
        MapPoints: value, own standard uncertainty, loadings.
    information : DataFrame
        Mean and covariance of the amplitudes from inside the wells (SourceCovariance).
    fitted : dict
        variograms/heat_flow.json.
    cells : DataFrame
        Cells, or anything with row, col, easting_m, northing_m.
    engine, trend : str
        Settings of kriging.

    Returns
    -------
    DataFrame
        HeatFlowGrid.
    """
    parts = krige_heat_flow_parts(points, information, fitted, cells, engine, trend)
    return pd.concat(parts, ignore_index=True)


def krige_heat_flow_parts(
    points: pd.DataFrame,
    information: pd.DataFrame,
    fitted: dict[str, Any],
    cells: pd.DataFrame,
    engine: str = "auto",
    trend: str = "none",
) -> Iterator[pd.DataFrame]:
    """Krige as ``krige_heat_flow``, and yield the rows of a million cells at a time."""
    solved = heat_flow_engine(points, information, fitted, engine, trend)
    for start in range(0, max(len(cells), 1), PART):
        yield predict_heat_flow(solved, information["source"], cells.iloc[start : start + PART])


def predict_heat_flow(engine: Any, sources: pd.Series, cells: pd.DataFrame) -> pd.DataFrame:
    """Predict heat flow at cells with an engine that is solved; a HeatFlowGrid."""
    prediction = engine.predict(cells[["easting_m", "northing_m"]].to_numpy())
    cross = {f"cross_{name}": prediction.cross[:, i] for i, name in enumerate(sources)}
    return pd.DataFrame(
        {
            "row": cells["row"].to_numpy(),
            "col": cells["col"].to_numpy(),
            "heat_flow_mw_m2": prediction.mean,
            "variance_mw2_m4": prediction.variance,
            **cross,
        }
    )


def heat_flow_engine(
    points: pd.DataFrame,
    information: pd.DataFrame,
    fitted: dict[str, Any],
    engine: str = "auto",
    trend: str = "none",
) -> Any:
    """Return the kriging engine of heat flow, solved for the wells' values."""
    names = information["source"]
    return engine_class(engine, len(points))(
        points[["easting_m", "northing_m"]].to_numpy(),
        Covariance.from_dict(fitted["covariance"]),
        points["value_std"].to_numpy() ** 2,
        trend=trend,
        loadings=points[[f"loading_{name}" for name in names]].to_numpy(),
        prior_mean=information["mean"].to_numpy(),
        prior_covariance=information[[f"covariance_{name}" for name in names]].to_numpy(),
    ).solve(points["value"].to_numpy())
