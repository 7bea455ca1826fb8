"""What shared sources do to recovered temperatures: physics, the cooling law, times, surface."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from basinheat.corrections.method import Loading
from basinheat.corrections.recovery.fit import Case, Fit, arrange, least_rise
from basinheat.corrections.recovery.learning import relearn_law
from basinheat.corrections.recovery.response import Mud
from basinheat.corrections.recovery.times import TimePrior
from basinheat.corrections.sets import Floats, ReadingSets

# Mud over rock: water-based mud 3.8 of 2.5 to 4.0, rock 2.3 of 2.0 to 2.5 MJ/(m3 K); mud 0.7 of
# 0.6 to 0.8, rock 2.3 W/(m K), as its diffusivity demands (METHODS A7, common practice).
MUD = Mud(1.65, 0.30)
CAPACITY_STD, CONDUCTIVITY_LN_STD = 0.2, 0.25
# Diffusivity of rocks 0.5 to 1.6e-6 m2/s (METHODS 0): ln sigma between basins.
DIFFUSIVITY_LN_STD = 0.25
# What the physics leaves out of the cooling law and of unknown times (prototype, measured).
COOLING_LN_STD, UNTIMED_LN_STD = 0.10, 0.10


def physics(base: Case) -> dict[str, tuple[Case, Case, float, str]]:
    """Return the sources of physics: one standard deviation up, down, that deviation, its unit."""
    mud, kappa = base.mud, base.diffusivity_m2_s
    faster = float(np.exp(DIFFUSIVITY_LN_STD))
    better = float(np.exp(CONDUCTIVITY_LN_STD))

    def with_mud(capacity: float, conductivity: float) -> Case:
        return replace(base, mud=Mud(capacity, conductivity))

    return {
        "recovery:diffusivity": (
            replace(base, diffusivity_m2_s=kappa * faster),
            replace(base, diffusivity_m2_s=kappa / faster),
            DIFFUSIVITY_LN_STD,
            "ln m2/s",
        ),
        "recovery:mud_capacity": (
            with_mud(mud.capacity + CAPACITY_STD, mud.conductivity),
            with_mud(mud.capacity - CAPACITY_STD, mud.conductivity),
            CAPACITY_STD,
            "1",
        ),
        "recovery:mud_conductivity": (
            with_mud(mud.capacity, mud.conductivity * better),
            with_mud(mud.capacity, mud.conductivity / better),
            CONDUCTIVITY_LN_STD,
            "ln 1",
        ),
    }


def sources(
    sets: ReadingSets, fit: Fit, prior: TimePrior, base: Case, surface_std_k: float
) -> dict[str, Loading]:
    """Return what each shared source does to the estimates.

    The basin's law is learned anew under each change, so a loading is what remains after the
    basin's own repeated readings had their say.

    Parameters
    ----------
    sets : ReadingSets
        Mud-cooled sets.
    fit : Fit
        Estimates under the assumed values.
    prior : TimePrior
        Times.
    base : Case
        Assumed values.
    surface_std_k : float, K
        Standard uncertainty of the surface temperature that the basin shares.

    Returns
    -------
    dict of str to Loading
        Half the change from one standard deviation below to one above: recovery is not linear in
        its properties, and a change to one side alone would speak for that side only.
    """
    loadings = {}
    for source, (up, down, std, unit) in physics(base).items():
        above, below = (_error(sets, fit, prior, case) for case in (up, down))
        loadings[source] = Loading((above - below) / 2.0, std, unit)
    if surface_std_k > 0.0:
        warmer = _error(sets, fit, prior, replace(base, surface_k=surface_std_k))
        loadings["surface_temperature"] = Loading(warmer, surface_std_k, "K")
    level = np.zeros(len(sets))
    for block, weights, cooling in zip(fit.blocks, fit.weights, fit.cooling, strict=True):
        level[block.index] = -(weights * cooling).sum(1)
    std = float(np.hypot(COOLING_LN_STD, fit.learned.level_std))
    untimed = np.where(sets.timed == 0, level * UNTIMED_LN_STD, 0.0)
    loadings["recovery:cooling"] = Loading(level * std, std, "ln K")
    loadings["method:untimed"] = Loading(untimed, UNTIMED_LN_STD, "ln K")
    return loadings


def _error(sets: ReadingSets, fit: Fit, prior: TimePrior, case: Case) -> Floats:
    """Return estimate less truth, K, if the case were true: (sets,).

    By the cooling expected of each set, never by its own readings: own-value loadings let the
    sources explain scatter.
    """
    index = np.sort(np.concatenate([np.zeros(0, np.int64), *(b.index for b in fit.blocks)]))
    blocks = arrange(sets, index, prior, case)
    expected = least_rise(fit.expected_k - case.surface_k, fit.typical_k)
    law = relearn_law(blocks, expected, fit.typical_k, fit.learned)
    out = np.zeros(len(sets))
    for block, weights, cooling in zip(blocks, fit.weights, fit.cooling, strict=True):
        changed = law.expected_k(expected[block.index])[:, None] * block.left
        out[block.index] = -(weights * (changed - cooling)).sum(1)
    return out
