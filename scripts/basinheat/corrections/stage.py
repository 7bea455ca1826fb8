"""From readings to formation temperatures: the stage behind the rule correct_temperatures."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

import numpy as np
import pandas as pd

from basinheat import tables
from basinheat.corrections.calibration import stage as calibration
from basinheat.corrections.choose import Choice, choose, counts
from basinheat.corrections.gather import Gathered, gather, refuse
from basinheat.corrections.method import Context, Floats, Method
from basinheat.corrections.registry import METHODS
from basinheat.corrections.sets import ReadingSets
from basinheat.corrections.trend import fit_trend

if TYPE_CHECKING:
    from basinheat.settings.heat import Correction


@dataclass(frozen=True)
class Corrected:
    """What the correction leaves.

    Parameters
    ----------
    estimates, sources, rejected, calibration : DataFrame
        Tables by the contracts Estimates, Sources, Rejected, Calibration.
    recovery : dict
        What was learned from the basin, plain numbers for the report.
    """

    estimates: pd.DataFrame
    sources: pd.DataFrame
    rejected: pd.DataFrame
    calibration: pd.DataFrame
    recovery: dict[str, Any]


@dataclass(frozen=True)
class Basis:
    """What every method is given.

    Parameters
    ----------
    gathered : Gathered
        Readings in sets as they were read.
    sets : dict of str to ReadingSets
        By kind, the readings of each set carried to one depth.
    context : Context
        Settings, and what the whole basin tells.
    """

    gathered: Gathered
    sets: dict[str, ReadingSets]
    context: Context


def prepare(
    readings: pd.DataFrame,
    wells: pd.DataFrame,
    settings: Correction,
    holdout: Iterable[str] = (),
    surface_shared_std_k: float = 0.7,
) -> Basis:
    """Gather readings into sets and learn the region's trend; arguments as for ``correct``."""
    gathered = gather(readings, wells, settings, holdout)
    depth, rise = _overview(gathered)
    context = Context(
        trend=fit_trend(depth, rise),
        region=settings.region,
        diffusivity_m2_s=settings.diffusivity_m2_s,
        circulation_h=settings.circulation_h,
        circulation_factor=settings.circulation_factor,
        well_share=settings.well_share,
        surface_shared_std_k=surface_shared_std_k,
    )
    sets = {
        kind: each.at_one_depth(context.trend.gradient_k_m(each.depth_m))
        for kind, each in gathered.sets.items()
    }
    order = [METHODS[name] for name in settings.order]
    place = wells.set_index("well")[["easting_m", "northing_m"]].reindex(gathered.well_names)
    learned = calibration.learn(sets, order, context, place.to_numpy(np.float64), settings)
    return Basis(gathered, sets, replace(context, calibration=learned))


def correct(
    readings: pd.DataFrame,
    wells: pd.DataFrame,
    settings: Correction,
    holdout: Iterable[str] = (),
    surface_shared_std_k: float = 0.7,
) -> Corrected:
    """Estimate the formation temperature at every well and depth.

    Parameters
    ----------
    readings, wells : DataFrame
        Tables by the contracts Readings and Wells.
    settings : basinheat.settings.heat.Correction
        Section ``correction`` of the config.
    holdout : iterable of str
        Wells that are estimated like the others and teach nothing.
    surface_shared_std_k : float, K
        Standard uncertainty of the surface temperature that the whole basin shares.

    Returns
    -------
    Corrected
        Every reading is in one estimate or one row of the ledger.
    """
    order = [METHODS[name] for name in settings.order]
    basis = prepare(readings, wells, settings, holdout, surface_shared_std_k)
    gathered, context = basis.gathered, basis.context
    chosen = {kind: (sets, choose(sets, kind, order, context)) for kind, sets in basis.sets.items()}
    estimates = _estimates(gathered, chosen, order, context, settings.same_depth_m)
    rejected = pd.concat([gathered.rejected, _no_method(gathered, chosen)], ignore_index=True)
    _check_counts(len(readings), estimates, rejected)
    mud_cooled, choice = chosen.get("bht", (None, None))
    pairs = calibration.table(
        context.calibration, mud_cooled, choice, order, context, gathered.well_names
    )
    learned = calibration.record(context.calibration, pairs)
    return Corrected(
        estimates=estimates,
        sources=_sources(estimates, chosen),
        rejected=tables.Rejected.conform(rejected),
        calibration=pairs,
        recovery=_recovery(chosen, context, estimates) | {"calibration": learned},
    )


Chosen = dict[str, tuple[ReadingSets, Choice]]


def _check_counts(read: int, estimates: pd.DataFrame, rejected: pd.DataFrame) -> None:
    """Stop where a reading was lost or doubled: that would be an error of this program."""
    used = int(estimates["n_readings"].sum())
    if read != used + len(rejected):
        raise RuntimeError(f"{read} readings, {used} in estimates and {len(rejected)} refused")


