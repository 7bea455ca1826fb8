"""Readings of one well at one depth, as padded arrays."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]


@dataclass(frozen=True)
class ReadingSets:
    """Sets of readings of one kind: one well, one depth, any number of times.

    Readings stand in the order of their time, untimed ones last and by temperature; places
    beyond the last reading hold NaN (row -1).

    Parameters
    ----------
    row : (sets, n) array of int
        Row of each reading in the table, -1 for none.
    well : (sets,) array of int
        Number of the well.
    depth_m : (sets,) array, m
        Depth of the set: that of its latest reading.
    reading_depth_m, temperature_degc, temperature_std_k, since_circulation_h : (sets, n) array
        The readings, m, degC, K, h.
    depth_std_m : (sets,) array, m
        Standard uncertainty of depth.
    circulation_h, drilling_h, hole_radius_m : (sets,) array, h, h, m
        Longest noted circulation and drilling (NaN for none) and widest hole.
    surface_temperature_degc, surface_std_k : (sets,) array, degC, K
        Surface temperature and the well's own part of its standard uncertainty.
    mud_temperature_degc : (sets,) array, degC
        Mean of the noted mud temperatures at the bottom of the hole, NaN for none.
    std_stated : (sets,) array of bool
        Whether a reading of the set states its standard uncertainty.
    learn : (sets,) array of bool
        Sets that may teach the basin something: those of wells not held out.
    """

    row: Ints
    well: Ints
    depth_m: Floats
    reading_depth_m: Floats
    temperature_degc: Floats
    temperature_std_k: Floats
    since_circulation_h: Floats
    depth_std_m: Floats
    circulation_h: Floats
    drilling_h: Floats
    hole_radius_m: Floats
    surface_temperature_degc: Floats
    surface_std_k: Floats
    mud_temperature_degc: Floats
    std_stated: NDArray[np.bool_]
    learn: NDArray[np.bool_]

    def __len__(self) -> int:
        """Return the number of sets."""
        return int(self.depth_m.size)

    @property
    def present(self) -> NDArray[np.bool_]:
        """Return where a reading stands, (sets, n)."""
        return self.row >= 0

    @property
    def count(self) -> Ints:
        """Return the number of readings, (sets,)."""
        return self.present.sum(1)

    @property
    def timed(self) -> Ints:
        """Return the number of readings with a time since circulation, (sets,)."""
        return np.isfinite(self.since_circulation_h).sum(1)

    @property
    def warmest_degc(self) -> Floats:
        """Return the warmest reading, (sets,) in degC."""
        return np.max(self.temperature_degc, axis=1, where=self.present, initial=-np.inf)

    @property
    def warmest_std_k(self) -> Floats:
        """Return the standard uncertainty of the warmest reading, (sets,) in K."""
        filled = np.where(self.present, self.temperature_degc, -np.inf)
        at = filled.argmax(1) if filled.size else np.zeros(len(self), np.int64)
        return np.take_along_axis(self.temperature_std_k, at[:, None], 1)[:, 0]

    @property
    def mean_degc(self) -> Floats:
        """Return the mean of the readings, (sets,) in degC."""
        return np.where(self.present, self.temperature_degc, 0.0).sum(1) / self.count

    @property
    def latest(self) -> Ints:
        """Return the place of the latest timed reading, (sets,); 0 where none is timed."""
        return np.maximum(self.timed - 1, 0)

    def at(self, values: Floats, place: Ints) -> Floats:
        """Return one reading's value of every set, (sets,)."""
        return np.take_along_axis(values, place[:, None], 1)[:, 0]

    def at_one_depth(self, gradient_k_m: Floats) -> ReadingSets:
        """Carry every reading to the depth of its set with the region's gradient, (sets,) K/m."""
        shift = gradient_k_m[:, None] * (self.depth_m[:, None] - self.reading_depth_m)
        return replace(self, temperature_degc=self.temperature_degc + shift)

    def depth_error_k(self, gradient_k_m: Floats) -> Floats:
        """Return what an error of depth does to the temperature, (sets,) in K."""
        return np.asarray(np.abs(gradient_k_m) * self.depth_std_m)

    def take(self, index: NDArray[np.int64] | NDArray[np.bool_]) -> ReadingSets:
        """Return some of the sets."""
        return ReadingSets(**{name: value[index] for name, value in vars(self).items()})


def group_by_depth(well: Ints, depth_m: Floats, gap_m: float, longest_m: float) -> Ints:
    """Give readings at one depth of one well the number of their set.

    Neighbours closer than the gap are linked to chains; a chain longer than allowed (a log with
    a reading every few metres) is cut into equal pieces.

    Parameters
    ----------
    well : (n,) array of int
        Well of each reading, ascending.
    depth_m : (n,) array, m
        Depth, ascending within a well.
    gap_m, longest_m : float, m
        Largest gap inside a chain (exclusive), longest piece.

    Returns
    -------
    (n,) array of int
        Number of the set, ascending.

    Examples
    --------
    >>> import numpy as np
    >>> group_by_depth(np.array([0, 0, 0, 1]), np.array([1000.0, 1009.0, 1500.0, 1500.0]), 15, 45)
    array([0, 0, 1, 2])
    """
    if well.size == 0:
        return np.zeros(0, np.int64)
    starts = _starts(well, depth_m, gap_m)
    chain = np.cumsum(starts) - 1
    top = depth_m[starts][chain]
    span = np.maximum.reduceat(depth_m, np.flatnonzero(starts))[chain] - top
    pieces = np.ceil(span / longest_m).clip(1)
    width = np.maximum(span, 1e-9) / pieces
    piece = np.minimum(np.floor((depth_m - top) / width), pieces - 1)
    new = starts.copy()
    new[1:] |= piece[1:] != piece[:-1]
    return np.cumsum(new) - 1


def _starts(well: Ints, depth_m: Floats, gap_m: float) -> NDArray[np.bool_]:
    starts = np.ones(well.size, bool)
    starts[1:] = (well[1:] != well[:-1]) | (np.diff(depth_m) >= gap_m)
    return starts


def pad(group: Ints, n_groups: int) -> Ints:
    """Return the place of every group's rows, (groups, n), -1 beyond the last.

    Parameters
    ----------
    group : (n,) array of int
        Group of each row, ascending, without holes.
    n_groups : int
        Number of groups.

    Examples
    --------
    >>> import numpy as np
    >>> pad(np.array([0, 0, 1]), 2)
    array([[ 0,  1],
           [ 2, -1]])
    """
    size = np.bincount(group, minlength=n_groups)
    first = np.cumsum(size) - size
    place = np.arange(group.size) - first[group]
    out = np.full((n_groups, max(1, size.max(initial=0))), -1, np.int64)
    out[group, place] = np.arange(group.size)
    return out


def spread(values: Floats, place: Ints) -> Floats:
    """Return values at their places, (groups, n), NaN beyond the last."""
    if values.size == 0:
        return np.full(place.shape, np.nan)
    return np.where(place >= 0, values[place], np.nan)


def mean_noted(values: Floats) -> Floats:
    """Return the mean of each row's values, NaN where there is none."""
    noted = np.isfinite(values)
    count = noted.sum(1)
    total = np.where(noted, values, 0.0).sum(1)
    return np.where(count > 0, total / np.maximum(count, 1), np.nan)


def largest(values: Floats) -> Floats:
    """Return the largest value of each row, NaN where there is none."""
    best = np.max(values, axis=1, where=np.isfinite(values), initial=-np.inf)
    return np.where(np.isfinite(best), best, np.nan)
