"""Coordinates of wells to the map: any CRS, with the best datum shift at hand."""

from __future__ import annotations

import logging
import warnings
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from basinheat.errors import UserError

Array = NDArray[np.float64]
WGS84 = "EPSG:4326"

_log = logging.getLogger(__name__)


@dataclass
class Projected:
    """Coordinates in another CRS.

    Parameters
    ----------
    x, y : ndarray, (n,)
        Easting or longitude, northing or latitude; NaN where there is none.
    accuracy_m : ndarray, (n,)
        Accuracy of the datum shift used, m; NaN where it was left out (ballpark).
    operations : dict
        Description of each operation used: number of points.
    """

    x: Array
    y: Array
    accuracy_m: Array
    operations: dict[str, int] = field(default_factory=dict)

    @property
    def ballpark(self) -> NDArray[np.bool_]:
        """Tell where no datum shift was at hand."""
        return np.isfinite(self.x) & ~np.isfinite(self.accuracy_m)


def crs_fault(crs: str, for_maps: bool = False) -> str:
    """Return what is wrong with a CRS, "" for nothing; maps need one in which cells are squares."""
    from pyproj import CRS
    from pyproj.exceptions import CRSError

    try:
        known = CRS.from_user_input(crs)
    except (CRSError, UnicodeError):
        return f'"{crs}" is no coordinate reference system; write it like EPSG:32631'
    if not for_maps:
        return ""
    way_out = "maps need a projected one in metres, such as the UTM zone of the wells (EPSG:32631)"
    if not known.is_projected:
        return f"{crs} is {known.name}, which is not projected; {way_out}"
    units = sorted({axis.unit_name for axis in known.axis_info[:2]})
    return "" if units == ["metre"] else f"{crs} counts in {' and '.join(units)}; {way_out}"


def project(x: Array, y: Array, source: str, target: str) -> Projected:
    """Transform coordinates; x is always easting or longitude.

    Of the operations that the installed database knows for the two systems, each point takes the
    most accurate one whose area of use holds it, of equals that of the smallest area. Where only a
    ballpark is left (a grid file that is not installed; grids are never fetched), the way over
    WGS 84 by a published Helmert shift is taken, and the accuracies of both steps are added in
    quadrature.

    Parameters
    ----------
    x, y : ndarray, (n,)
        Coordinates in ``source``.
    source, target : str
        CRS, as ``EPSG:4230``.

    Returns
    -------
    Projected
    """
    direct = _direct(x, y, source, target)
    short = direct.ballpark
    if short.any() and WGS84 not in (source, target):
        first = _direct(x[short], y[short], source, WGS84)
        second = _direct(first.x, first.y, WGS84, target)
        accuracy = np.hypot(first.accuracy_m, second.accuracy_m)
        better = np.isfinite(accuracy)
        place = np.flatnonzero(short)[better]
        for to, value in (("x", second.x), ("y", second.y), ("accuracy_m", accuracy)):
            getattr(direct, to)[place] = value[better]
        direct.operations = {
            name: count for name, count in direct.operations.items() if "Ballpark" not in name
        }
        direct.operations |= first.operations | second.operations
    return direct


def _direct(x: Array, y: Array, source: str, target: str) -> Projected:
    """Transform with what the database has between the two systems."""
    shape = np.shape(x)
    out = Projected(np.full(shape, np.nan), np.full(shape, np.nan), np.full(shape, np.nan))
    longitude, latitude = _geographic(x, y, source)
    open_ = np.isfinite(longitude) & np.isfinite(latitude)
    for transformer in _operations(source, target):
        use = open_ & _within(transformer.area_of_use, longitude, latitude)
        if not use.any():
            continue
        there_x, there_y = transformer.transform(x[use], y[use])
        good = np.isfinite(there_x) & np.isfinite(there_y)
        place = np.flatnonzero(use)[good]
        out.x[place], out.y[place] = there_x[good], there_y[good]
        out.accuracy_m[place] = transformer.accuracy if transformer.accuracy >= 0.0 else np.nan
        open_[place] = False
        if len(place):
            name = f"{_words(transformer.description)} ({_accuracy(transformer.accuracy)})"
            out.operations[name] = out.operations.get(name, 0) + len(place)
    return out


def _operations(source: str, target: str) -> list:
    """Return the operations at hand, the most accurate first, ballparks last."""
    import pyproj
    from pyproj.exceptions import CRSError
    from pyproj.transformer import TransformerGroup

    pyproj.network.set_network_enabled(False)
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore", UserWarning)  # the grid it misses; we say what is used
            group = TransformerGroup(source, target, always_xy=True)
    except CRSError as error:
        raise UserError(f"crs {source} or {target} is no coordinate system: {error}") from error
    known = [one for one in group.transformers if one.accuracy >= 0.0]
    ballparks = [one for one in group.transformers if one.accuracy < 0.0]
    return sorted(known, key=lambda one: (one.accuracy, _size(one.area_of_use))) + ballparks


def _size(area) -> float:
    """Return the share of the globe that an area of use covers; the smaller fits better."""
    if area is None:
        return 2.0
    south, north = np.sin(np.radians([area.south, area.north]))
    return float((area.east - area.west) % 360.0 * (north - south) / 720.0) or 1.0


def _geographic(x: Array, y: Array, source: str) -> tuple[Array, Array]:
    """Return longitude and latitude on the source's own datum; NaN where there is no such place."""
    from pyproj import CRS, Transformer

    crs = CRS.from_user_input(source)
    if crs.is_geographic:
        longitude, latitude = np.array(x, float), np.array(y, float)
    else:
        own = Transformer.from_crs(crs, crs.geodetic_crs, always_xy=True)
        longitude, latitude = (np.asarray(v) for v in own.transform(x, y))
    bad = ~((np.abs(latitude) <= 90.0) & (np.abs(longitude) <= 360.0))
    return np.where(bad, np.nan, longitude), np.where(bad, np.nan, latitude)


def _within(area, longitude: Array, latitude: Array) -> NDArray[np.bool_]:
    """Tell which points lie in an area of use (which may cross the date line)."""
    if area is None:
        return np.ones(longitude.shape, bool)
    east = (longitude - area.west) % 360.0 <= (area.east - area.west) % 360.0
    if area.east - area.west >= 360.0:
        east = np.ones(longitude.shape, bool)
    return east & (latitude >= area.south) & (latitude <= area.north)


def _words(description: str) -> str:
    """Return an operation's description without the changes of axis order."""
    return " + ".join(p for p in description.split(" + ") if not p.startswith("axis order"))


def _accuracy(metres: float) -> str:
    return f"accuracy {metres:g} m" if metres >= 0.0 else "accuracy not known"
