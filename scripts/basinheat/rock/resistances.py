"""Thermal resistance above each temperature, and the conductivity structure of the wells."""

from __future__ import annotations

import logging
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.conductivity.overrides import law_of, load_overridden
from basinheat.rock import regionalflow, section
from basinheat.rock.beds import prepare_beds
from basinheat.rock.columns import Rules
from basinheat.rock.model import ORIGINS, Below, RockModel
from basinheat.rock.passes import Passes, Wanted, first_pass, regional_flow, second_pass
from basinheat.settings.heat import Conductivity, HeatFlow
from basinheat.tables import Resistances, Sources, StructurePoints
from basinheat.tables.sources import LITHOLOGY, PRODUCTION, ROCK

log = logging.getLogger(__name__)
Array = NDArray[np.float64]

# What is uncertain about all rock at once, beside the level of each lithology. Published laws of
# k(T) differ by 5 to 15 % at 100 degC, about a third of the fall; surface porosities and heat
# productions of one rock differ by 10 and 20 % between basins (common practice, no source).
LAW, COMPACTION = f"{ROCK}temperature_law", f"{ROCK}compaction"
PRIOR_STD = {LAW: 0.3, COMPACTION: 0.1, PRODUCTION: 0.2}


@dataclass(frozen=True)
class Rocks:
    """What the rock gives: three tables, and the layers that could not be used."""

    resistances: pd.DataFrame
    structure: pd.DataFrame
    sources: pd.DataFrame
    rejected: pd.DataFrame


def estimate(
    estimates: pd.DataFrame,
    wells: pd.DataFrame,
    layers: pd.DataFrame,
    conductivity: Conductivity,
    heat_flow: HeatFlow,
    holdout: Sequence[str] = (),
) -> Rocks:
    """Integrate thermal resistance from the surface to each temperature.

    Conductivity is taken at the temperature that the *neighbours'* heat flow gives, in two passes:
    with the regional heat flow, then with that of the nearest wells.

    Parameters
    ----------
    estimates, wells, layers : DataFrame
        The tables of these names; wells with surface temperatures.
    conductivity, heat_flow
        Sections of the settings.
    holdout : sequence of str
        Wells that must not inform the maps: they have resistances, but no structure.

    Returns
    -------
    Rocks
        ``resistances`` row by row as ``estimates``; ``structure`` by well and depth interval;
        ``sources``: ln k of each lithology in use.

    Raises
    ------
    UserError
        Faults of the catalogue; lithologies it does not know.
    """
    wells = wells.sort_values("well", ignore_index=True)
    readings = _readings(estimates, wells)
    model, rejected = _model(readings, wells, layers, conductivity)
    passes = Passes(model, wells["surface_temperature_degc"].to_numpy(float), readings)
    if heat_flow.regional_mw_m2 is None:
        regional = regional_flow(passes)
    else:
        regional = heat_flow.regional_mw_m2 / 1000.0
    count = len(wells)
    flow, slowness, mean_slowness = first_pass(passes, np.full(count, regional))
    covariance = section.spread(slowness, mean_slowness, model.interval_m)
    xy = wells[["easting_m", "northing_m"]].to_numpy(float)
    local = regionalflow.smoothed(xy, flow, regional)
    log.info("heat flow for the temperature of the rock: %.1f mW/m2", 1000.0 * regional)
    for code, refused in rejected.groupby("code"):
        log.warning("%d layers not used: %s", len(refused), code)
    rows, points = second_pass(passes, local, covariance, conductivity.well_std_ln)
    changes = {}
    for source, varied in _variants(model).items():
        altered = Passes(varied, passes.surface_degc, readings)
        other = second_pass(altered, local, covariance, conductivity.well_std_ln)
        changes[source] = (
            other[0]["resistance"].sum(1) - rows["resistance"].sum(1),
            other[1]["value"] - points["value"],
        )
    rocks = _tables(model, estimates, wells, rows, points, changes, rejected)
    mapped = ~rocks.structure["well"].isin(holdout)
    return replace(rocks, structure=rocks.structure[mapped].reset_index(drop=True))


def _variants(model: RockModel) -> dict[str, RockModel]:
    """Return the model one standard deviation away, by source."""
    variants = {COMPACTION: model.with_porosity(float(np.exp(PRIOR_STD[COMPACTION])))}
    if model.with_temperature:
        variants[LAW] = model.with_law_strength(1.0 + PRIOR_STD[LAW])
    return variants


def _readings(estimates: pd.DataFrame, wells: pd.DataFrame) -> Wanted:
    """Return where resistances are wanted, wells as places."""
    well = pd.Index(wells["well"]).get_indexer(estimates["well"])
    if (well < 0).any():
        raise KeyError("estimates name wells that the table of wells does not hold")
    surface = wells["surface_temperature_degc"].to_numpy(float)
    return Wanted(
        well,
        estimates["depth_m"].to_numpy(float),
        estimates["temperature_degc"].to_numpy(float) - surface[well],
        estimates["used"].to_numpy(bool),
    )


