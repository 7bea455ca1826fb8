"""How a hole recovers: radial conduction after circulation, simulated once in hole radii."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import NDArray
from scipy.interpolate import RectBivariateSpline
from scipy.linalg import eigh_tridiagonal

Floats = NDArray[np.float64]

# In hole radii: equal cells inside, outside growing to where nothing is felt in months.
_INSIDE, _GROWTH, _REACH = 60, 1.035, 1500.0
# Dimensionless times of the table: an hour in a wide hole to months in a narrow one.
CIRCULATION_RANGE, SINCE_RANGE = (0.01, 300.0), (0.01, 3000.0)
_STEPS = (48, 72)


@dataclass(frozen=True)
class Mud:
    """Properties of the mud at rest, over those of the rock.

    Parameters
    ----------
    capacity : float
        Volumetric heat capacity over the rock's.
    conductivity : float
        Conductivity over the rock's.
    """

    capacity: float
    conductivity: float


class Response:
    """Share of the cooling at the end of circulation that is left on the axis of the hole.

    Parameters
    ----------
    mud : Mud
        Mud over rock.
    """

    def __init__(self, mud: Mud) -> None:
        circulation = np.geomspace(*CIRCULATION_RANGE, _STEPS[0])
        since = np.geomspace(*SINCE_RANGE, _STEPS[1])
        left = simulate(mud, circulation, since)
        self._table = RectBivariateSpline(np.log(circulation), np.log(since), left)

    def __call__(
        self, circulation_h: Floats, since_h: Floats, radius_m: Floats, diffusivity_m2_s: float
    ) -> Floats:
        """Return the share left; arrays broadcast, times outside the table count as its edge."""
        per_hour = 3600.0 * diffusivity_m2_s / np.asarray(radius_m, float) ** 2
        t_c, t_s = np.broadcast_arrays(circulation_h * per_hour, since_h * per_hour)
        left = self._table(
            np.log(np.clip(t_c, *CIRCULATION_RANGE)), np.log(np.clip(t_s, *SINCE_RANGE)), grid=False
        )
        return np.asarray(np.clip(left, 0.0, 1.0), dtype=np.float64)


@cache
def response(mud: Mud) -> Response:
    """Return the response table of a mud, simulated once per process."""
    return Response(mud)


def simulate(mud: Mud, circulation: Floats, since: Floats) -> Floats:
    """Simulate the recovery of the axis of a hole.

    While mud circulates the wall is held one unit below the rock; then the mud at rest and the
    rock exchange heat by conduction, ``ρc ∂T/∂t = (1/r) ∂(r k ∂T/∂r)/∂r``. Space is cut into
    rings; time is exact, by the eigenvectors of the rings' exchange of heat.

    Parameters
    ----------
    mud : Mud
        Mud over rock.
    circulation, since : (m,) and (n,) array
        Times ``κ t / a²`` of circulation and since it stopped.

    Returns
    -------
    (m, n) array
        Share of the cooling left on the axis.

    Notes
    -----
    Middle of a long hole: within some ten radii of its bottom it recovers faster.

    References
    ----------
    Carslaw & Jaeger (1959), Conduction of heat in solids, chapters VII and XIII (the equation);
    Luheshi (1983), Geophys. J. R. astr. Soc. 74 (mud and rock of different properties).
    """
    edges, inside = _rings()
    centres = 0.5 * (edges[1:] + edges[:-1])
    capacity = np.where(inside, mud.capacity, 1.0) * 0.5 * np.diff(edges**2)
    conductivity = np.where(inside, mud.conductivity, 1.0)
    outer = np.log(edges[1:] / centres) / conductivity
    inner = np.log(centres[1:] / edges[1:-1]) / conductivity[1:]
    link = 1.0 / (outer[:-1] + inner)
    rock = ~inside
    wall = 1.0 / inner[_INSIDE - 1]
    rate, modes = _modes(capacity[rock], link[_INSIDE:], wall)
    root = np.sqrt(capacity)
    # The rock ends up as cold as the wall; what is not yet gone decays mode by mode.
    warm = modes @ (np.exp(-np.outer(rate, circulation)) * (modes.T @ root[rock])[:, None])
    cooled = np.ones((centres.size, circulation.size))
    cooled[rock] -= warm / root[rock][:, None]
    rate, modes = _modes(capacity, link, 0.0)
    amplitude = modes.T @ (cooled * root[:, None])
    axis = (modes[0] / root[0])[:, None] * np.exp(-np.outer(rate, since))
    return np.asarray(amplitude.T @ axis, dtype=np.float64)


def _modes(capacity: Floats, link: Floats, wall: float) -> tuple[Floats, Floats]:
    """Return decay rates and modes of rings, made symmetric by the root of capacity."""
    out = np.zeros(capacity.size)
    out[:-1] += link
    out[1:] += link
    out[0] += wall
    rate, modes = eigh_tridiagonal(out / capacity, -link / np.sqrt(capacity[1:] * capacity[:-1]))
    return rate, modes


def _rings() -> tuple[Floats, NDArray[np.bool_]]:
    """Return edges of the rings, one of them the wall at 1, and which rings hold mud."""
    first = 1.0 / _INSIDE
    n = int(np.ceil(np.log(1.0 + (_REACH - 1.0) * (_GROWTH - 1.0) / first) / np.log(_GROWTH)))
    outside = 1.0 + first * (_GROWTH ** np.arange(1, n + 1) - 1.0) / (_GROWTH - 1.0)
    edges = np.concatenate([np.linspace(0.0, 1.0, _INSIDE + 1), outside])
    return edges, np.arange(edges.size - 1) < _INSIDE
