"""The layers under every place of the invented basin."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from basinheat.synthetic.fields import Field
from basinheat.synthetic.geography import EAST, NORTH, SOUTH, WEST
from basinheat.synthetic.rocks import Rocks

Array = NDArray[np.float64]

# From the top: lithology and mean thickness in m. The salt is a body of its own shape; the last
# layer goes on for ever.
SECTION = (
    ("claystone", 450.0),
    ("sandstone", 550.0),
    ("shale", 650.0),
    ("limestone", 450.0),
    ("halite", 0.0),
    ("sandstone", 600.0),
    ("siltstone", 900.0),
    ("granite", np.inf),
)
_SALT = 4


@dataclass(frozen=True)
class Geology:
    """Thickness, folds, salt and rocks.

    Parameters
    ----------
    rocks : Rocks
        Properties of the lithologies.
    thickness : tuple of Field
        ln of thickness about its mean, a layer each, without the last.
    fold : Field
        Uplift in m that erosion has planed off.
    texture : tuple of Field
        ln of the local factor on matrix conductivity, a lithology each.
    salt_place : (4,) array, m
        Centre (easting, northing) and half axes of the salt body.
    salt_shape : Field
        Unevenness of the salt.
    """

    rocks: Rocks
    thickness: tuple[Field, ...]
    fold: Field
    texture: tuple[Field, ...]
    salt_place: Array
    salt_shape: Field

    @classmethod
    def draw(cls, rng: np.random.Generator, well_std_ln: float = 0.04) -> Geology:
        """Draw a geology."""
        rocks = Rocks.draw(rng)
        centre = (
            WEST + (EAST - WEST) * rng.uniform(0.5, 0.75),
            SOUTH + (NORTH - SOUTH) * rng.uniform(0.3, 0.7),
        )
        axes = (rng.uniform(28_000.0, 38_000.0), rng.uniform(20_000.0, 28_000.0))
        return cls(
            rocks=rocks,
            thickness=tuple(Field.draw(rng, 0.22, 60_000.0) for _ in SECTION[:-1]),
            fold=Field.draw(rng, 220.0, 45_000.0),
            texture=tuple(Field.draw(rng, well_std_ln, 25_000.0) for _ in rocks.names),
            salt_place=np.array([*centre, *axes]),
            salt_shape=Field.draw(rng, 0.35, 25_000.0),
        )

    @property
    def rock_of_layer(self) -> NDArray[np.int64]:
        """Index of the lithology of each layer."""
        return np.array([self.rocks.names.index(name) for name, _ in SECTION])

    def salt_thickness_m(self, easting_m: Array, northing_m: Array) -> Array:
        """Return the thickness of the salt in m."""
        x = (np.asarray(easting_m) - self.salt_place[0]) / self.salt_place[2]
        y = (np.asarray(northing_m) - self.salt_place[1]) / self.salt_place[3]
        body = 1.0 - x**2 - y**2
        uneven = 1.0 + self.salt_shape.at(easting_m, northing_m)
        return np.clip(650.0 * np.maximum(body, 0.0) ** 0.7 * uneven, 0.0, 1100.0)

    def bases_m(self, easting_m: Array, northing_m: Array) -> Array:
        """Return the base of each layer but the last.

        Parameters
        ----------
        easting_m, northing_m : (n,) array, m
            Places.

        Returns
        -------
        (n, layers - 1) array, m
            Depth below ground or sea floor, never falling from one layer to the next.
        """
        thick = np.empty((np.size(easting_m), len(SECTION) - 1))
        for j, ((_, mean), field) in enumerate(zip(SECTION[:-1], self.thickness, strict=True)):
            thick[:, j] = mean * np.exp(field.at(easting_m, northing_m))
        thick[:, _SALT] = self.salt_thickness_m(easting_m, northing_m)
        uplift = self.fold.at(easting_m, northing_m)
        return np.maximum(np.cumsum(thick, axis=1) - uplift[:, None], 0.0)

    def factors(self, easting_m: Array, northing_m: Array) -> Array:
        """Return the local factor on matrix conductivity, (n, lithologies)."""
        ln = [field.at(easting_m, northing_m) for field in self.texture]
        return np.exp(np.stack(ln, axis=1))
