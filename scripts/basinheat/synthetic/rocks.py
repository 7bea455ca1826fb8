"""The rocks of the invented basin: ordinary values, then this basin's own."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

# Matrix conductivity at 25 degC in W/(m K), surface porosity, its decay per km, heat production
# in uW/m3. Conductivity: mid values of the compilation in Beardsmore & Cull (2001). Porosity:
# Sclater & Christie (1980) for shale and sandstone, the rest common practice. Heat production:
# common practice. The truth draws around them, so they need only be plausible.
ORDINARY = {
    "claystone": (2.2, 0.62, 0.51, 1.7),
    "sandstone": (4.5, 0.49, 0.27, 0.9),
    "shale": (2.0, 0.63, 0.51, 1.7),
    "limestone": (3.0, 0.45, 0.50, 0.6),
    "halite": (5.7, 0.00, 0.00, 0.05),
    "siltstone": (2.8, 0.56, 0.39, 1.4),
    "granite": (3.1, 0.01, 0.00, 2.6),
}
# Fall of matrix conductivity above 25 degC, k = k25 / (1 + c (T - 25)): Vosteen & Schellschmidt
# (2003) say that 1/k is linear in T, 1/k = (0.99 + T (a - b/k0)) / k0. Published laws differ by a
# quarter of the fall; the basin's own is somewhere among them.
_SEDIMENT, _CRYSTALLINE = (0.0034, 0.0039), (0.0030, 0.0042)
_FALL_STD_LN = 0.25
_FALL_BY_ROCK = (0.9, 1.1)
# Halite: 6.2 / (1 + 0.00485 T), Clauser & Huenges (1995), rewritten about 25 degC.
_FALL_HALITE = 0.00485 / (1.0 + 25.0 * 0.00485)


@dataclass(frozen=True)
class Rocks:
    """True properties of each lithology, shared over the basin.

    Parameters
    ----------
    names : tuple of str
        Lithologies, in the order of the arrays.
    matrix_w_mk : (l,) array, W/(m K)
        Conductivity of the matrix at 25 degC.
    fall_per_k : (l,) array, 1/K
        c of the law k = k25 / (1 + c (T - 25)).
    porosity : (l,) array
        At the surface.
    decay_per_m : (l,) array, 1/m
        Decay of porosity with depth.
    production_w_m3 : (l,) array, W/m3
        Heat production.
    """

    names: tuple[str, ...]
    matrix_w_mk: Array
    fall_per_k: Array
    porosity: Array
    decay_per_m: Array
    production_w_m3: Array

    @classmethod
    def draw(cls, rng: np.random.Generator, std_ln: float = 0.12) -> Rocks:
        """Draw a basin's rocks around the ordinary ones."""
        matrix, porosity, decay, heat = np.array(list(ORDINARY.values())).T
        n = len(ORDINARY)
        matrix = matrix * np.exp(rng.normal(0.0, std_ln, n))
        law = [_CRYSTALLINE if name == "granite" else _SEDIMENT for name in ORDINARY]
        fall = _fall_per_k(matrix, *np.array(law).T)
        fall[list(ORDINARY).index("halite")] = _FALL_HALITE
        fall *= np.exp(rng.normal(0.0, _FALL_STD_LN)) * rng.uniform(*_FALL_BY_ROCK, n)
        return cls(
            names=tuple(ORDINARY),
            matrix_w_mk=matrix,
            fall_per_k=fall,
            porosity=porosity * np.exp(rng.normal(0.0, 0.04, n)),
            decay_per_m=decay * np.exp(rng.normal(0.0, 0.06, n)) / 1000.0,
            production_w_m3=heat * (1.0 + rng.uniform(-0.15, 0.15, n)) * 1e-6,
        )

    def porosity_at(self, rock: Whole, depth_m: Array) -> Array:
        """Return the porosity of rocks at depths (Athy 1930)."""
        return self.porosity[rock] * np.exp(-self.decay_per_m[rock] * depth_m)

    def conductivity(
        self, rock: Whole, depth_m: Array, temperature_degc: Array, factor: Array
    ) -> Array:
        """Return the conductivity of wet rock: geometric mean of matrix and water.

        Parameters
        ----------
        rock : (n,) array
            Index of the lithology.
        depth_m : (n,) array, m
            Depth below ground or sea floor.
        temperature_degc : (n,) array, degC
            Temperature.
        factor : (n,) array
            Local factor on the matrix conductivity.

        Returns
        -------
        (n,) array, W/(m K)
            Conductivity.
        """
        warmer = temperature_degc - 25.0
        matrix = self.matrix_w_mk[rock] * factor / (1.0 + self.fall_per_k[rock] * warmer)
        porosity = self.porosity_at(rock, depth_m)
        return matrix ** (1.0 - porosity) * water_conductivity(temperature_degc) ** porosity


def _fall_per_k(matrix_w_mk: Array, a: Array, b: Array) -> Array:
    """Return c of 1/k = (1 + c (T - 25)) / k25 from the two coefficients of the law."""
    level = matrix_w_mk
    for _ in range(60):  # k0 from k25 = k0 / (0.99 + 25 (a - b / k0))
        level = matrix_w_mk * (0.99 + 25.0 * (a - b / level))
    per_k = a - b / level
    return per_k / (0.99 + 25.0 * per_k)


def water_conductivity(temperature_degc: Array) -> Array:
    """Return the conductivity of water in W/(m K).

    References
    ----------
    Two parabolas that meet near 137 degC, common in basin modelling (METHODS E5: the cooler one
    agrees with the IAPWS within 0.7 % from 20 to 60 degC; the hotter one from memory).
    """
    t = np.clip(temperature_degc, 0.0, 300.0)
    cool = 0.565 + 1.88e-3 * t - 7.23e-6 * t**2
    return np.where(t < 137.0, cool, 0.602 + 1.31e-3 * t - 5.14e-6 * t**2)
