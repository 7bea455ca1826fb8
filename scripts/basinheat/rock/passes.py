"""Passes over all wells in blocks: from a heat flow to resistances and intervals, in arrays."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from basinheat.rock import regionalflow
from basinheat.rock.columns import Columns, Integrals, at_depths, integrate
from basinheat.rock.intervals import (
    Intervals,
    bed_variance_at,
    gap_above,
    origin_at,
    sum_intervals,
)
from basinheat.rock.model import RockModel

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

FIRST_GUESS_W_M2 = 0.065  # mean of the continents, Pollack et al. (1993), read
SAMPLE = 1000  # wells are enough for the regional heat flow
BLOCK = 2000  # wells at a time: bounds the memory
OWN_SHARE = 0.8  # of an interval: what a well's own layers must fill for it to be its own
SMALLEST_STD_LN = 0.01


class Wanted:
    """The r places where resistances are wanted: arrays (r,).

    Parameters
    ----------
    well : ndarray, shape (r,)
        Place of the well.
    depth_m : ndarray, shape (r,), m
    excess_k : ndarray, shape (r,), K
        Formation temperature above the surface.
    used : ndarray of bool, shape (r,)
        Whether it tells the heat flow.
    """

    def __init__(
        self, well: Whole, depth_m: Array, excess_k: Array, used: NDArray[np.bool_]
    ) -> None:
        self.well, self.depth_m, self.excess_k, self.used = well, depth_m, excess_k, used
        self._order = np.argsort(well, kind="stable")
        self._sorted = well[self._order]

    def of(self, wells: Whole) -> Whole:
        """Return the rows of some wells, given by ascending places."""
        place = np.searchsorted(wells, self._sorted)
        here = place < len(wells)
        here[here] = wells[place[here]] == self._sorted[here]
        return self._order[here]


class Passes:
    """The rock model integrated for blocks of wells, so that memory stays bounded."""

    def __init__(self, model: RockModel, surface_degc: Array, readings: Wanted) -> None:
        self.model, self.surface_degc, self.readings = model, surface_degc, readings

    def run(self, wells: Whole, flow: Array) -> Iterator[Block]:
        """Yield blocks of the wells; ``flow`` (n,) W/m2 of all wells."""
        for i in range(0, len(wells), BLOCK):
            block = wells[i : i + BLOCK]
            columns = self.model.columns(block)
            integrals = integrate(columns, self.surface_degc[block], flow[block])
            rows = self.readings.of(block)
            place = np.searchsorted(block, self.readings.well[rows])
            yield Block(block, columns, integrals, rows, place, self.readings.depth_m[rows])


@dataclass(frozen=True)
class Block:
    """Some wells, their columns, and the rows of readings in them."""

    wells: Whole
    columns: Columns
    integrals: Integrals
    rows: Whole
    place: Whole
    depth_m: Array

    def at_readings(self) -> tuple[Array, Array]:
        """Return resistance and radiogenic term by group at the readings."""
        return at_depths(self.columns, self.integrals, self.place, self.depth_m)


def regional_flow(passes: Passes) -> float:
    """Return the regional heat flow in W/m2: the median of what single temperatures show."""
    readings = passes.readings
    wells = np.unique(readings.well[readings.used])
    if not len(wells):
        return FIRST_GUESS_W_M2
    wells = wells[:: max(1, len(wells) // SAMPLE)]
    regional = FIRST_GUESS_W_M2
    for _ in range(2):
        flow = np.full(len(passes.surface_degc), regional)
        singles = [_single(block, readings) for block in passes.run(wells, flow)]
        median = np.nanmedian(np.concatenate(singles))
        regional = float(median) if np.isfinite(median) and median > 0.0 else FIRST_GUESS_W_M2
    return regional


def first_pass(passes: Passes, flow: Array) -> tuple[Array, Array, Array]:
    """Return each well's heat flow (n,), and 1/k of intervals: own (n, i) and mean (i,)."""
    model, readings = passes.model, passes.readings
    intervals = int(np.rint(model.deepest_m.max() / model.interval_m))
    single = np.full(len(readings.well), np.nan)
    own = np.full((len(flow), intervals), np.nan)
    resistance, thickness = np.zeros(intervals), np.zeros(intervals)
    for block in passes.run(np.arange(len(flow)), flow):
        single[block.rows] = _single(block, readings)
        sums = sum_intervals(model, block.columns, block.integrals)
        shown = sums.own_m >= OWN_SHARE * sums.thickness_m
        own[block.wells[sums.well[shown]], sums.place[shown]] = (
            sums.own_resistance[shown].sum(1) / sums.own_m[shown]
        )
        resistance += np.bincount(sums.place, sums.resistance.sum(1), intervals)
        thickness += np.bincount(sums.place, sums.thickness_m, intervals)
    return regionalflow.of_wells(len(flow), readings.well, single), own, resistance / thickness


