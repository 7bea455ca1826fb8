"""How well the maps predict what they have not seen, in mW/m2 and in kelvin."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.geostat import crossvalidation
from basinheat.geostat.engine_global import GlobalKriging
from basinheat.geostat.models import Covariance
from basinheat.geostat.scores import scores
from basinheat.interpolation import heat_flow_engine, predict_heat_flow
from basinheat.products import rebuild, shared_sources
from basinheat.rebuild import Columns, at_depths
from basinheat.settings.heat import Conductivity
from basinheat.settings.maps import Maps, Validation
from basinheat.structure import enough, krige_conductivity

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class Mapped:
    """Everything the maps were made from, as loaded; ``trend`` is the setting kriging.drift."""

    points: pd.DataFrame
    information: pd.DataFrame
    heat_flow_model: dict[str, Any]
    structure: pd.DataFrame
    structure_model: dict[str, Any]
    sources: pd.DataFrame
    source_covariance: pd.DataFrame
    trend: str = "none"


@dataclass(frozen=True)
class Judged:
    """The tables CrossValidation, Closure and WellColumns, and all scores."""

    heat_flow: pd.DataFrame
    temperature: pd.DataFrame
    columns: pd.DataFrame
    scores: dict[str, Any]


def cross_validate(
    mapped: Mapped,
    temperatures: pd.DataFrame,
    wells: pd.DataFrame,
    conductivity: Conductivity,
    maps: Maps,
    validation: Validation,
) -> Judged:
    """Leave out wells and blocks of wells; close the loop in kelvin at every temperature.

    Heat flow: closed-form leave-one-out and leave-block-out (Dubrule 1983) with the covariance
    fixed, against simple baselines. Temperature: the rebuilt column against the formation
    temperature, with the well in the maps (closure) and with the well left out of heat flow *and*
    conductivity (full chain). Wells of ``validation.holdout`` were never in the maps.

    Returns
    -------
    Judged
        Tables CrossValidation, Closure and WellColumns, and scores by name.
    """
    engine = heat_flow_engine(
        mapped.points, mapped.information, mapped.heat_flow_model, "global", mapped.trend
    )
    left_out = engine.leave_one_out()
    heat_flow, judged = _judge_heat_flow(mapped, validation, engine, left_out)
    temperature, columns = _judge_temperature(
        mapped, temperatures, wells, conductivity, maps, engine, left_out
    )
    judged["temperature_closure"] = _scores_of(temperature, "residual_k")
    judged["temperature_left_out"] = _scores_of(temperature, "left_out_k")
    held = temperature["well"].isin(validation.holdout)
    if held.any():
        judged["temperature_holdout"] = _scores_of(temperature[held], "left_out_k")
    return Judged(heat_flow, temperature, columns, judged)


def _judge_heat_flow(
    mapped: Mapped, validation: Validation, engine: GlobalKriging, left_out: tuple[Floats, Floats]
) -> tuple[pd.DataFrame, dict[str, Any]]:
    points = mapped.points
    xy = points[["easting_m", "northing_m"]].to_numpy()
    value = points["value"].to_numpy()
    predicted, std = left_out[0], np.sqrt(left_out[1])
    size = validation.block_range_share * mapped.heat_flow_model["covariance"]["range_m"]
    fold = crossvalidation.blocks(xy, size)
    block_predicted, block_variance = engine.leave_block_out(fold)
    table = pd.DataFrame(
        {
            "well": points["well"],
            "value": value,
            "value_std": points["value_std"],
            "predicted": predicted,
            "predicted_std": std,
            "z_score": (value - predicted) / std,
            "fold": fold,
        }
    )
    return table, {
        "heat_flow_left_out": scores(predicted - value, std),
        "heat_flow_block_left_out": scores(block_predicted - value, np.sqrt(block_variance)),
        "heat_flow_baselines_rmse": crossvalidation.baselines(
            xy, value, neighbours=validation.neighbours
        ),
    }


def _scores_of(table: pd.DataFrame, column: str) -> dict[str, Any]:
    residual = table[column].to_numpy()
    std = table[f"{column.removesuffix('_k')}_std_k"].to_numpy()
    good = np.isfinite(residual) & np.isfinite(std)
    return {"n": int(good.sum()), **scores(residual[good], std[good])}


def _judge_temperature(
    mapped: Mapped,
    temperatures: pd.DataFrame,
    wells: pd.DataFrame,
    conductivity: Conductivity,
    maps: Maps,
    engine: GlobalKriging,
    left_out: tuple[Floats, Floats],
) -> tuple[pd.DataFrame, pd.DataFrame]:
    """Rebuild the column of every well, with and without the well itself."""
    wells = wells[wells["well"].isin(temperatures["well"])].sort_values("well")
    cells = wells.assign(row=np.arange(len(wells)), col=0).reset_index(drop=True)
    heat_flow = predict_heat_flow(engine, mapped.information["source"], cells)
    structure = krige_conductivity(
        mapped.structure,
        mapped.structure_model,
        cells,
        conductivity.interval_m,
        max(maps.deepest_m, temperatures["depth_m"].max()),
        conductivity.wells_per_interval,
        conductivity.below_layers,
    )
    kept = _rebuilt(cells, heat_flow, structure, mapped)
    without = _rebuilt(
        cells,
        _heat_flow_left_out(heat_flow, cells, mapped, engine, left_out),
        _structure_left_out(structure, cells, mapped, conductivity.wells_per_interval),
        mapped,
    )
    return (
        _residuals(temperatures, cells, kept, without),
        _well_columns(temperatures, cells, kept, without),
    )


def _well_columns(
    temperatures: pd.DataFrame, cells: pd.DataFrame, kept: Columns, left_out: Columns
) -> pd.DataFrame:
    """Return the columns as a table: of each well down to the edge below its deepest reading."""
    deepest = temperatures.groupby("well")["depth_m"].max().reindex(cells["well"]).to_numpy()
    last = np.searchsorted(kept.edges, deepest)
    row, edge = np.nonzero(np.arange(len(kept.edges)) <= last[:, None])
    return pd.DataFrame(
        {
            "well": cells["well"].to_numpy()[row],
            "depth_m": kept.edges[edge],
            "rebuilt_degc": kept.temperature[row, edge],
            "rebuilt_std_k": np.sqrt(kept.variance[row, edge]),
            "predicted_degc": left_out.temperature[row, edge],
            "predicted_std_k": np.sqrt(left_out.variance[row, edge]),
        }
    )


def _rebuilt(
    cells: pd.DataFrame, heat_flow: pd.DataFrame, structure: pd.DataFrame, mapped: Mapped
) -> Columns:
    shared = shared_sources(mapped.sources, mapped.source_covariance)
    length = mapped.structure_model["vertical_correlation_m"]
    return rebuild(cells, heat_flow, structure, mapped.sources, shared, length)


def _heat_flow_left_out(
    heat_flow: pd.DataFrame,
    cells: pd.DataFrame,
    mapped: Mapped,
    engine: GlobalKriging,
    left_out: tuple[Floats, Floats],
) -> pd.DataFrame:
    """Heat flow at each mapped well from the others; held-out wells keep what the map says."""
    points, names = mapped.points, mapped.information["source"]
    predicted, variance = left_out
    loadings = points[[f"loading_{name}" for name in names]].to_numpy()
    mean, covariance = engine.amplitudes()
    signal = predicted - loadings @ mean
    own = points["value_std"].to_numpy() ** 2
    own = own + np.einsum("ij,jk,ik->i", loadings, covariance, loadings)
    at = pd.Index(points["well"]).get_indexer(cells["well"])
    there = at >= 0
    out = heat_flow.copy()
    out.loc[there, "heat_flow_mw_m2"] = signal[at[there]]
    # never less certain with the well than without it
    floor = out.loc[there, "variance_mw2_m4"].to_numpy()
    out.loc[there, "variance_mw2_m4"] = np.maximum((variance - own)[at[there]], floor)
    return out


def _structure_left_out(
    structure: pd.DataFrame, cells: pd.DataFrame, mapped: Mapped, wells_per_interval: int
) -> pd.DataFrame:
    """Conductivity at each well from the others, interval by interval."""
    frames = []
    wells_per_interval = enough(mapped.structure, wells_per_interval)
    for group in mapped.structure_model["groups"]:
        covariance = Covariance.from_dict(group["covariance"])
        inside = mapped.structure["top_m"].between(
            group["top_m"], group["base_m"], inclusive="left"
        )
        for _, frame in mapped.structure[inside].groupby("top_m"):
            if len(frame) < max(wells_per_interval, 2):  # one well leaves nothing to predict it
                continue
            xy = frame[["easting_m", "northing_m"]].to_numpy()
            own = frame["value_std"].to_numpy() ** 2
            engine = GlobalKriging(xy, covariance, own).solve(frame["value"].to_numpy())
            predicted, variance = engine.leave_one_out()
            frames.append(
                pd.DataFrame(
                    {
                        "row": pd.Index(cells["well"]).get_indexer(frame["well"]),
                        "top_m": frame["top_m"].to_numpy(),
                        "ln_conductivity": predicted,
                        "variance": np.maximum(variance - own, 0.0),
                    }
                )
            )
    if not frames:
        return structure
    left_out = pd.concat(frames)
    left_out = left_out[left_out["row"] >= 0].set_index(["row", "top_m"])
    out = structure.set_index(["row", "top_m"])
    out.update(left_out)
    return out.reset_index()


def _residuals(
    temperatures: pd.DataFrame, cells: pd.DataFrame, kept: Columns, left_out: Columns
) -> pd.DataFrame:
    """Compare formation temperatures with the rebuilt columns at their depths."""
    row = pd.Index(cells["well"]).get_indexer(temperatures["well"])
    depth = temperatures["depth_m"].to_numpy()
    own = temperatures["temperature_std_k"] ** 2 + temperatures["well_std_k"] ** 2
    total = np.sqrt(own + temperatures["shared_std_k"] ** 2)
    table = temperatures[["well", "depth_m", "temperature_degc", "method"]].assign(
        temperature_std_k=total
    )
    for name, columns in (("rebuilt", kept), ("predicted", left_out)):
        picked = Columns(
            columns.edges,
            columns.temperature[row],
            columns.variance[row],
            columns.variance_above_surface[row],
            columns.resistance[row],
        )
        there = at_depths(picked, picked.temperature, depth[:, None])[:, 0]
        variance = at_depths(picked, picked.variance, depth[:, None])[:, 0]
        residual = "residual" if name == "rebuilt" else "left_out"
        table[f"{name}_degc"] = there
        table[f"{residual}_k"] = there - temperatures["temperature_degc"]
        table[f"{residual}_std_k"] = np.sqrt(own + variance)
    return table
