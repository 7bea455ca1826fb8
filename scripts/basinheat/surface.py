"""Temperature at the top of the rock: ground onshore, sea floor offshore.

Depth zero of every column is there, so this is the T0 of all gradients and heat flows. A place's
own uncertainty goes into the tables; the part common to the basin is the shared source
``surface_temperature``.
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat import rasters
from basinheat.errors import UserError
from basinheat.settings.wells import (
    ColumnSurface,
    ConstantSurface,
    LinearSurface,
    RasterSurface,
    SurfaceTemperature,
)
from basinheat.tables import Wells

Array = NDArray[np.float64]
NEIGHBOURS = 8
ELEVATION_ASSUMED = "surface_elevation_assumed"


def at_wells(
    wells: pd.DataFrame,
    settings: SurfaceTemperature,
    raster: str | Path | None = None,
    crs: str = "",
) -> pd.DataFrame:
    """Give every well the temperature of its ground or sea floor.

    Parameters
    ----------
    wells : DataFrame
        Table ``Wells``; with the model ``column`` its surface temperature is already there.
    settings : SurfaceTemperature
        Model and uncertainty.
    raster : str or Path, optional
        Temperature raster in degC, for the model ``raster``.
    crs : str
        CRS of easting and northing.

    Returns
    -------
    DataFrame
        The wells with ``surface_temperature_degc`` and ``surface_temperature_std_k`` (own part).

    Raises
    ------
    UserError
        When there are no wells, or wells are left without a temperature.
    """
    if wells.empty:
        raise UserError(
            "no well is left to map: rejected.csv in the folder wells of the results says why each "
            "was refused. Check the files of inputs.wells, their columns and crs."
        )
    out = wells.copy()
    place = _Place(
        out["easting_m"].to_numpy(float),
        out["northing_m"].to_numpy(float),
        out["ground_elevation_m"].to_numpy(float),
        np.nan_to_num(out["water_depth_m"].to_numpy(float)),
    )
    given = out["surface_temperature_degc"].to_numpy(float)
    degc, std = _surface(place, settings, raster, crs, given)
    _require(np.isfinite(degc), out["well"].to_numpy(), settings, raster)
    if isinstance(settings, ColumnSurface):
        stated = out["surface_temperature_std_k"].to_numpy(float)
        std = np.where(np.isfinite(stated), stated, std)
    if isinstance(settings, LinearSurface):
        assumed = ~np.isfinite(place.elevation_m) & (place.water_depth_m <= 0.0)
        out["flags"] = _with_flag(out["flags"], assumed)
    out["surface_temperature_degc"] = degc
    out["surface_temperature_std_k"] = std
    return Wells.conform(out)


def at_cells(
    cells: pd.DataFrame,
    settings: SurfaceTemperature,
    raster: str | Path | None = None,
    crs: str = "",
    wells: pd.DataFrame | None = None,
) -> pd.DataFrame:
    """Give every map cell the temperature of its ground or sea floor.

    Parameters
    ----------
    cells : DataFrame
        Columns easting_m, northing_m, elevation_m, water_depth_m of the table ``Cells``.
    settings, raster, crs
        As for :func:`at_wells`.
    wells : DataFrame, optional
        What :func:`at_wells` returned: with the model ``column`` cells lie between the wells.

    Returns
    -------
    DataFrame
        The cells with both columns; NaN where a raster is blank.
    """
    out = cells.copy()
    place = _Place(
        out["easting_m"].to_numpy(float),
        out["northing_m"].to_numpy(float),
        out["elevation_m"].to_numpy(float),
        np.nan_to_num(out["water_depth_m"].to_numpy(float)),
    )
    given = np.full(len(out), np.nan)
    if isinstance(settings, ColumnSurface):
        if wells is None:
            raise ValueError("the model column needs the wells")
        given = between_wells(
            wells[["easting_m", "northing_m"]].to_numpy(float),
            wells["surface_temperature_degc"].to_numpy(float),
            np.column_stack([place.easting_m, place.northing_m]),
        )
    degc, std = _surface(place, settings, raster, crs, given)
    out["surface_temperature_degc"] = degc
    out["surface_temperature_std_k"] = std
    return out


def sea_floor(
    water_depth_m: Array, shallow_degc: float, deep_degc: float, deep_water_m: float
) -> Array:
    """Return the sea-floor temperature at a water depth.

    ``shallow_degc`` down to two thirds of ``deep_water_m``, ``deep_degc`` below it, a smooth step
    between, so that maps do not tear along one isobath.

    Parameters
    ----------
    water_depth_m : ndarray, shape (n,)
        Water depth.
    shallow_degc, deep_degc : float
        Temperature of shallow and deep sea floor.
    deep_water_m : float
        Water deeper than this is deep.

    Returns
    -------
    ndarray, shape (n,), degC

    References
    ----------
    The two temperatures and the 600 m: practice of the Norwegian regulator (attribute page of its
    public data, read). The step's width is a choice.

    Examples
    --------
    >>> sea_floor(np.array([100.0, 601.0]), 5.0, -0.5, 600.0)
    array([ 5. , -0.5])
    """
    share = np.clip(3.0 * np.asarray(water_depth_m, float) / deep_water_m - 2.0, 0.0, 1.0)
    return shallow_degc + (deep_degc - shallow_degc) * share**2 * (3.0 - 2.0 * share)


def linear(elevation_m: Array, at_sea_level_degc: float, lapse_k_per_km: float) -> Array:
    """Return the ground temperature at an elevation: T = T_sea - lapse E.

    Examples
    --------
    >>> linear(np.array([0.0, 1000.0]), 12.5, 6.0)
    array([12.5,  6.5])
    """
    return at_sea_level_degc - lapse_k_per_km * np.asarray(elevation_m, float) / 1000.0


def between_wells(known_xy: Array, known: Array, xy: Array) -> Array:
    """Interpolate by inverse squared distance among the nearest places that are known."""
    from scipy.spatial import cKDTree

    use = np.isfinite(known)
    distance, index = cKDTree(known_xy[use]).query(xy, k=min(NEIGHBOURS, int(use.sum())))
    shape = (len(xy), -1)
    weight = 1.0 / np.maximum(distance.reshape(shape), 1.0) ** 2
    return (weight * known[use][index.reshape(shape)]).sum(1) / weight.sum(1)


class _Place:
    """Where temperatures are wanted: four arrays of one length, elevation NaN where not known."""

    def __init__(
        self, easting_m: Array, northing_m: Array, elevation_m: Array, water_depth_m: Array
    ) -> None:
        self.easting_m, self.northing_m = easting_m, northing_m
        self.elevation_m, self.water_depth_m = elevation_m, water_depth_m


def _surface(
    place: _Place,
    settings: SurfaceTemperature,
    raster: str | Path | None,
    crs: str,
    given: Array,
) -> tuple[Array, Array]:
    """Return temperature and own standard uncertainty of each place."""
    offshore = place.water_depth_m > 0.0
    total = np.where(offshore, settings.sea_floor_std_k, settings.std_k)
    std = np.sqrt(np.maximum(total**2 - settings.shared_std_k**2, 0.0))
    if isinstance(settings, ColumnSurface):
        return given, std
    if isinstance(settings, RasterSurface):
        if raster is None:
            raise UserError(
                'surface_temperature.model is "raster", but inputs.rasters.surface_temperature '
                "names none. Name one or choose the model linear or constant."
            )
        return rasters.sample(raster, crs, place.easting_m, place.northing_m), std
    if isinstance(settings, ConstantSurface):
        ground = np.full(offshore.shape, settings.temperature_degc)
    else:
        ground, std = _linear_ground(place, settings, offshore, std)
    floor = sea_floor(
        place.water_depth_m,
        settings.sea_floor_degc,
        settings.deep_sea_floor_degc,
        settings.deep_water_m,
    )
    return np.where(offshore, floor, ground), std


def _linear_ground(
    place: _Place, settings: LinearSurface, offshore: NDArray[np.bool_], std: Array
) -> tuple[Array, Array]:
    """Return ground temperatures; an unknown elevation is the median, with the spread as sigma."""
    elevation = place.elevation_m
    known = np.isfinite(elevation) & ~offshore
    middle = float(np.median(elevation[known])) if known.any() else 0.0
    spread = float(np.std(elevation[known])) if known.any() else 0.0
    missing = ~np.isfinite(elevation)
    ground = linear(
        np.where(missing, middle, elevation), settings.at_sea_level_degc, settings.lapse_k_per_km
    )
    extra = np.where(missing & ~offshore, settings.lapse_k_per_km * spread / 1000.0, 0.0)
    return ground, np.hypot(std, extra)


def _require(
    found: NDArray[np.bool_],
    names: NDArray[np.object_],
    settings: SurfaceTemperature,
    raster: str | Path | None,
) -> None:
    """Refuse wells without a surface temperature, naming the first of them."""
    if found.all():
        return
    missing = [str(name) for name in names[~found]]
    shown = ", ".join(missing[:5]) + (", ..." if len(missing) > 5 else "")
    where = (
        f"raster {raster} has no value"
        if isinstance(settings, RasterSurface)
        else "the column surface_temperature is blank"
    )
    raise UserError(
        f"surface_temperature: {where} at {len(missing)} of {len(found)} wells ({shown}). "
        "Fill it or choose the model linear or constant."
    )


def _with_flag(flags: pd.Series, mask: NDArray[np.bool_]) -> pd.Series:
    """Add a code to the sorted ;-joined flags where the mask holds."""
    if not mask.any():
        return flags
    joined = [
        ";".join(sorted({*filter(None, text.split(";")), ELEVATION_ASSUMED})) if here else text
        for text, here in zip(flags.fillna("").astype(str), mask, strict=True)
    ]
    return pd.Series(joined, index=flags.index, dtype=object)
