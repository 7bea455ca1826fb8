"""From estimates and resistances to sources, temperatures and heat flow."""

from __future__ import annotations

import logging
from dataclasses import dataclass
from typing import Any

import numpy as np
import pandas as pd

from basinheat.errors import UserError
from basinheat.geostat.models import Covariance
from basinheat.geostat.variogram import experimental
from basinheat.heatflow.arrange import arrange, in_order, loadings_on, of_temperature, starts
from basinheat.heatflow.joint import Joint, fit_joint
from basinheat.tables import HeatFlowPoints, Temperatures
from basinheat.tables.sources import LITHOLOGY, PRODUCTION, ROCK

log = logging.getLogger(__name__)

FEWEST_WELLS = 5


@dataclass(frozen=True)
class Fit:
    """What the joint fit hands on: tables by name, and the covariance as a plain dict."""

    sources: pd.DataFrame
    source_covariance: pd.DataFrame
    source_information: pd.DataFrame
    temperatures: pd.DataFrame
    heat_flow: pd.DataFrame
    map_points: pd.DataFrame
    variogram: dict[str, Any]


def fit(
    estimates: pd.DataFrame,
    resistances: pd.DataFrame,
    sources: pd.DataFrame,
    wells: pd.DataFrame,
    models: tuple[str, ...],
    surface_shared_std_k: float,
    regional_mw_m2: float | None = None,
    pinned: dict[str, Any] | None = None,
    holdout: tuple[str, ...] = (),
    trend: str = "none",
    published: pd.DataFrame | None = None,
    published_shared_share: float = 0.05,
) -> Fit:
    """Fit the covariance of heat flow and all shared sources; give what follows from it.

    Parameters
    ----------
    estimates, resistances : DataFrame
        The tables of these names, row by row the same temperatures.
    sources : DataFrame
        Sources of the correction and of the rock: source, prior_std, unit.
    wells : DataFrame
        Wells with surface temperatures.
    models : tuple of str
        Covariance models to choose from.
    surface_shared_std_k : float
        Part of the surface temperature's sigma common to the basin.
    regional_mw_m2 : float, optional
        First guess of the regional heat flow; default the median of single temperatures.
    pinned : dict, optional
        A reviewed covariance.
    holdout : tuple of str
        Wells that must not inform the fit.
    trend : {"none", "linear"}
        Drift of heat flow in x and y.
    published : DataFrame, optional
        Heat flow determined elsewhere, by the contract HeatFlowPoints.
    published_shared_share : float
        Share of its values that all of it may be off by alike.

    Raises
    ------
    UserError
        When fewer than five wells have a temperature, or all lie at one place.
    """
    kept = ~estimates["well"].isin(holdout)
    wells = wells[wells["well"].isin(estimates["well"][kept])].sort_values("well")
    wells = wells.reset_index(drop=True)
    if len(wells) < FEWEST_WELLS:
        raise UserError(
            f"wells with a usable temperature: {len(wells)}, a map needs {FEWEST_WELLS}. "
            "rejected.csv in the folder wells of the results says what was refused and why."
        )
    if len(wells[["easting_m", "northing_m"]].drop_duplicates()) == 1:
        raise UserError(
            f"all {len(wells)} wells lie at one place, a map needs several. Check the columns of x "
            "and y in inputs.wells."
        )
    published = HeatFlowPoints.empty() if published is None else published
    published = published[~published["well"].isin(holdout)].sort_values("well", ignore_index=True)
    share = published_shared_share if len(published) else None
    sources = in_order(sources, surface_shared_std_k, share)
    order = np.argsort(estimates["well"].to_numpy()[kept], kind="stable")
    used = estimates[kept].iloc[order].reset_index(drop=True)
    rock = resistances[kept].iloc[order].reset_index(drop=True)
    basin, classes = arrange(used, rock, sources, wells, published)
    if regional_mw_m2 is None:
        excess = basin.temperature - basin.surface + basin.radiogenic.sum(1)
        total = basin.resistance.sum(1) + basin.resistance_fixed
        regional_mw_m2 = float(np.median((excess + basin.radiogenic_fixed) / total))
    joint = fit_joint(
        basin,
        regional_mw_m2,
        models,
        Covariance.from_dict(pinned["covariance"]) if pinned else None,
        trend,
    )
    log.info(
        "%d wells, %d temperatures, %d published: regional heat flow %.1f mW/m2, %s",
        len(wells),
        len(used),
        len(published),
        joint.regional,
        joint.covariance,
    )
    return Fit(
        sources=_sources(joint, sources),
        source_covariance=_matrix(sources, joint.mean, joint.posterior),
        source_information=_matrix(sources, joint.mean_within, joint.covariance_within),
        temperatures=_temperatures(joint, estimates, sources, classes),
        heat_flow=_heat_flow(joint, used, rock, sources, wells, published),
        map_points=_map_points(joint, sources, pd.concat([wells, published])),
        variogram=_variogram(joint, classes, basin.places),
    )


