"""Where the wells of the invented basin stand, and how they run down."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.synthetic.geography import EAST, NORTH, SOUTH, WEST, Geography

Array = NDArray[np.float64]

_OFFSHORE_SHARE = 1.0 / 12.0
_DEVIATED_SHARE = 0.08
# Invented words only; the well's number follows.
_FIELDS = ("Aldrune", "Bessock", "Corvath", "Drimmel", "Eskedun", "Fennoth", "Gorsewith",
           "Haldrop", "Immerk", "Jorvane", "Kettrask", "Lommavar", "Murnoth", "Nethelon", "Orrapel",
           "Quernod", "Ruskamor", "Tholvey")  # fmt: skip


@dataclass(frozen=True)
class Paths:
    """Well paths: vertical, an arc, then straight at an angle; all true vertical if the angle is 0.

    Parameters
    ----------
    kick_off_m, arc_radius_m, angle_rad, azimuth_rad : (n,) array
        Depth below rig floor where the arc starts, its radius, the final angle from the vertical,
        the direction from north.
    """

    kick_off_m: Array
    arc_radius_m: Array
    angle_rad: Array
    azimuth_rad: Array

    def measured(self, vertical_m: Array, well: NDArray[np.int64]) -> Array:
        """Return depths along the hole for true vertical depths, both below the rig floor."""
        kick, radius, angle = self.kick_off_m[well], self.arc_radius_m[well], self.angle_rad[well]
        below = np.maximum(vertical_m - kick, 0.0)
        arc_height = radius * np.sin(angle)
        in_arc = radius * np.arcsin(np.clip(np.minimum(below, arc_height) / radius, 0.0, 1.0))
        beyond = np.maximum(below - arc_height, 0.0) / np.cos(angle)
        return np.minimum(vertical_m, kick) + in_arc + beyond

    def stations(self, well: int, total_m: float, spacing_m: float = 120.0) -> pd.DataFrame:
        """Return the survey of a well: measured_depth_m, inclination_deg, azimuth_deg.

        The ends of the arc are stations, so the minimum-curvature path through the stations is
        the true path.
        """
        kick, angle = self.kick_off_m[well], self.angle_rad[well]
        end = kick + self.arc_radius_m[well] * angle
        depth = np.unique(np.append(np.arange(0.0, total_m, spacing_m), [kick, end, total_m]))
        depth = depth[depth <= total_m]
        inclination = np.clip((depth - kick) / self.arc_radius_m[well], 0.0, angle)
        azimuth = np.where(depth > kick, self.azimuth_rad[well], 0.0)
        return pd.DataFrame(
            {
                "measured_depth_m": depth,
                "inclination_deg": np.degrees(inclination),
                "azimuth_deg": np.degrees(azimuth),
            }
        )


def place_wells(rng: np.random.Generator, n: int, geography: Geography) -> pd.DataFrame:
    """Place wells in fields and between them, one in twelve at sea.

    Returns
    -------
    pandas.DataFrame
        field, easting_m, northing_m, ground_elevation_m, water_depth_m, datum_elevation_m,
        depth_m (of the bottom, below ground or sea floor), year, operator.
    """
    offshore = np.arange(n) < round(n * _OFFSHORE_SHARE)
    field, east, north = _positions(rng, n, geography, offshore)
    elevation = geography.elevation_m(east, north)
    rig = np.where(offshore, rng.uniform(22.0, 31.0, n), elevation + rng.uniform(3.5, 9.0, n))
    typical = rng.normal(2500.0, 500.0, field.max() + 1)
    wanted = typical[field] + rng.normal(0.0, 500.0, n)
    out = pd.DataFrame(
        {
            "field": np.array(_FIELDS)[field % len(_FIELDS)],
            "easting_m": east,
            "northing_m": north,
            "ground_elevation_m": elevation,
            "water_depth_m": np.where(offshore, -elevation, 0.0),
            "datum_elevation_m": rig,
            "depth_m": np.clip(wanted, 800.0 + rng.uniform(0.0, 250.0, n), 4200.0),
            "year": rng.integers(1955, 2006, n),
            "operator": rng.integers(0, 12, n),
        }
    )
    shuffled = rng.permutation(n)
    return out.iloc[shuffled].reset_index(drop=True)


def draw_paths(rng: np.random.Generator, wells: pd.DataFrame) -> Paths:
    """Draw well paths; some wells deeper than 1.5 km are deviated."""
    n = len(wells)
    deviated = (rng.random(n) < _DEVIATED_SHARE) & (wells.depth_m.to_numpy() > 1500.0)
    to_ground = rig_to_ground_m(wells)
    return Paths(
        kick_off_m=to_ground + wells.depth_m.to_numpy() * rng.uniform(0.2, 0.4, n),
        arc_radius_m=rng.uniform(500.0, 900.0, n),
        angle_rad=np.where(deviated, np.radians(rng.uniform(18.0, 45.0, n)), 0.0),
        azimuth_rad=rng.uniform(0.0, 2.0 * np.pi, n),
    )


def rig_to_ground_m(wells: pd.DataFrame) -> Array:
    """Return how far ground or sea floor lies below the rig floor, (n,) in m."""
    return (wells.datum_elevation_m - wells.ground_elevation_m).to_numpy()


def _positions(
    rng: np.random.Generator, n: int, geography: Geography, offshore: NDArray[np.bool_]
) -> tuple[NDArray[np.int64], Array, Array]:
    """Return field number, easting and northing of wells, in the sea where they should be."""
    fields = max(6, round(n / 18))
    centres = np.stack(
        [rng.uniform(WEST, EAST, 40 * fields), rng.uniform(SOUTH, NORTH, 40 * fields)]
    )
    wet = _is_drillable_sea(geography, *centres)
    dry = geography.inland_m(*centres) > 2_000.0
    wet_fields = max(2, round(fields * _OFFSHORE_SHARE))
    chosen = np.concatenate(
        [centres[:, wet][:, :wet_fields], centres[:, dry][:, : fields - wet_fields]], axis=1
    )
    field = np.empty(n, np.int64)
    east, north = np.empty(n), np.empty(n)
    open_ = np.arange(n)
    while open_.size:
        at_sea = offshore[open_]
        pick = np.where(
            at_sea,
            rng.integers(0, wet_fields, open_.size),
            rng.integers(wet_fields, fields, open_.size),
        )
        lonely = rng.random(open_.size) < 0.35
        spread = np.where(rng.random(open_.size) < 0.7, 2_500.0, 7_000.0)
        x = np.where(
            lonely,
            rng.uniform(WEST, EAST, open_.size),
            chosen[0, pick] + rng.normal(0.0, 1.0, open_.size) * spread,
        )
        y = np.where(
            lonely,
            rng.uniform(SOUTH, NORTH, open_.size),
            chosen[1, pick] + rng.normal(0.0, 1.0, open_.size) * spread,
        )
        inside = (x > WEST) & (x < EAST) & (y > SOUTH) & (y < NORTH)
        fits = np.where(
            at_sea, _is_drillable_sea(geography, x, y), geography.inland_m(x, y) > 500.0
        )
        good = inside & fits
        field[open_[good]], east[open_[good]], north[open_[good]] = pick[good], x[good], y[good]
        open_ = open_[~good]
    return field, east, north


def _is_drillable_sea(geography: Geography, east: Array, north: Array) -> NDArray[np.bool_]:
    depth = geography.water_depth_m(east, north)
    return (depth > 20.0) & (depth < 300.0)