def _overview(gathered: Gathered) -> tuple[Floats, Floats]:
    """Return depth and warmest reading above the surface of all sets that may teach."""
    parts = [
        (s.depth_m[s.learn], (s.warmest_degc - s.surface_temperature_degc)[s.learn])
        for s in gathered.sets.values()
    ]
    empty = np.zeros(0)
    return (
        np.concatenate([empty, *(depth for depth, _ in parts)]),
        np.concatenate([empty, *(rise for _, rise in parts)]),
    )


def _estimates(
    gathered: Gathered, chosen: Chosen, order: list[Method], context: Context, near_m: float
) -> pd.DataFrame:
    """Return one row per set with a method, by well, depth and kind."""
    parts = [
        _rows(gathered, sets, choice, order, context).assign(_kind=place)
        for place, (sets, choice) in enumerate(chosen.values())
    ]
    if not parts:
        return tables.Estimates.empty()
    rows = pd.concat(parts, ignore_index=True)
    rows = rows.sort_values(["_well", "depth_m", "_kind", "reading_ids"], ignore_index=True)
    rows["used"] = counts(
        rows["_well"].to_numpy(),
        rows["depth_m"].to_numpy(),
        rows["_kind"].to_numpy(),
        rows["_rank"].to_numpy(),
        near_m,
    )
    loadings = [name for name in rows.columns if name.startswith("loading_")]
    rows[loadings] = rows[loadings].fillna(0.0)
    rows["shared_std_k"] = np.sqrt((rows[loadings] ** 2).sum(axis=1))
    return tables.Estimates.conform(rows.drop(columns=["_well", "_kind", "_rank"]))


def _rows(
    gathered: Gathered, sets: ReadingSets, choice: Choice, order: list[Method], context: Context
) -> pd.DataFrame:
    """Return the estimates of one kind."""
    kept = np.flatnonzero(choice.rank >= 0)
    raw = gathered.warmest_degc(sets)
    gradient = context.trend.gradient_k_m(sets.depth_m)
    names = np.array([method.name for method in order], dtype=object)
    columns = {
        "_well": sets.well,
        "_rank": choice.rank,
        "well": gathered.well_names[sets.well],
        "depth_m": sets.depth_m,
        "temperature_degc": choice.temperature_degc,
        "temperature_std_k": choice.independent_std_k,
        # A depth error moves every reading of a well alike.
        "well_std_k": np.hypot(choice.well_std_k, sets.depth_error_k(gradient)),
        "raw_temperature_degc": raw,
        "correction_k": choice.temperature_degc - raw,
        "method": names[choice.rank],
        "variance_class": choice.variance_class,
        "n_readings": sets.count,
        "reading_ids": gathered.joined_ids(sets),
        "passed_over": choice.passed_over,
        "flags": choice.flags,
    }
    columns |= {f"loading_{name}": value.values for name, value in choice.loadings.items()}
    return pd.DataFrame({name: values[kept] for name, values in columns.items()})


def _no_method(gathered: Gathered, chosen: Chosen) -> pd.DataFrame:
    """Return the ledger rows of readings that no method of the order can treat."""
    parts = []
    for kind, (sets, choice) in chosen.items():
        none = choice.rank < 0
        place = sets.row[none]
        why = pd.Series(np.repeat(choice.passed_over[none], (place >= 0).sum(1)), dtype=object)
        able = ", ".join(method.name for method in METHODS.values() if method.kind == kind)
        sentence = (
            "no method of correction.order applies ("
            + why.where(why != "", f"none treats {kind} readings")
            .astype(object)
            .str.replace(";", "; ", regex=False)
            + (
                "). Add a method that needs less, such as harrison1983 or uncorrected."
                if kind == "bht"
                else f"). Add {able} to it."
            )
        )
        parts.append(refuse(gathered.readings, place[place >= 0], "no_method", sentence))
    return pd.concat(parts, ignore_index=True) if parts else tables.Rejected.empty()


def _sources(estimates: pd.DataFrame, chosen: Chosen) -> pd.DataFrame:
    """Return the shared sources that any row carries."""
    known = {
        name: (loading.prior_std, loading.unit)
        for _, choice in chosen.values()
        for name, loading in choice.loadings.items()
    }
    names = sorted(n for n in known if (estimates.get(f"loading_{n}", pd.Series([0.0])) != 0).any())
    return tables.Sources.conform(
        pd.DataFrame(
            {
                "source": pd.Series(names, dtype=object),
                "prior_std": [known[name][0] for name in names],
                "unit": pd.Series([known[name][1] for name in names], dtype=object),
            }
        )
    )


def _recovery(chosen: Chosen, context: Context, estimates: pd.DataFrame) -> dict[str, Any]:
    """Return what was learned, and how many estimates each method gave."""
    out: dict[str, Any] = {
        "raw_trend": {
            "surface_gradient_k_km": context.trend.slope_k_m * 1e3,
            "bend_k_km2": context.trend.bend_k_m2 * 1e6,
            "straight_below_m": float(min(context.trend.deepest_m, 1e5)),
        },
        "estimates": {
            str(name): int(n) for name, n in sorted(estimates["method"].value_counts().items())
        },
        "classes": {
            str(name): int(n)
            for name, n in sorted(estimates["variance_class"].value_counts().items())
        },
    }
    for _, choice in chosen.values():
        out |= choice.learned
    return out
