"""How mud cools a hole and the hole recovers: radial conduction by finite volumes."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

# In hole radii: cells inside shrink toward the wall, cells outside grow from it to where nothing
# is felt in several days.
_INSIDE, _OUTSIDE, _FIRST, _EDGE = 60, 140, 0.006, 150.0
_BLOCK = 2048


@dataclass(frozen=True)
class MudProperties:
    """True properties that govern the recovery of a basin's wells.

    Parameters
    ----------
    diffusivity_m2_s : float, m2/s
        Of the rock.
    capacity_ratio : float
        Volumetric heat capacity of mud over that of rock.
    conductivity_ratio : float
        Conductivity of mud over that of rock.
    offset_k, slope : float, K and 1
        Cooling law: formation minus mud is offset + slope x (formation minus surface).
    """

    diffusivity_m2_s: float
    capacity_ratio: float
    conductivity_ratio: float
    offset_k: float
    slope: float

    @classmethod
    def draw(cls, rng: np.random.Generator) -> MudProperties:
        """Draw a basin's mud and rock.

        Ranges: diffusivity about 1e-6 m2/s within 20 %, mud 3.0 to 4.2 against rock 2.1 to 2.5
        MJ/(m3 K), mud conductivity 0.6 to 0.9 W/(m K) (common practice, no source).
        """
        diffusivity = 1e-6 * np.exp(rng.normal(0.0, 0.2))
        rock_capacity = rng.uniform(2.1e6, 2.5e6)
        return cls(
            diffusivity_m2_s=diffusivity,
            capacity_ratio=rng.uniform(3.0e6, 4.2e6) / rock_capacity,
            conductivity_ratio=rng.uniform(0.6, 0.9) / (diffusivity * rock_capacity),
            offset_k=rng.uniform(0.0, 5.0),
            slope=rng.uniform(0.30, 0.45),
        )


def cooling_left(
    circulation_h: Array,
    since_h: Array,
    radius_m: Array,
    diffusivity_m2_s: float,
    capacity_ratio: float = 1.0,
    conductivity_ratio: float = 1.0,
) -> Array:
    """Return the share of the mud's cooling that is left on the axis of the hole.

    While mud circulates the wall is held at mud temperature and the rock cools; then everything
    inside is mud at rest that warms by conduction. Space is cut into rings; time is exact, by the
    eigenvectors of the rings' exchange of heat.

    Parameters
    ----------
    circulation_h, since_h, radius_m : (n,) array, h, h, m
        Circulation, time since it stopped, radius of the hole.
    diffusivity_m2_s : float, m2/s
        Of the rock.
    capacity_ratio, conductivity_ratio : float
        Mud over rock.

    Returns
    -------
    (n,) array
        (formation - reading) / (formation - mud), between 0 and 1.
    """
    scale = diffusivity_m2_s * 3600.0 / np.asarray(radius_m, float) ** 2
    circulated, rested = circulation_h * scale, since_h * scale
    edges = _ring_edges()
    inside = edges[1:] <= 1.0 + 1e-12
    capacity = np.where(inside, capacity_ratio, 1.0) * np.diff(edges**2) / 2
    conductivity = np.where(inside, conductivity_ratio, 1.0)
    rock = ~inside
    # The first stage sees the rock alone, its inner face held at mud temperature (0).
    cooling = _Modes(edges[_INSIDE:], capacity[rock], conductivity[rock], held_at_wall=True)
    resting = _Modes(edges, capacity, conductivity, held_at_wall=False)
    link = resting.into()[:, rock] @ cooling.out_of()
    start = cooling.into() @ np.ones(rock.sum())
    axis = resting.out_of()[0]
    warm = np.empty(circulated.size)
    for first in range(0, circulated.size, _BLOCK):
        part = slice(first, first + _BLOCK)
        rock_modes = np.exp(-np.outer(circulated[part], cooling.rate)) * start
        rest_modes = (rock_modes @ link.T) * np.exp(-np.outer(rested[part], resting.rate))
        warm[part] = rest_modes @ axis
    return 1.0 - warm


class _Modes:
    """Eigenvectors of the heat exchange of rings, made symmetric by the root of capacity."""

    def __init__(self, edges: Array, capacity: Array, conductivity: Array, held_at_wall: bool):
        centres = (edges[1:] + edges[:-1]) / 2
        outer = np.log(edges[1:] / centres) / conductivity
        # The axis needs no inner resistance: nothing flows through it.
        inner = np.log(centres[1:] / edges[1:-1]) / conductivity[1:]
        conductance = 1.0 / (outer[:-1] + inner)
        exchange = np.zeros((centres.size, centres.size))
        index = np.arange(centres.size - 1)
        exchange[index, index] += conductance
        exchange[index + 1, index + 1] += conductance
        exchange[index, index + 1] = exchange[index + 1, index] = -conductance
        if held_at_wall:
            exchange[0, 0] += conductivity[0] / np.log(centres[0] / edges[0])
        self.root = np.sqrt(capacity)
        self.rate, self.vectors = np.linalg.eigh(exchange / np.outer(self.root, self.root))

    def into(self) -> Array:
        """Return the matrix from ring temperatures to modes."""
        return self.vectors.T * self.root

    def out_of(self) -> Array:
        """Return the matrix from modes to ring temperatures."""
        return self.vectors / self.root[:, None]


def _ring_edges() -> Array:
    """Return the edges of the rings in hole radii; one of them is the wall."""
    fine = 1.0 - np.linspace(1.0, 0.0, _INSIDE + 1) ** 1.5
    width = _FIRST * _growth() ** np.arange(_OUTSIDE)
    return np.concatenate([fine[:-1], 1.0 + np.concatenate([[0.0], np.cumsum(width)])])


def _growth() -> float:
    """Return the ratio of neighbouring rings that reaches the edge, by bisection."""
    low, high = 1.0001, 1.5
    for _ in range(60):
        ratio = (low + high) / 2
        reach = _FIRST * (ratio**_OUTSIDE - 1.0) / (ratio - 1.0)
        low, high = (ratio, high) if reach < _EDGE - 1.0 else (low, ratio)
    return low
