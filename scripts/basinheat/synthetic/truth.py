"""What is true anywhere in the invented basin."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from basinheat.synthetic.conduction import conduct_down
from basinheat.synthetic.fields import Field
from basinheat.synthetic.geography import Geography
from basinheat.synthetic.geology import Geology

Array = NDArray[np.float64]
_BLOCK = 4096


@dataclass(frozen=True)
class Truth:
    """The true basin; ask it at any easting and northing (EPSG:32631, m).

    Parameters
    ----------
    geography : Geography
        Land, sea, ground temperature.
    geology : Geology
        Layers and rocks.
    mean_heat_flow_mw_m2 : float, mW/m2
        Mean surface heat flow.
    regional, micro : Field
        Its smooth departures, and those that change from field to field (mW/m2).
    regional_range_m : float, m
        Practical range of the smooth part.
    """

    geography: Geography
    geology: Geology
    mean_heat_flow_mw_m2: float
    regional: Field
    micro: Field
    regional_range_m: float

    @classmethod
    def draw(cls, rng: np.random.Generator) -> Truth:
        """Draw a basin."""
        geography, geology = Geography.draw(rng), Geology.draw(rng)
        practical_range = rng.uniform(70_000.0, 110_000.0)
        return cls(
            geography=geography,
            geology=geology,
            mean_heat_flow_mw_m2=rng.normal(62.0, 6.0),
            regional=Field.draw(rng, rng.uniform(7.0, 10.0), practical_range),
            micro=Field.draw(rng, rng.uniform(0.8, 1.6), 5_000.0),
            regional_range_m=practical_range,
        )

    def surface_temperature_degc(self, easting_m: Array, northing_m: Array) -> Array:
        """Return the temperature at ground or sea floor, (n,) in degC."""
        return self.geography.surface_temperature_degc(easting_m, northing_m)

    def heat_flow_mw_m2(self, easting_m: Array, northing_m: Array) -> Array:
        """Return the surface heat flow, (n,) in mW/m2; never below 20."""
        flow = self.regional.at(easting_m, northing_m) + self.micro.at(easting_m, northing_m)
        return np.maximum(self.mean_heat_flow_mw_m2 + flow, 20.0)

    def temperature_degc(
        self, easting_m: Array, northing_m: Array, depth_m: Array | float
    ) -> Array:
        """Return the temperature at depths.

        Parameters
        ----------
        easting_m, northing_m : (n,) array, m
            Places.
        depth_m : float, (m,) or (n, m) array, m
            Depths below ground or sea floor: the same everywhere, or a row per place.

        Returns
        -------
        (n, m) array, degC
            Temperatures.
        """
        east, north = (
            np.atleast_1d(easting_m).astype(float),
            np.atleast_1d(northing_m).astype(float),
        )
        depth = np.atleast_1d(np.asarray(depth_m, float))
        depth = np.broadcast_to(depth, (east.size, depth.shape[-1]))
        out = np.empty(depth.shape)
        for start in range(0, east.size, _BLOCK):
            part = slice(start, start + _BLOCK)
            out[part] = self._columns(east[part], north[part], depth[part])
        return out

    def gradient_k_km(self, easting_m: Array, northing_m: Array, reference_m: float) -> Array:
        """Return the mean gradient from the surface to a depth, (n,) in K/km."""
        deep = self.temperature_degc(easting_m, northing_m, reference_m)[:, 0]
        top = self.surface_temperature_degc(easting_m, northing_m)
        return (deep - top) / (reference_m / 1000.0)

    def isotherm_depth_m(
        self,
        easting_m: Array,
        northing_m: Array,
        isotherm_degc: float,
        deepest_m: float = 12_000.0,
    ) -> Array:
        """Return the depth of an isotherm, (n,) in m; NaN where it lies deeper than the limit.

        Columns are sampled every 100 m, then every 5 m of the interval that holds the isotherm.
        """
        coarse = np.append(np.arange(0.0, deepest_m, 100.0), deepest_m)
        temperature = self.temperature_degc(easting_m, northing_m, coarse)
        reached = (temperature >= isotherm_degc).any(axis=1)
        first = np.argmax(temperature >= isotherm_degc, axis=1)
        top, base = coarse[np.maximum(first - 1, 0)], coarse[first]
        fine = top[:, None] + np.linspace(0.0, 1.0, 21) * (base - top)[:, None]
        temperature = self.temperature_degc(easting_m, northing_m, fine)
        depth = [np.interp(isotherm_degc, t, z) for t, z in zip(temperature, fine, strict=True)]
        return np.where(reached, depth, np.nan)

    def _columns(self, east: Array, north: Array, depth: Array) -> Array:
        """Return temperatures at depths of columns, contacts of the layers being nodes too."""
        bases = self.geology.bases_m(east, north)
        factors = self.geology.factors(east, north)
        nodes = np.concatenate([bases, depth], axis=1)
        order = np.argsort(nodes, axis=1, kind="stable")
        nodes = np.take_along_axis(nodes, order, axis=1)
        tops = np.concatenate([np.zeros((len(nodes), 1)), nodes[:, :-1]], axis=1)
        middle = (tops + nodes) / 2
        layer = (middle[:, :, None] >= bases[:, None, :]).sum(axis=2)
        rock = self.geology.rock_of_layer[layer]
        rocks = self.geology.rocks

        def conductivity(j: int, z: Array, t: Array) -> Array:
            factor = factors[np.arange(len(rock)), rock[:, j]]
            return rocks.conductivity(rock[:, j], z, t, factor)

        # Nodes below the deepest depth asked for are contacts nobody asks about.
        last = depth.max(axis=1, keepdims=True)
        temperature = conduct_down(
            self.surface_temperature_degc(east, north),
            self.heat_flow_mw_m2(east, north) / 1000.0,
            np.minimum(nodes, last),
            conductivity,
            rocks.production_w_m3[rock],
        )
        back = np.empty_like(temperature)
        np.put_along_axis(back, order, temperature, axis=1)
        return back[:, bases.shape[1] :]
