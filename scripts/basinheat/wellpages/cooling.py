"""How readings approach the formation temperature: curves through sets of timed readings."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from basinheat.corrections.methods.horner import horner_time
from basinheat.corrections.methods.time_lines import fit_line
from basinheat.corrections.recovery.response import Mud, response

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class TimedSets:
    """Timed readings of s sets, at most n each; NaN beyond the last.

    Parameters
    ----------
    since_h, temperature_degc, std_k : (s, n) array, h, degC, K
        The readings, at the depth of their set, and their standard uncertainty.
    circulation_h, radius_m, formation_degc : (s,) array, h, m, degC
        Circulation before, radius of the hole, temperature that the set tends to.
    """

    since_h: Floats
    temperature_degc: Floats
    std_k: Floats
    circulation_h: Floats
    radius_m: Floats
    formation_degc: Floats


@dataclass(frozen=True)
class Cooled:
    """What the recovery of s sets fits.

    Parameters
    ----------
    cooling_k : (s,) array, K
        How much cooler than the formation the mud was when circulation stopped.
    misfit : (s,) array
        Root of the squared standardised residuals over n - 1; NaN for a single reading, which any
        cooling fits.
    """

    cooling_k: Floats
    misfit: Floats


def fit_cooling(sets: TimedSets, mud: Mud, diffusivity_m2_s: float) -> Cooled:
    """Fit the cooling of each set, its formation temperature held.

    A reading is ``T_i = T∞ − D_i c``, D the share of the cooling left, simulated.

    Parameters
    ----------
    sets : TimedSets
        Readings.
    mud : Mud
        Mud over rock.
    diffusivity_m2_s : float, m2/s
        Of the rock.

    Returns
    -------
    Cooled
        By weighted least squares; NaN where a set has no timed reading.
    """
    there = np.isfinite(sets.since_h) & np.isfinite(sets.temperature_degc)
    left = _left(sets, sets.since_h, mud, diffusivity_m2_s)
    gap = sets.formation_degc[:, None] - sets.temperature_degc
    weight = np.where(there, 1.0 / sets.std_k**2, 0.0)
    left, gap = np.where(there, left, 0.0), np.where(there, gap, 0.0)
    with np.errstate(invalid="ignore", divide="ignore"):
        cooling = (weight * left * gap).sum(1) / (weight * left**2).sum(1)
        squares = (weight * (gap - cooling[:, None] * left) ** 2).sum(1)
        misfit = np.sqrt(squares / np.where(there.sum(1) > 1, there.sum(1) - 1, np.nan))
    return Cooled(cooling, misfit)


def curves(
    sets: TimedSets, cooled: Cooled, since_h: Floats, mud: Mud, diffusivity_m2_s: float
) -> Floats:
    """Return the recovery curve of each set at times, (s, p) h; (s, p) in degC."""
    left = _left(sets, since_h, mud, diffusivity_m2_s)
    return sets.formation_degc[:, None] - cooled.cooling_k[:, None] * left


def horner_lines(sets: TimedSets) -> tuple[Floats, Floats]:
    """Return intercept (degC) and slope (K) of the straight lines on Horner time, (s,) each.

    NaN where a set has not two different times.
    """
    line = fit_line(horner_time(sets.circulation_h[:, None], sets.since_h), sets.temperature_degc)
    good = (line.n > 1) & (line.spread > 1e-6)
    return np.where(good, line.intercept, np.nan), np.where(good, line.slope, np.nan)


def _left(sets: TimedSets, since_h: Floats, mud: Mud, diffusivity_m2_s: float) -> Floats:
    table = response(mud)
    return table(sets.circulation_h[:, None], since_h, sets.radius_m[:, None], diffusivity_m2_s)
