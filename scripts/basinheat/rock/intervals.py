"""Sums over depth intervals of the maps, and what is uncertain about a well's own rock."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from basinheat.rock.columns import Columns, Integrals, warmed
from basinheat.rock.model import ORIGINS, RockModel

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

WARMER_K = 5.0


@dataclass(frozen=True)
class Intervals:
    """Depth intervals of wells, in order; arrays (i,) or (i, g) by group.

    ``well``, ``place`` (interval counted from the surface), ``thickness_m``, ``own_m`` and
    ``gap_m`` (in the well's own layers, in the mean section), ``resistance`` and
    ``own_resistance`` (i, g) m2 K/W, ``bed_variance`` (m2 K/W)^2 from measured layers,
    ``temperature_degc`` and ``heat_production_w_m3`` (means), ``slope_per_k`` d ln k / dT.
    """

    well: Whole
    place: Whole
    thickness_m: Array
    own_m: Array
    gap_m: Array
    resistance: Array
    own_resistance: Array
    bed_variance: Array
    temperature_degc: Array
    heat_production_w_m3: Array
    slope_per_k: Array


def sum_intervals(model: RockModel, columns: Columns, integrals: Integrals) -> Intervals:
    """Sum slabs over depth intervals.

    Parameters
    ----------
    model : RockModel
    columns, integrals
        Of some wells, by :meth:`RockModel.columns` and :func:`basinheat.rock.columns.integrate`.
    """
    slabs, h = columns.slabs, columns.slabs.thickness_m
    place = np.floor(slabs.middle_m / model.interval_m).astype(np.int64)
    first = _first(slabs.well, place)
    number = np.cumsum(first) - 1
    start = np.flatnonzero(first)

    def total(values: Array) -> Array:
        return np.add.reduceat(values, start, axis=0)

    own = slabs.layer >= 0
    thickness, resistance = total(h), total(integrals.resistance)
    warm = total(warmed(columns, integrals, WARMER_K).sum(1))
    cool = total(warmed(columns, integrals, -WARMER_K).sum(1))
    slope = np.log(cool / warm) / (2.0 * WARMER_K)
    return Intervals(
        well=slabs.well[start],
        place=place[start],
        thickness_m=thickness,
        own_m=total(h * own),
        gap_m=total(h * (~own & model.in_section(slabs))),
        resistance=resistance,
        own_resistance=total(integrals.resistance * own[:, None]),
        bed_variance=_bed_variance(model, columns, integrals, number, len(start)),
        temperature_degc=total(h * integrals.temperature_degc) / thickness,
        heat_production_w_m3=total(integrals.production) / thickness,
        slope_per_k=slope,
    )


def bed_variance_at(
    model: RockModel, columns: Columns, integrals: Integrals, well: Whole, depth_m: Array
) -> Array:
    """Return the variance of resistance from measured layers above depths, (r,) (m2 K/W)^2.

    A layer's measured conductivity errs as a whole, layers err independently: within a layer
    r deep in resistance the variance is std_ln^2 r^2.
    """
    slabs = columns.slabs
    std, measured = _measured(model, columns, integrals)
    first = np.maximum.accumulate(np.where(_first(slabs.well, slabs.layer), np.arange(len(std)), 0))
    above = slabs.above(measured)
    into = above - above[first]
    total = slabs.above(std**2 * (measured**2 + 2.0 * into * measured))
    slab = slabs.at(well, depth_m)
    part = measured[slab] * (depth_m - slabs.top_m[slab]) / slabs.thickness_m[slab]
    return total[slab] + std[slab] ** 2 * (part**2 + 2.0 * into[slab] * part)


def gap_above(
    model: RockModel, columns: Columns, intervals: int, well: Whole, depth_m: Array
) -> Array:
    """Return the thickness above depths that the mean section fills, by interval: (r, i) m.

    Within the interval that holds the depth the gap is taken as evenly spread.
    """
    slabs = columns.slabs
    place = np.floor(slabs.middle_m / model.interval_m).astype(np.int64)
    gap = slabs.thickness_m * ((slabs.layer < 0) & model.in_section(slabs))
    wells = len(slabs.start) - 1
    flat: Array = np.bincount(slabs.well * intervals + place, gap, wells * intervals).astype(float)
    passed = depth_m[:, None] / model.interval_m - np.arange(intervals)
    return flat.reshape(wells, intervals)[well] * np.clip(passed, 0.0, 1.0)


def origin_at(
    model: RockModel, columns: Columns, integrals: Integrals, well: Whole, depth_m: Array
) -> Whole:
    """Return what most of the resistance above depths rests on: place in ``ORIGINS``."""
    slabs = columns.slabs
    each = integrals.resistance.sum(1)
    kind = model.kind(slabs)[:, None] == np.arange(len(ORIGINS))
    by_kind = each[:, None] * kind
    slab = slabs.at(well, depth_m)
    share = (depth_m - slabs.top_m[slab]) / slabs.thickness_m[slab]
    return (slabs.above(by_kind)[slab] + by_kind[slab] * share[:, None]).argmax(1)


def _measured(model: RockModel, columns: Columns, integrals: Integrals) -> tuple[Array, Array]:
    """Return relative uncertainty and resistance of the measured part of each slab."""
    layer = columns.slabs.layer
    if not len(model.beds.std_ln):
        return np.zeros(len(layer)), np.zeros(len(layer))
    std = np.where(layer >= 0, model.beds.std_ln[layer], 0.0)
    return std, integrals.resistance[:, model.rocks]


def _bed_variance(
    model: RockModel, columns: Columns, integrals: Integrals, number: Whole, count: int
) -> Array:
    """Return the variance of each interval's resistance from measured layers."""
    std, measured = _measured(model, columns, integrals)
    start = np.flatnonzero(_first(number, columns.slabs.layer))
    within = np.add.reduceat(std * measured, start)
    return np.bincount(number[start], within**2, count).astype(float, copy=False)


def _first(*keys: Whole) -> NDArray[np.bool_]:
    """Mark where a run of equal keys begins."""
    out = np.zeros(len(keys[0]), bool)
    out[:1] = True
    for key in keys:
        out[1:] |= key[1:] != key[:-1]
    return out
