"""Temperature columns rebuilt from surface temperature, heat flow and conductivity structure."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

FIXED_POINT_STEPS = 3


@dataclass(frozen=True)
class Structure:
    """Rock of c columns in d depth intervals, and what is uncertain about it.

    ``edges`` (d + 1,) m; ``ln_conductivity``, ``variance``, ``heat_production`` (uW/m3),
    ``reference_temperature`` (degC), ``temperature_slope`` (1/K): (c, d); ``loadings``
    (c, d, k): change of ln k per unit amplitude of k lithology sources;
    ``vertical_correlation`` (d,): correlation of the interval's error with that of the one above.
    """

    edges: Floats
    ln_conductivity: Floats
    variance: Floats
    heat_production: Floats
    reference_temperature: Floats
    temperature_slope: Floats
    loadings: Floats
    vertical_correlation: Floats


@dataclass(frozen=True)
class Sources:
    """Posterior of the m amplitudes, and which of them move surface and rock.

    ``mean`` (m,), ``covariance`` (m, m), ``surface_shift`` (m,) K and ``production_share`` (m,)
    relative change of heat production per unit amplitude, ``rock`` (k,) int: place of each source
    of conductivity among the amplitudes.
    """

    mean: Floats
    covariance: Floats
    surface_shift: Floats
    production_share: Floats
    rock: NDArray[np.int64]


@dataclass(frozen=True)
class HeatFlow:
    """Heat flow of c columns: ``value`` (c,) mW/m2, ``variance`` (c,), ``cross`` (c, m)."""

    value: Floats
    variance: Floats
    cross: Floats


@dataclass(frozen=True)
class Columns:
    """Rebuilt columns at the d + 1 edges, all (c, d + 1).

    ``temperature`` degC, its ``variance`` K2, the ``variance_above_surface`` of temperature less
    surface temperature, and ``resistance`` = d temperature / d heat flow, K m2/mW.
    """

    edges: Floats
    temperature: Floats
    variance: Floats
    variance_above_surface: Floats
    resistance: Floats


def rebuild_columns(
    surface: Floats,
    surface_variance: Floats,
    heat_flow: HeatFlow,
    structure: Structure,
    sources: Sources,
) -> Columns:
    """Carry heat flow down the rock, conductivity taken at the column's own temperature.

    Within an interval of thickness h: ``dT = q h/k - A h^2/(2 k)``, ``q`` falling by ``A h``; k
    follows ``ln k = ln k_ref + slope (T - T_ref)``, solved by fixed point. All errors are carried
    as sensitivities: heat flow and the shared sources with their joint covariance, each once, and
    the interpolation of conductivity as an autoregressive error down the column.

    Parameters
    ----------
    surface, surface_variance : (c,) array, degC and K2
        Surface temperature without the shared offset, and its own variance.
    heat_flow : HeatFlow
        Kriged surface heat flow.
    structure : Structure
        Kriged rock.
    sources : Sources
        Posterior of the shared sources.

    Returns
    -------
    Columns
        Temperatures increase with depth wherever heat flow stays positive.
    """
    n_cells, n_edges = len(surface), len(structure.edges)
    temperature = np.empty((n_cells, n_edges))
    variance, above = np.empty_like(temperature), np.empty_like(temperature)
    resistance = np.zeros_like(temperature)
    temperature[:, 0] = surface + sources.surface_shift @ sources.mean
    flow = heat_flow.value.copy()
    to_flow = np.zeros(n_cells)
    to_surface = np.ones(n_cells)
    to_sources = np.tile(sources.surface_shift, (n_cells, 1))
    own, own_next = np.zeros(n_cells), np.zeros(n_cells)
    for i in range(n_edges):
        if i > 0:
            step = _Step(structure, i - 1, temperature[:, i - 1], flow, sources)
            temperature[:, i] = temperature[:, i - 1] + step.rise
            flow = flow - step.loss
            carry, half = step.feedback, step.half_feedback
            to_flow = to_flow * carry + step.resistance * half
            to_surface = to_surface * carry
            to_sources *= carry[:, None]
            # heat made above leaves the flux, so it cools what is below
            cooling = (heat_flow.value - step.flow) * step.resistance * half
            to_sources -= np.outer(cooling, sources.production_share)
            to_sources[:, sources.rock] -= (step.rise * half)[:, None] * structure.loadings[
                :, i - 1
            ]
            error = step.rise * half * np.sqrt(structure.variance[:, i - 1])
            tie = structure.vertical_correlation[i - 1] * own_next
            own = carry**2 * own + 2 * carry * error * tie + error**2
            own_next = carry * tie + error
        resistance[:, i] = to_flow
        variance[:, i] = own + to_surface**2 * surface_variance
        variance[:, i] += _joint(to_flow, to_sources, heat_flow, sources)
        above_sources = to_sources - sources.surface_shift
        above[:, i] = own + (to_surface - 1.0) ** 2 * surface_variance
        above[:, i] += _joint(to_flow, above_sources, heat_flow, sources)
    return Columns(structure.edges, temperature, variance, above, resistance)


class _Step:
    """One interval: temperature rise, flux lost, and how an error above acts through k(T)."""

    def __init__(
        self, structure: Structure, i: int, top: Floats, flow: Floats, sources: Sources
    ) -> None:
        h = structure.edges[i + 1] - structure.edges[i]
        level = 1.0 + sources.production_share @ sources.mean
        self.loss = level * structure.heat_production[:, i] * h * 1e-3
        self.flow = flow - 0.5 * self.loss
        base = (
            structure.ln_conductivity[:, i] + structure.loadings[:, i] @ sources.mean[sources.rock]
        )
        slope = structure.temperature_slope[:, i]
        middle = top
        for _ in range(FIXED_POINT_STEPS):
            ln_k = base + slope * (middle - structure.reference_temperature[:, i])
            # the mean of 1/k, not its median: resistances add
            self.resistance = 1e-3 * h * np.exp(0.5 * structure.variance[:, i] - ln_k)
            self.rise = self.flow * self.resistance
            middle = top + 0.5 * self.rise
        # hotter rock conducts less, so an error from above grows on its way down
        self.feedback = 1.0 - slope * self.rise
        self.half_feedback = 1.0 - 0.5 * slope * self.rise


def _joint(to_flow: Floats, to_sources: Floats, heat_flow: HeatFlow, sources: Sources) -> Floats:
    """Variance from heat flow and sources with their joint covariance."""
    return np.maximum(
        to_flow**2 * heat_flow.variance
        + 2 * to_flow * np.einsum("ij,ij->i", to_sources, heat_flow.cross)
        + np.einsum("ij,jk,ik->i", to_sources, sources.covariance, to_sources),
        0.0,
    )


def at_depths(columns: Columns, values: Floats, depths: Floats) -> Floats:
    """Interpolate values at the edges, (c, d + 1), to depths, (p,) or one a column (c, p)."""
    edges = columns.edges
    depths = np.broadcast_to(np.atleast_1d(depths), (len(values), np.shape(depths)[-1]))
    i = np.clip(np.searchsorted(edges, depths, side="right") - 1, 0, len(edges) - 2)
    share = (depths - edges[i]) / (edges[i + 1] - edges[i])
    rows = np.arange(len(values))[:, None]
    return (1 - share) * values[rows, i] + share * values[rows, i + 1]


def isotherm_depths(columns: Columns, degc: float) -> tuple[Floats, Floats]:
    """Find where the columns reach a temperature.

    Returns
    -------
    depth, std : (c,) array, m
        NaN where the isotherm lies above the surface or below the deepest edge; the standard
        uncertainty is that of temperature there over the local gradient.
    """
    temperature, edges = columns.temperature, columns.edges
    below = (temperature < degc).sum(1)
    found = (below > 0) & (below < len(edges))
    i = np.clip(below - 1, 0, len(edges) - 2)
    rows = np.arange(len(temperature))
    top, base = temperature[rows, i], temperature[rows, i + 1]
    gradient = (base - top) / (edges[i + 1] - edges[i])
    with np.errstate(divide="ignore", invalid="ignore"):
        depth = edges[i] + (degc - top) / gradient
        variance = at_depths(columns, columns.variance, np.nan_to_num(depth)[:, None])[:, 0]
        std = np.sqrt(variance) / gradient
    return np.where(found, depth, np.nan), np.where(found, std, np.nan)