def _matrix(sources: pd.DataFrame, mean: np.ndarray, covariance: np.ndarray) -> pd.DataFrame:
    columns = {f"covariance_{name}": covariance[:, i] for i, name in enumerate(sources["source"])}
    return pd.DataFrame({"source": sources["source"], "mean": mean, **columns})


def _sources(joint: Joint, sources: pd.DataFrame) -> pd.DataFrame:
    carried = pd.DataFrame(np.abs(joint.reduced.loadings) > 0, columns=sources["source"])
    return sources.assign(
        mean=joint.mean * sources["prior_std"],
        std=np.sqrt(np.diag(joint.posterior)) * sources["prior_std"],
        n_wells=carried.sum().to_numpy(),
    )


def _temperatures(
    joint: Joint, estimates: pd.DataFrame, sources: pd.DataFrame, classes: list[str]
) -> pd.DataFrame:
    """Take the posterior mean of the sources out of the estimates, held-out wells included."""
    place = of_temperature(sources)
    loadings = loadings_on(estimates, sources["source"][place])
    posterior = joint.posterior[np.ix_(place, place)]
    shift = loadings @ joint.mean[place]
    scale = dict(zip(classes, np.sqrt(joint.scales), strict=True))
    factor = estimates["variance_class"].map(scale).fillna(1.0).to_numpy(float)
    final = estimates.assign(
        temperature_degc=estimates["temperature_degc"] - shift,
        correction_k=estimates["correction_k"] - shift,
        temperature_std_k=estimates["temperature_std_k"] * factor,
        well_std_k=estimates["well_std_k"] * factor,
        shared_std_k=np.sqrt(np.einsum("ij,jk,ik->i", loadings, posterior, loadings)),
    )
    return final.loc[final["used"], list(Temperatures.columns)].reset_index(drop=True)


def _heat_flow(
    joint: Joint,
    used: pd.DataFrame,
    rock: pd.DataFrame,
    sources: pd.DataFrame,
    wells: pd.DataFrame,
    published: pd.DataFrame,
) -> pd.DataFrame:
    """Heat flow of each well, sources at their posterior mean; then what was published."""
    reduced = joint.reduced
    left = joint.mean - joint.offset
    shared = np.einsum("ij,jk,ik->i", reduced.loadings, joint.posterior, reduced.loadings)
    resistance, ln_std = _resistance(joint, rock, sources)
    rows = pd.DataFrame(
        {
            "well": used["well"],
            "depth_m": used["depth_m"],
            "conductivity_w_mk": used["depth_m"] / resistance,
            "ln_std": ln_std,
            "origin": rock["origin"],
        }
    )
    deepest = rows.loc[rows.groupby("well")["depth_m"].idxmax()].set_index("well")
    deepest = deepest.reindex(wells["well"]).reset_index()
    n_points = rows.groupby("well").size().reindex(wells["well"]).to_numpy()
    several = np.where(n_points > 1, "several temperatures", "one temperature")
    value = reduced.heat_flow - reduced.loadings @ left
    n = len(wells)
    own = pd.DataFrame(
        {
            "well": wells["well"],
            "heat_flow_mw_m2": value[:n],
            "heat_flow_std_mw_m2": np.sqrt(reduced.variance[:n]),
            "heat_flow_shared_std_mw_m2": np.sqrt(shared[:n]),
            "conductivity_w_mk": deepest["conductivity_w_mk"],
            "conductivity_std_w_mk": deepest["conductivity_w_mk"] * deepest["ln_std"],
            "n_points": n_points,
            "method": np.where(n_points > 1, "bullard", "single_temperature"),
            "quality": deepest["origin"] + " conductivity, " + pd.Series(several),
            "effects": "none",
        }
    )
    given = pd.DataFrame(
        {
            "well": published["well"],
            "heat_flow_mw_m2": value[n:],
            "heat_flow_std_mw_m2": np.sqrt(reduced.variance[n:]),
            "heat_flow_shared_std_mw_m2": np.sqrt(shared[n:]),
            "conductivity_w_mk": published["conductivity_w_mk"],
            "conductivity_std_w_mk": np.nan,
            "n_points": 0,
            "method": "published",
            "quality": published["quality"],
            "effects": "none",
        }
    )
    return pd.concat([own, given], ignore_index=True) if len(given) else own


