"""Land, sea and the temperature at the ground of the invented basin."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from basinheat.synthetic.fields import Field

Array = NDArray[np.float64]

# In EPSG:32631 this is open ocean far from any land, so nobody takes the basin for a real one.
WEST, SOUTH, EAST, NORTH = 420_000.0, 7_500_000.0, 580_000.0, 7_620_000.0
CRS = "EPSG:32631"
# What the owner of the data would state in the config; the truth departs from it.
STATED_AT_SEA_LEVEL_DEGC, STATED_LAPSE_K_PER_KM = 12.5, 6.0


@dataclass(frozen=True)
class Geography:
    """Coast, relief and ground temperature.

    Parameters
    ----------
    coast, relief, weather : Field
        Wiggle of the coast (m), relief (standard units), local temperature (K).
    offset_k : float, K
        Departure of the whole basin from the stated surface temperature.
    """

    coast: Field
    relief: Field
    weather: Field
    offset_k: float

    @classmethod
    def draw(cls, rng: np.random.Generator) -> Geography:
        """Draw a geography."""
        return cls(
            coast=Field.draw(rng, 5_000.0, 60_000.0),
            relief=Field.draw(rng, 1.0, 80_000.0),
            weather=Field.draw(rng, rng.uniform(0.5, 1.0), 35_000.0),
            offset_k=rng.normal(0.0, 0.7),
        )

    def inland_m(self, easting_m: Array, northing_m: Array) -> Array:
        """Return the distance east of the coast, in m; negative at sea."""
        east = np.asarray(easting_m, float)
        north = np.asarray(northing_m, float)
        shore = WEST + 38_000.0 + self.coast.at(np.full(east.size, WEST), north)
        bay = 6_000.0 * np.sin((north - SOUTH) / 16_000.0)
        return east - shore - bay

    def water_depth_m(self, easting_m: Array, northing_m: Array) -> Array:
        """Return the water depth in m, 0 on land."""
        offshore = np.maximum(-self.inland_m(easting_m, northing_m), 0.0)
        return 300.0 * np.tanh(offshore / 35_000.0)

    def elevation_m(self, easting_m: Array, northing_m: Array) -> Array:
        """Return the ground above sea level in m; the sea floor is negative."""
        inland = self.inland_m(easting_m, northing_m)
        rise = 1.0 - np.exp(-np.maximum(inland, 0.0) / 60_000.0)
        hills = 0.7 + 0.3 * np.tanh(self.relief.at(easting_m, northing_m))
        land = 3.0 + 640.0 * rise * hills
        return np.where(inland >= 0.0, land, -self.water_depth_m(easting_m, northing_m))

    def surface_temperature_degc(self, easting_m: Array, northing_m: Array) -> Array:
        """Return the temperature at the ground or the sea floor in degC."""
        elevation = self.elevation_m(easting_m, northing_m)
        land = STATED_AT_SEA_LEVEL_DEGC - STATED_LAPSE_K_PER_KM * elevation / 1000.0
        sea = 4.3 + 2.5 * np.exp(elevation / 80.0)
        local = self.weather.at(easting_m, northing_m)
        return np.where(elevation >= 0.0, land, sea) + self.offset_k + local