def second_pass(
    passes: Passes, flow: Array, covariance: Array, well_std_ln: float
) -> tuple[dict[str, Array], dict[str, Array]]:
    """Return resistances by row, and the structure by well and interval, as arrays by name."""
    model, count = passes.model, len(passes.readings.well)
    groups = model.rocks + 2
    rows: dict[str, Array] = {
        "resistance": np.zeros((count, groups)),
        "radiogenic": np.zeros((count, groups)),
        "variance": np.zeros(count),
        "origin": np.zeros(count),
    }
    points = []
    for block in passes.run(np.arange(len(flow)), flow):
        resistance, radiogenic = block.at_readings()
        rows["resistance"][block.rows], rows["radiogenic"][block.rows] = resistance, radiogenic
        rows["variance"][block.rows] = _variance(model, block, resistance, covariance, well_std_ln)
        rows["origin"][block.rows] = origin_at(
            model, block.columns, block.integrals, block.place, block.depth_m
        )
        sums = sum_intervals(model, block.columns, block.integrals)
        points.append(_structure(model, block.wells, sums, covariance, well_std_ln))
    names = points[0] if points else {}
    return rows, {name: np.concatenate([p[name] for p in points]) for name in names}


def _single(block: Block, readings: Wanted) -> Array:
    """Return the heat flow that each temperature of a block shows on its own, NaN where unused."""
    resistance, radiogenic = block.at_readings()
    total = resistance.sum(1)
    with np.errstate(divide="ignore", invalid="ignore"):
        flow = (readings.excess_k[block.rows] + radiogenic.sum(1)) / total
    return np.where(readings.used[block.rows] & (total > 0.0), flow, np.nan)


def _variance(
    model: RockModel, block: Block, resistance: Array, covariance: Array, well_std_ln: float
) -> Array:
    """Return the independent variance of resistance, by row of the block."""
    gap = gap_above(model, block.columns, len(covariance), block.place, block.depth_m)
    deeper = np.maximum(block.depth_m - model.section.known_m, 0.0)
    below = model.below.std_ln + model.below.growth_ln_per_m * deeper
    return (
        (well_std_ln * resistance[:, : model.rocks]) ** 2 @ np.ones(model.rocks)
        + bed_variance_at(model, block.columns, block.integrals, block.place, block.depth_m)
        + np.einsum("ri,ij,rj->r", gap, covariance, gap)
        + (below * resistance[:, model.rocks + 1]) ** 2
    )


def _structure(
    model: RockModel, wells: Whole, sums: Intervals, covariance: Array, well_std_ln: float
) -> dict[str, Array]:
    """Return ln k of the intervals that the wells' own layers show, and what it depends on.

    Without any layers the assumed rock stands in, so that maps and wells rest on the same.
    """
    assumed = not len(model.beds.well)
    keep = assumed | (sums.own_m >= OWN_SHARE * sums.thickness_m)
    total = sums.resistance[keep].sum(1)
    share = sums.resistance[keep] / total[:, None]
    rocks, place = model.rocks, sums.place[keep]
    gap = sums.gap_m[keep] ** 2 * covariance[place, place]
    variance = (
        (well_std_ln * share[:, :rocks]) ** 2 @ np.ones(rocks)
        + (sums.bed_variance[keep] + gap) / total**2
        + (model.below.std_ln * share[:, rocks + 1]) ** 2
    )
    return {
        "well": wells[sums.well[keep]],
        "place": place,
        # what is assumed is the mean of 1/k: the median of the k that may be there lies higher
        "value": np.log(sums.thickness_m[keep] / total) + 0.5 * variance * assumed,
        "value_std": np.maximum(np.sqrt(variance), SMALLEST_STD_LN),
        "heat_production_uw_m3": sums.heat_production_w_m3[keep] * 1e6,
        "reference_temperature_degc": sums.temperature_degc[keep],
        "temperature_slope_per_k": sums.slope_per_k[keep],
        "loading": share[:, :rocks] * model.lithologies.std_ln,
    }