def _resistance(
    joint: Joint, rock: pd.DataFrame, sources: pd.DataFrame
) -> tuple[np.ndarray, np.ndarray]:
    """Resistance with the rock sources at their posterior mean, and sigma of its logarithm."""
    lithology = starts(sources, LITHOLOGY)
    other = starts(sources, ROCK) & (sources["source"] != PRODUCTION).to_numpy()
    names = sources["source"].str.removeprefix(LITHOLOGY)
    ln_std = sources["prior_std"].to_numpy()[lithology]
    parts = rock[[f"resistance_{name}" for name in names[lithology]]].to_numpy()
    change = rock[[f"change_{name}" for name in names[other]]].to_numpy()
    nominal = rock["resistance_m2k_w"].to_numpy()
    relative = change / nominal[:, None]
    changed = parts * np.exp(-ln_std * joint.mean[lithology])
    level = nominal + (changed - parts).sum(1)
    resistance = level * np.exp(relative @ joint.mean[other])
    share = np.hstack([-changed * ln_std / level[:, None], relative])
    kept = np.flatnonzero(lithology).tolist() + np.flatnonzero(other).tolist()
    variance = np.einsum("ij,jk,ik->i", share, joint.posterior[np.ix_(kept, kept)], share)
    variance += (rock["resistance_std_m2k_w"].to_numpy() / resistance) ** 2
    return resistance, np.sqrt(variance)


def _map_points(joint: Joint, sources: pd.DataFrame, places: pd.DataFrame) -> pd.DataFrame:
    places = places.reset_index(drop=True)
    loadings = {
        f"loading_{name}": joint.reduced.loadings[:, i] for i, name in enumerate(sources["source"])
    }
    return pd.DataFrame(
        {
            "well": places["well"],
            "easting_m": places["easting_m"],
            "northing_m": places["northing_m"],
            "value": joint.reduced.heat_flow,
            "value_std": np.sqrt(joint.reduced.variance),
            **loadings,
        }
    )


def _variogram(joint: Joint, classes: list[str], xy: np.ndarray) -> dict[str, Any]:
    """Describe the fitted covariance, and the scales that the stated variances needed."""
    reduced = joint.reduced
    value = reduced.heat_flow - reduced.loadings @ (joint.mean - joint.offset)
    measured = experimental(
        xy,
        value,
        reduced.variance,
        max_lag=min(1.5 * joint.covariance.range_m, 0.5 * float(np.hypot(*np.ptp(xy, axis=0)))),
        loadings=reduced.loadings,
        prior_covariance=joint.posterior,
    )
    return {
        "quantity": "heat_flow",
        "unit": "mW/m2",
        "covariance": joint.covariance.to_dict(),
        "experimental": measured.to_dict(),
        "variance_scales": dict(zip(classes, joint.scales.tolist(), strict=True)),
        "regional_mw_m2": joint.regional,
    }
