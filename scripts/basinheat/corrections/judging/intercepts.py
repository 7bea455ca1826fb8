"""Where the temperatures of each method point to at the surface: a bias seen without pairs."""

from __future__ import annotations

import logging
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

import numpy as np
import pandas as pd

from basinheat import tables
from basinheat.corrections.judging.regional_line import Line, fit_line
from basinheat.corrections.judging.verdicts import Verdict
from basinheat.corrections.method import Floats
from basinheat.corrections.registry import METHODS
from basinheat.tables.sources import LITHOLOGY, SURFACE

log = logging.getLogger(__name__)

# An intercept is alarming beyond both (the second: common practice, no source).
ERRORS, LEAST_K = 2.0, 2.0


@dataclass(frozen=True)
class Ground:
    """What a line stands on, a row per row of ``estimates``.

    Parameters
    ----------
    well : (n,) array of int
        Well.
    xy : (n, 2) array, m
        Its place.
    depth_m : (n,) array, m
        Depth.
    surface_degc : (n,) array, degC
        Surface temperature.
    resistance, radiogenic_k : (n,) array, 1e3 m2 K/W and K
        Thermal resistance above, with the rock as the joint fit found it; radiogenic cooling.
    change : (sources, n) array, 1e3 m2 K/W
        Change of resistance per amplitude of each source of rock.
    covariance : (sources, sources) array
        Of those amplitudes, after the fit.
    surface_std_k : float, K
        What remains unknown of the surface temperature of the whole basin.
    """

    well: np.ndarray
    xy: Floats
    depth_m: Floats
    surface_degc: Floats
    resistance: Floats
    radiogenic_k: Floats
    change: Floats
    covariance: Floats
    surface_std_k: float


def lay_ground(
    estimates: pd.DataFrame,
    resistances: pd.DataFrame,
    wells: pd.DataFrame,
    sources: pd.DataFrame,
    source_covariance: pd.DataFrame,
) -> Ground:
    """Return the ground of ``estimates``; ``resistances`` are its rows, in its order."""
    at = wells.set_index("well").loc[estimates["well"]]
    resistance = resistances["resistance_m2k_w"].to_numpy() * 1e-3
    found = source_covariance.set_index("source")
    names: list[str] = []
    changes: list[Floats] = []
    pairs = zip(sources["source"].astype(str), sources["prior_std"].to_numpy(float), strict=True)
    for name, prior_std in pairs:
        part = resistances.get(f"resistance_{name.removeprefix(LITHOLOGY)}")
        amplitude = float(found["mean"].to_numpy()[found.index.get_loc(name)])
        if name.startswith(LITHOLOGY) and part is not None:
            now = part.to_numpy(float) * 1e-3 * np.exp(-prior_std * amplitude)
            resistance = resistance + now - part.to_numpy(float) * 1e-3
            changes.append(-prior_std * now)
        elif f"change_{name}" in resistances:
            changes.append(resistances[f"change_{name}"].to_numpy(float) * 1e-3)
            resistance = resistance + changes[-1] * amplitude
        else:
            continue
        names.append(name)
    surface = sources.loc[sources["source"] == SURFACE, "std"]
    return Ground(
        well=pd.factorize(estimates["well"])[0],
        xy=at[["easting_m", "northing_m"]].to_numpy(float),
        depth_m=estimates["depth_m"].to_numpy(),
        surface_degc=at["surface_temperature_degc"].to_numpy(float),
        resistance=resistance,
        radiogenic_k=resistances["radiogenic_k"].to_numpy(),
        change=np.array(changes).reshape(len(names), len(estimates)),
        covariance=found.loc[names, [f"covariance_{name}" for name in names]].to_numpy(float),
        surface_std_k=float(surface.iloc[0]) if len(surface) else 0.0,
    )


