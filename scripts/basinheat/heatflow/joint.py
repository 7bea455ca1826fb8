"""One fit of the covariance of heat flow, the variance scales and all shared sources."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from scipy.spatial.distance import cdist

from basinheat.geostat.drift import Drift
from basinheat.geostat.engine_global import GlobalKriging
from basinheat.geostat.gls import NotPositiveDefiniteError, deviance, factorise
from basinheat.geostat.likelihood import search
from basinheat.geostat.models import Covariance
from basinheat.geostat.thinning import spread
from basinheat.heatflow.points import Points, beside_wells
from basinheat.heatflow.reduction import (
    Column,
    Floats,
    Ints,
    Reduced,
    amplitudes_within_wells,
    reduce_wells,
)

WELLS_FITTED = 500  # likelihood costs n^3; more wells hardly move range and sill
WELLS_PER_SCALE = 12  # fewer wells say nothing of a variance scale
SCALE_PRIOR_LN = 0.5
TURNS = 3
TOLERANCE = 0.02  # a finer search costs turns and moves nothing that is mapped


@dataclass(frozen=True)
class Basin:
    """All temperatures of a basin, sorted by well.

    Rows: ``well`` (n,), ``temperature`` (n,) degC, ``surface`` (n,) degC, ``resistance`` (n, k)
    m2 K/mW and ``radiogenic`` (n, k) K by lithology, ``resistance_fixed`` (n,) and
    ``radiogenic_fixed`` (n,) of measured rock, ``loadings`` (n, m) K of the temperature sources,
    ``std`` (n,) K independent, ``well_std`` (n,) K, ``surface_std`` (n,) K own part of the surface
    temperature, ``resistance_std`` (n,) m2 K/mW, ``scale_class`` (n,) int. Wells: ``xy`` (w, 2) m.
    ``change`` (n, v) m2 K/mW: of resistance per unit amplitude of v rock sources. ``ln_std`` (k,)
    sigma of ln k of each lithology; ``surface_shift`` (m,) K: change of the surface temperature per
    unit amplitude of each temperature source; ``production_std`` (p,): sigma of the level of heat
    production, p 0 or 1; ``points``: published heat flow, with s shared amplitudes. Amplitudes are
    ordered m, k, v, p, s.
    """

    well: Ints
    temperature: Floats
    surface: Floats
    resistance: Floats
    radiogenic: Floats
    resistance_fixed: Floats
    change: Floats
    radiogenic_fixed: Floats
    loadings: Floats
    std: Floats
    well_std: Floats
    surface_std: Floats
    resistance_std: Floats
    scale_class: Ints
    xy: Floats
    ln_std: Floats
    surface_shift: Floats
    production_std: Floats
    points: Points

    @property
    def places(self) -> Floats:
        """Return where the data of the map lie: wells, then points, (w + p, 2)."""
        return np.vstack([self.xy, self.points.xy])

    def thinned(self, most: int) -> Basin:
        """Return the rows of at most so many wells and points, evenly spread."""
        kept = spread(self.places, most)
        basin = self.of_wells(kept[kept < len(self.xy)])
        return replace(basin, points=self.points.take(kept[kept >= len(self.xy)] - len(self.xy)))

    def of_wells(self, wells: Ints) -> Basin:
        """Return the rows of some wells, renumbered."""
        number = np.full(len(self.xy), -1)
        number[wells] = np.arange(len(wells))
        rows = number[self.well] >= 0
        per_row = {
            name: getattr(self, name)[rows]
            for name in self.__dataclass_fields__
            if name not in ("xy", "ln_std", "surface_shift", "production_std", "points")
        }
        per_row["well"] = number[per_row["well"]]
        return replace(self, xy=self.xy[wells], **per_row)


@dataclass(frozen=True)
class Joint:
    """The fitted state: covariance, variance scales, amplitudes, and the reduced wells."""

    covariance: Covariance
    scales: Floats
    reduced: Reduced
    mean_within: Floats
    covariance_within: Floats
    offset: Floats  # amplitudes the columns were linearised at; added to what the engine gives
    mean: Floats
    posterior: Floats
    regional: float


def column_of(basin: Basin, rock: Floats, regional: float, scales: Floats) -> Column:
    """Build the linear model of all rows about given rock amplitudes, (k + v,).

    Loadings use one regional heat flow (mW/m2) for all wells: with each well's own, ln k would
    explain the map away and pull it low.
    """
    ln_k, rest = np.split(rock, [len(basin.ln_std)])
    # relative changes multiply, as they do in the rebuilt columns: large amplitudes then agree too
    nominal = basin.resistance.sum(1) + basin.resistance_fixed
    relative = basin.change / nominal[:, None]
    all_rock = np.exp(relative @ rest)
    change = np.exp(-basin.ln_std * ln_k) * all_rock[:, None]
    resistance, radiogenic = basin.resistance * change, basin.radiogenic * change
    total = resistance.sum(1) + basin.resistance_fixed * all_rock
    below = radiogenic.sum(1) + basin.radiogenic_fixed * all_rock
    conductivity = -(regional * resistance - radiogenic) * basin.ln_std
    scale = scales[basin.scale_class]
    return Column(
        well=basin.well,
        resistance=total,
        excess=basin.temperature - basin.surface + below,
        loadings=np.column_stack(
            [
                basin.loadings + basin.surface_shift,
                conductivity,
                (regional * total - below)[:, None] * relative,
                -np.outer(below, basin.production_std),
                np.zeros((len(below), len(basin.points.shared_share))),
            ]
        ),
        variance=basin.std**2 * scale,
        common=np.column_stack(
            [
                basin.well_std * np.sqrt(scale),
                basin.surface_std,
                regional * basin.resistance_std,
            ]
        ),
    )


def reduce(basin: Basin, rock: Floats, regional: float, scales: Floats) -> Reduced:
    """Return the wells reduced about rock amplitudes, (k + v,), and the points beside them."""
    wells = reduce_wells(column_of(basin, rock, regional, scales))
    return beside_wells(wells, basin.points, regional)


def fit_joint(
    basin: Basin,
    regional: float,
    models: tuple[str, ...],
    pinned: Covariance | None = None,
    trend: str = "none",
) -> Joint:
    """Fit covariance, scales and amplitudes by restricted maximum likelihood.

    Parameters
    ----------
    basin : Basin
        All temperatures.
    regional : float, mW/m2
        First guess of the regional heat flow.
    models : tuple of str
        Covariance models to choose from by likelihood.
    pinned : Covariance, optional
        A reviewed covariance; then only the scales are fitted.
    trend : {"none", "linear"}
        Drift of heat flow in x and y.

    Returns
    -------
    Joint
        Posterior of the amplitudes given everything; rock linearised anew in each turn.
    """
    n_temperature, n_rock = basin.loadings.shape[1], len(basin.ln_std) + basin.change.shape[1]
    place = slice(n_temperature, n_temperature + n_rock)
    fitted = _Search(basin.thinned(WELLS_FITTED), models, pinned, regional, trend)
    rock = np.zeros(n_rock)
    for turn in range(TURNS):
        n_rest = len(basin.production_std) + len(basin.points.shared_share)
        offset = np.concatenate([np.zeros(n_temperature), rock, np.zeros(n_rest)])
        if turn < TURNS - 1:
            fitted.run(rock, regional, -offset)
        covariance, scales = fitted.covariance(), fitted.scales()
        reduced = reduce(basin, rock, regional, scales)
        mean_within, covariance_within, _ = amplitudes_within_wells(reduced, -offset)
        engine = GlobalKriging(
            basin.places,
            covariance,
            reduced.variance,
            trend=trend,
            loadings=reduced.loadings,
            prior_mean=mean_within,
            prior_covariance=covariance_within,
        ).solve(reduced.heat_flow)
        mean, posterior = engine.amplitudes()
        regional = float(np.mean(reduced.heat_flow - reduced.loadings @ mean))
        rock = rock + mean[place]
    return Joint(
        covariance=covariance,
        scales=scales,
        reduced=reduced,
        mean_within=mean_within,
        covariance_within=covariance_within,
        offset=offset,
        mean=offset + mean,
        posterior=posterior,
        regional=regional,
    )


class _Search:
    """Downhill search of ln sill, ln range, ln nugget and the ln variance scales."""

    def __init__(
        self,
        basin: Basin,
        models: tuple[str, ...],
        pinned: Covariance | None,
        regional: float,
        trend: str,
    ) -> None:
        self.basin, self.models, self.pinned = basin, models, pinned
        _, self.drift = Drift.of(basin.places, trend)
        places = basin.places if pinned is None else pinned.isotropic(basin.places)
        self.distance = cdist(places, places)
        diagonal = max(float(np.hypot(*np.ptp(basin.places, axis=0))), 1.0)
        wells = [
            len(np.unique(basin.well[basin.scale_class == c]))
            for c in range(int(basin.scale_class.max()) + 1)
        ]
        self.n_classes = len(wells)
        self.free = np.flatnonzero(np.array(wells) >= WELLS_PER_SCALE)
        size = (0.1 * regional) ** 2
        self.at = np.concatenate(
            [[np.log(size), np.log(0.35 * diagonal), np.log(0.05 * size)], np.zeros(len(self.free))]
        )
        self.step = np.concatenate([[0.5, 0.5, 1.0], np.full(len(self.free), 0.3)])
        near = np.sort(self.distance + np.where(self.distance > 0, 0, np.inf), axis=1)[:, :1]
        shortest = float(np.median(near[np.isfinite(near)])) if np.isfinite(near).any() else 1.0
        self.low = np.concatenate(
            [
                [np.log(1e-3 * size), np.log(shortest), np.log(1e-6 * size)],
                np.full(len(self.free), -1.5),
            ]
        )
        self.high = np.concatenate(
            [
                [np.log(100 * size), np.log(max(1.5 * diagonal, 2 * shortest)), np.log(10 * size)],
                np.full(len(self.free), 1.5),
            ]
        )
        self.range_guess = self.at[1]
        self.model = models[-1]

    def run(self, rock: Floats, regional: float, prior_mean: Floats) -> None:
        """Search all models from where the last turn ended and keep the likeliest."""
        if self.pinned is not None and not len(self.free):
            return
        ends = {}
        for model in self.models:

            def function(at: Floats, model: str = model) -> float:
                return self._deviance(at, model, rock, regional, prior_mean)

            ends[model] = search(function, self.at, self.step, 50 * len(self.at), TOLERANCE)
        self.model = min(ends, key=lambda model: ends[model].value)
        self.at = np.clip(ends[self.model].place, self.low, self.high)
        # later turns only polish
        self.models, self.step = (self.model,), 0.4 * self.step

    def covariance(self, at: Floats | None = None, model: str | None = None) -> Covariance:
        """Return the covariance at a point, by default the best."""
        if self.pinned is not None:
            return self.pinned
        sill, reach, nugget = np.exp((self.at if at is None else at)[:3])
        return Covariance(model or self.model, float(sill), float(reach), float(nugget))

    def scales(self, at: Floats | None = None) -> Floats:
        """Return the variance scale of every class."""
        scales = np.ones(self.n_classes)
        scales[self.free] = np.exp((self.at if at is None else at)[3:])
        return scales

    def _deviance(
        self, at: Floats, model: str, rock: Floats, regional: float, prior_mean: Floats
    ) -> float:
        at = np.clip(at, self.low, self.high)
        reduced = reduce(self.basin, rock, regional, self.scales(at))
        mean, spread_, within = amplitudes_within_wells(reduced, prior_mean)
        covariance = self.covariance(at, model)
        matrix = covariance.at_distance(self.distance)
        matrix += reduced.loadings @ spread_ @ reduced.loadings.T
        matrix.flat[:: len(matrix) + 1] += reduced.variance + covariance.nugget
        try:
            factor = factorise(matrix, self.drift)
        except NotPositiveDefiniteError:
            return np.inf
        between = deviance(factor, reduced.heat_flow - reduced.loadings @ mean)
        # a scale of 1 and a range of a third of the basin are expected, weakly
        penalty = ((at[3:] / SCALE_PRIOR_LN) ** 2).sum() + ((at[1] - self.range_guess) / 1.5) ** 2
        return float(within + between + penalty)
