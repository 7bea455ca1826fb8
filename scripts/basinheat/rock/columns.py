"""Thermal resistance and temperature down the rock columns of all wells at once.

A slab holds one or several parts in series: the well's own rock, or the basin's mean section with
each lithology's share. A part's conductivity follows from its matrix, porosity and pore water at
the temperature of the slab, and the temperature from heat flow and resistance above: solved by
iterating whole columns, which converges fast because k changes by a few percent per 10 K.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from basinheat.conductivity import conditions, mixing
from basinheat.rock.slabs import Slabs

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

ITERATIONS = 30
TOLERANCE_K = 1e-3
_RANGE_DEGC = (-10.0, 600.0)  # keeps a wild heat flow from leaving the range of the laws


@dataclass(frozen=True)
class Parts:
    """The p parts of slabs, sorted by slab; all arrays (p,).

    ``slab``; ``share`` of the slab's thickness; ``conductivity_w_mk`` of the matrix at 25 degC;
    ``porosity``; ``law`` (place in ``conditions.LAW_NAMES``); ``heat_production_w_m3``; ``group``:
    to which of the g groups (lithologies and such) the resistance counts. ``tilt`` is vertical k
    over that across the bedding, ``sedimentary`` whether pressure counts; None: 1, none.
    """

    slab: Whole
    share: Array
    conductivity_w_mk: Array
    porosity: Array
    law: Whole
    heat_production_w_m3: Array
    group: Whole
    tilt: Array | None = None
    sedimentary: NDArray[np.bool_] | None = None


@dataclass(frozen=True)
class Rules:
    """How conductivities combine.

    ``beds``: parts of an own layer ``harmonic`` (in series), ``geometric`` or ``arithmetic``;
    ``fluid``: matrix and pore water, see ``mixing.FLUID_RULES``; ``pressure_mpa_per_m``: rise of
    the pressure that sediments conduct better under, 0 for none.
    """

    beds: str = "harmonic"
    fluid: str = "geometric"
    pressure_mpa_per_m: float = 0.0


USUAL = Rules()


@dataclass(frozen=True)
class Columns:
    """Rock columns: slabs, their parts, the number of groups, and how k follows temperature.

    ``law_strength``: power on k(T) / k(25 degC), 1 for the laws as published.
    """

    slabs: Slabs
    parts: Parts
    groups: int
    with_temperature: bool = True
    law_strength: float = 1.0
    rules: Rules = USUAL


@dataclass(frozen=True)
class Integrals:
    """What a heat flow makes of the columns, slab by slab.

    ``resistance`` (s, g) m2 K/W of the slab by group; ``production`` (s,) W/m2 heat produced in
    the slab; ``produced_above`` (s,) W/m2; ``resistance_above``, ``radiogenic_above`` (s, g): of
    all slabs above; ``temperature_degc`` (s,): at the middle.
    """

    resistance: Array
    production: Array
    produced_above: Array
    resistance_above: Array
    radiogenic_above: Array
    temperature_degc: Array


def integrate(columns: Columns, surface_degc: Array, heat_flow_w_m2: Array) -> Integrals:
    """Integrate resistance and the radiogenic term down the columns, k at in-situ temperature.

    T(z) = T0 + q R(z) - P(z), R = sum h/k, P = sum (A_above h + A h^2/2)/k.

    Parameters
    ----------
    columns : Columns
    surface_degc : ndarray, shape (n,), degC
        Temperature at depth 0 of each well.
    heat_flow_w_m2 : ndarray, shape (n,), W/m2
        Heat flow at depth 0.

    Returns
    -------
    Integrals
    """
    slabs, parts = columns.slabs, columns.parts
    count, h = len(slabs.well), slabs.thickness_m
    production = h * np.bincount(parts.slab, parts.share * parts.heat_production_w_m3, count)
    above = slabs.above(production)
    surface, flow = surface_degc[slabs.well], heat_flow_w_m2[slabs.well]
    temperature = surface + flow * slabs.middle_m / 2.5
    for _ in range(ITERATIONS):
        total = np.bincount(parts.slab, _resistance(columns, temperature), count)
        top = surface + slabs.above((flow - above - 0.5 * production) * total)
        middle = top + total * (0.5 * (flow - above) - 0.125 * production)
        middle = np.clip(middle, *_RANGE_DEGC)
        change = np.abs(middle - temperature).max(initial=0.0)
        temperature = middle
        if change < TOLERANCE_K or not columns.with_temperature:
            break
    resistance = by_group(columns, _resistance(columns, temperature))
    radiogenic = resistance * (above + 0.5 * production)[:, None]
    return Integrals(
        resistance,
        production,
        above,
        slabs.above(resistance),
        slabs.above(radiogenic),
        temperature,
    )


def warmed(columns: Columns, integrals: Integrals, by_k: float) -> Array:
    """Return the resistance of each slab, (s, g), with all rock warmer by some kelvin."""
    return by_group(columns, _resistance(columns, integrals.temperature_degc + by_k))


def at_depths(
    columns: Columns, integrals: Integrals, well: Whole, depth_m: Array
) -> tuple[Array, Array]:
    """Return resistance and radiogenic term by group from the surface to depths.

    Parameters
    ----------
    columns, integrals
        Columns and what :func:`integrate` gave for them.
    well : ndarray, shape (r,)
        Place of the well.
    depth_m : ndarray, shape (r,), m
        Within the well's column.

    Returns
    -------
    resistance : ndarray, shape (r, g), m2 K/W
    radiogenic : ndarray, shape (r, g), K
    """
    slab = columns.slabs.at(well, depth_m)
    share = (depth_m - columns.slabs.top_m[slab]) / columns.slabs.thickness_m[slab]
    share = np.clip(share, 0.0, 1.0)
    inside = integrals.resistance[slab]
    lost = integrals.produced_above[slab] * share + 0.5 * integrals.production[slab] * share**2
    return (
        integrals.resistance_above[slab] + inside * share[:, None],
        integrals.radiogenic_above[slab] + inside * lost[:, None],
    )


def by_group(columns: Columns, values: Array) -> Array:
    """Sum values of parts, (p,), by slab and group: (s, g)."""
    parts, shape = columns.parts, (len(columns.slabs.well), columns.groups)
    place = parts.slab * columns.groups + parts.group
    total: Array = np.bincount(place, values, shape[0] * shape[1]).astype(float, copy=False)
    return total.reshape(shape)


def _resistance(columns: Columns, temperature_degc: Array) -> Array:
    """Return the part that each part has in the resistance of its slab, (p,) m2 K/W.

    In series that is its own. Where the parts of a layer conduct otherwise, the slab's h/k is
    shared out by d ln k / d ln k_part, which sum to 1: so the level of a lithology moves the
    resistance by its part in it, whatever the mixing.
    """
    parts, slabs = columns.parts, columns.slabs
    conductivity = _conductivity(columns, temperature_degc)
    resistance = parts.share * slabs.thickness_m[parts.slab] / conductivity
    if columns.rules.beds == "harmonic":
        return resistance
    mixed = slabs.layer[parts.slab] >= 0  # the mean section stacks the rock of many wells
    slab, share, k = parts.slab[mixed], parts.share[mixed], conductivity[mixed]
    weight = share if columns.rules.beds == "geometric" else share * k
    total = np.bincount(slab, weight * (np.log(k) if columns.rules.beds == "geometric" else 1.0))
    if columns.rules.beds == "geometric":
        total = np.exp(total)
        resistance[mixed] = share * slabs.thickness_m[slab] / total[slab]
    else:
        resistance[mixed] = weight * slabs.thickness_m[slab] / total[slab] ** 2
    return resistance


def _conductivity(columns: Columns, temperature_degc: Array) -> Array:
    """Return the conductivity of each part: temperature, then pore water, pressure, tilt."""
    parts = columns.parts
    if not columns.with_temperature:
        temperature_degc = np.full_like(temperature_degc, conditions.REFERENCE_DEGC)
    cold = parts.conductivity_w_mk
    matrix = conditions.at_temperature(cold, temperature_degc[parts.slab], parts.law)
    if columns.law_strength != 1.0:
        matrix = cold * (matrix / cold) ** columns.law_strength
    fluid = conditions.water(temperature_degc)[parts.slab]
    mixed = mixing.with_fluid(matrix, fluid, parts.porosity, columns.rules.fluid)
    out = np.where(parts.porosity > 0.0, mixed, matrix)
    if columns.rules.pressure_mpa_per_m and parts.sedimentary is not None:
        pressure = columns.rules.pressure_mpa_per_m * columns.slabs.middle_m[parts.slab]
        out = np.where(parts.sedimentary, conditions.at_pressure(out, pressure), out)
    return out if parts.tilt is None else out * parts.tilt