def intercepts(
    ground: Ground,
    described: pd.DataFrame,
    verdicts: list[Verdict],
    estimates: pd.DataFrame,
    temperatures: pd.DataFrame,
) -> pd.DataFrame:
    """Fit a line for raw readings, every method, every class in use and the final temperatures.

    ``T − T₀ + P = b₀ + q(place) R``: temperature above the surface, radiogenic cooling P added,
    against thermal resistance R of the rock above. Heat flow q is free to change over the region
    and the line free to miss the surface. An unbiased method meets it within what the scatter
    between wells, the rock's conductivity and the surface temperature leave open. So b₀ shows a
    bias where no equilibrium log stands beside a reading.

    Notes
    -----
    Limits. A bias in proportion to R (that of mud that cools by a share of the rise) tilts the
    line and does not move b₀: heat flow takes it. A conductivity wrong at shallow depth moves b₀
    as a bias does. That is why resistance, with the rock as the fit found it, stands in place of
    depth: against depth, compaction and k(T) bend the line so much that true temperatures seem
    5 K too warm at the surface even where the line may bend (mean of 22 invented basins). The fit
    of the rock has seen the temperatures in the maps, and may have taken in a part of their bias.
    Few wells, or none shallow, see little: the expected range says how little.

    Parameters
    ----------
    ground : Ground
        Of the rows of ``estimates``.
    described, verdicts
        Of the comparison.
    estimates, temperatures : DataFrame
        Tables of these names.
    """
    rows = [
        {"group": group, "subject": subject, "in_use": in_use, **found}
        for group, subject, in_use, values in _groups(described, verdicts, estimates, temperatures)
        if (found := _row(ground, values))
    ]
    table = pd.DataFrame(rows, columns=list(tables.Intercepts.columns))
    table["alarm"] = [_alarm(row) for row in table.itertuples()]
    return tables.Intercepts.conform(table)


def _groups(
    described: pd.DataFrame,
    verdicts: list[Verdict],
    estimates: pd.DataFrame,
    temperatures: pd.DataFrame,
) -> Iterator[tuple[str, str, bool, Floats]]:
    """Yield kind of group, its name, whether it is in the maps, temperatures by estimate."""
    place = described["estimate"].to_numpy()
    mud_cooled = np.isin(np.arange(len(estimates)), place)
    final = pd.Index(temperatures["reading_ids"]).get_indexer(estimates["reading_ids"])
    known = final >= 0

    def of_sets(values: Floats) -> Floats:
        out = np.full(len(estimates), np.nan)
        out[place[place >= 0]] = values[place >= 0]
        return out

    yield "raw", "", False, of_sets(described["raw_temperature_degc"].to_numpy())
    in_use = set(estimates["method"][known])
    for verdict in verdicts:
        name = verdict.method.name
        if name == "uncorrected":  # the raw readings once more
            continue
        yield "method", name, name in in_use, of_sets(verdict.temperature_degc)
    own = estimates["temperature_degc"].to_numpy()
    for name in sorted(set(estimates["method"][~mud_cooled])):
        yield "method", name, True, np.where(estimates["method"] == name, own, np.nan)
    classes = np.where(mud_cooled & known, estimates["variance_class"].to_numpy(object), "")
    plain = {"", *(f"method:{method}" for method in METHODS)}
    for name in sorted({str(name) for name in classes} - plain):
        yield "class", name, True, np.where(classes == name, own, np.nan)
    taken = np.where(known, temperatures["temperature_degc"].to_numpy()[final], np.nan)
    yield "final", "", True, np.where(mud_cooled, taken, np.nan)


def _row(ground: Ground, temperature_degc: Floats) -> dict[str, float] | None:
    """Return the line of one group, None where there are too few wells for one."""
    y = temperature_degc - ground.surface_degc + ground.radiogenic_k
    rows = np.flatnonzero(np.isfinite(y) & np.isfinite(ground.resistance))
    line = fit_line(ground.resistance[rows], y[rows], ground.well[rows], ground.xy[rows])
    if line is None:
        return None
    rock = _rock_std_k(line, ground, rows)
    return {
        "n_sets": rows.size,
        "n_wells": np.unique(ground.well[rows]).size,
        "top_m": ground.depth_m[rows].min(),
        "base_m": ground.depth_m[rows].max(),
        "slope_mw_m2": line.slope,
        "intercept_k": line.intercept,
        "intercept_std_k": line.intercept_std,
        "expected_std_k": np.sqrt(line.intercept_std**2 + rock**2 + ground.surface_std_k**2),
    }


def _rock_std_k(line: Line, ground: Ground, rows: np.ndarray) -> float:
    """Return what the rock, as far as it is unknown, does to the intercept, K."""
    moved = line.slope * (ground.change[:, rows] @ line.influence)
    return float(np.sqrt(np.maximum(moved @ ground.covariance @ moved, 0.0)))


def _alarm(row: Any) -> str:
    """Say what an intercept means that stands out, and warn; else nothing."""
    limit = max(ERRORS * row.expected_std_k, LEAST_K)
    if not abs(row.intercept_k) > limit:
        return ""
    word = "warm" if row.intercept_k > 0.0 else "cold"
    text = f"{abs(row.intercept_k):.1f} K too {word} at the surface, where {limit:.1f} K would pass"
    log.warning(
        "the regional line of %s is %s: a bias that does not grow with depth, or rock that is "
        "wrong at shallow depth",
        " ".join([row.group, row.subject]).strip(),
        text,
    )
    return text