def _model(
    readings: Wanted, wells: pd.DataFrame, layers: pd.DataFrame, settings: Conductivity
) -> tuple[RockModel, pd.DataFrame]:
    """Put the rock model together."""
    rocks = load_overridden(settings.catalogue, settings.model_dump())
    beds, mixtures, lithologies, default, rejected = prepare_beds(layers, wells, rocks, settings)
    deepest = np.full(len(wells), settings.interval_m)
    np.maximum.at(deepest, readings.well, readings.depth_m)
    np.maximum.at(deepest, beds.well, beds.base_m)
    step = settings.interval_m
    if len(beds.well):
        with_layers = len(np.unique(beds.well))
        bed, part = mixtures.parts(beds.mixture)
        mean = section.mean_section(
            beds.top_m[bed],
            beds.base_m[bed],
            mixtures.lithology[part],
            len(lithologies.names),
            step,
            min(settings.wells_per_interval, with_layers),
            mixtures.share[part],
            mixtures.resistive(lithologies, beds, bed, part, settings.mixing.beds),
        )
    else:
        log.warning("no well has layers: %s assumed everywhere", settings.default_lithology)
        mean = section.uniform(default, len(lithologies.names))
    below = settings.below_layers
    model = RockModel(
        lithologies=lithologies,
        mixtures=mixtures,
        beds=beds,
        section=mean,
        below=Below(
            below.conductivity_w_mk,
            below.std_ln,
            below.growth_ln_per_km / 1000.0,
            below.heat_production_uw_m3 * 1e-6,
            law_of("sedimentary", settings.laws.model_dump()),
        ),
        deepest_m=np.ceil(deepest / step - 1e-9) * step,
        interval_m=step,
        with_temperature=settings.temperature_law,
        rules=Rules(
            settings.mixing.beds,
            settings.fluid_mixing,
            settings.pressure_mpa_per_km / 1000.0 if settings.pressure != "none" else 0.0,
        ),
    )
    return model, rejected


def _tables(
    model: RockModel,
    estimates: pd.DataFrame,
    wells: pd.DataFrame,
    rows: dict[str, Array],
    points: dict[str, Array],
    changes: dict[str, tuple[Array, Array]],
    rejected: pd.DataFrame,
) -> Rocks:
    """Write the arrays into tables, with a column for each lithology and source in use."""
    rocks = model.lithologies
    in_use = [
        j
        for j in range(model.rocks)
        if rows["resistance"][:, j].any() or points["loading"][:, j].any()
    ]
    total = rows["resistance"].sum(1)
    depth = estimates["depth_m"].to_numpy(float)
    with np.errstate(divide="ignore", invalid="ignore"):
        mean_conductivity = depth / total
    resistances = pd.DataFrame(
        {
            "well": estimates["well"].to_numpy(object),
            "depth_m": depth,
            "resistance_m2k_w": total,
            "resistance_std_m2k_w": np.sqrt(rows["variance"]),
            "radiogenic_k": rows["radiogenic"].sum(1),
            "conductivity_w_mk": mean_conductivity,
            "origin": np.array(ORIGINS, dtype=object)[rows["origin"].astype(int)],
            **{f"resistance_{rocks.names[j]}": rows["resistance"][:, j] for j in in_use},
            **{f"radiogenic_{rocks.names[j]}": rows["radiogenic"][:, j] for j in in_use},
            **{f"change_{source}": change for source, (change, _) in changes.items()},
        }
    )
    loading, place, well = points.pop("loading"), points.pop("place"), points.pop("well")
    structure = pd.DataFrame(
        {
            "well": wells["well"].to_numpy(object)[well],
            "easting_m": wells["easting_m"].to_numpy(float)[well],
            "northing_m": wells["northing_m"].to_numpy(float)[well],
            "top_m": place * model.interval_m,
            "base_m": (place + 1) * model.interval_m,
            **points,
            **{f"loading_{LITHOLOGY}{rocks.names[j]}": loading[:, j] for j in in_use},
            **{f"loading_{source}": change for source, (_, change) in changes.items()},
        }
    )
    prior = {f"{LITHOLOGY}{rocks.names[j]}": (rocks.std_ln[j], "ln") for j in in_use}
    prior |= {source: (PRIOR_STD[source], "relative") for source in [*changes, PRODUCTION]}
    sources = pd.DataFrame(
        {
            "source": list(prior),
            "prior_std": [std for std, _ in prior.values()],
            "unit": [unit for _, unit in prior.values()],
        }
    )
    return Rocks(
        Resistances.conform(resistances),
        StructurePoints.conform(structure),
        Sources.conform(sources.sort_values("source", ignore_index=True)),
        rejected,
    )
