"""Each well reduced exactly to one heat flow and to what its own column tells of the sources."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]


@dataclass(frozen=True)
class Column:
    """Temperatures of all wells in the resistance-temperature plane, sorted by well.

    Model of a row: ``excess = heat_flow * resistance + loadings @ amplitudes + error``, with
    ``error = sqrt(variance) * own + common @ factors of the well``, all unit normal.

    Parameters
    ----------
    well : (n,) int array
        Number of the row's well, ascending, every number from 0 on present.
    resistance : (n,) array, m2 K/mW
        Thermal resistance from the surface.
    excess : (n,) array, K
        Temperature less surface temperature plus the radiogenic term.
    loadings : (n, m) array, K
        Change of ``excess`` per unit amplitude of each source.
    variance : (n,) array, K2
        Independent variance.
    common : (n, f) array, K
        Loadings on errors common to the well.
    """

    well: Ints
    resistance: Floats
    excess: Floats
    loadings: Floats
    variance: Floats
    common: Floats


@dataclass(frozen=True)
class Reduced:
    """Sufficient statistics of the wells.

    ``heat_flow = true heat flow + loadings @ amplitudes + N(0, variance)`` per well; in addition
    the wells' own columns hold ``information`` (m, m) and ``pull`` (m,) on the amplitudes;
    ``constant`` is the rest of -2 log likelihood.
    """

    heat_flow: Floats
    variance: Floats
    loadings: Floats
    information: Floats
    pull: Floats
    constant: float


def reduce_wells(column: Column) -> Reduced:
    """Fit one heat flow per well by generalised least squares, keeping all other information.

    The Bullard (1939) fit of each well, solved for all wells at once: normal matrices of
    ``[resistance, excess, loadings]`` are summed by well, the common errors taken out by the
    Woodbury identity, and heat flow eliminated by a Schur complement. What remains says how well
    the readings of one well agree with each other for given amplitudes.

    Parameters
    ----------
    column : Column
        Rows of all wells.

    Returns
    -------
    Reduced
        One value per well, and the information on the amplitudes summed over wells.

    References
    ----------
    Bullard, E. C. (1939), Heat flow in South Africa, Proc. R. Soc. A 173, 474-502.
    """
    starts = np.flatnonzero(np.diff(column.well, prepend=-1))
    rows = np.column_stack([column.resistance, column.excess, column.loadings])
    weighted = rows / column.variance[:, None]
    normal = np.add.reduceat(weighted[:, :, None] * rows[:, None, :], starts)
    mixed = np.add.reduceat(weighted[:, :, None] * column.common[:, None, :], starts)
    factors = np.eye(column.common.shape[1]) + np.add.reduceat(
        (column.common / column.variance[:, None])[:, :, None] * column.common[:, None, :], starts
    )
    normal -= mixed @ np.linalg.solve(factors, mixed.transpose(0, 2, 1))
    precision = normal[:, 0, 0]
    inside = (normal - normal[:, :, :1] * normal[:, :1, :] / precision[:, None, None]).sum(0)
    constant = (
        np.log(column.variance).sum()
        + np.linalg.slogdet(factors)[1].sum()
        + np.log(precision).sum()
        + inside[1, 1]
    )
    return Reduced(
        heat_flow=normal[:, 0, 1] / precision,
        variance=1.0 / precision,
        loadings=normal[:, 0, 2:] / precision[:, None],
        information=inside[2:, 2:],
        pull=inside[2:, 1],
        constant=float(constant),
    )


def amplitudes_within_wells(reduced: Reduced, prior_mean: Floats) -> tuple[Floats, Floats, float]:
    """Combine the unit prior of the amplitudes with what the wells' own columns tell of them.

    Parameters
    ----------
    reduced : Reduced
        Reduced wells with m amplitudes.
    prior_mean : (m,) array
        Prior mean of the amplitudes; their prior covariance is the identity.

    Returns
    -------
    mean : (m,) array
    covariance : (m, m) array
    deviance : float
        -2 log likelihood of the part inside wells, up to a constant.
    """
    covariance = np.linalg.inv(np.eye(len(prior_mean)) + reduced.information)
    covariance = 0.5 * (covariance + covariance.T)
    target = prior_mean + reduced.pull
    mean = covariance @ target
    deviance = (
        reduced.constant
        - np.linalg.slogdet(covariance)[1]
        + prior_mean @ prior_mean
        - target @ mean
    )
    return mean, covariance, float(deviance)
