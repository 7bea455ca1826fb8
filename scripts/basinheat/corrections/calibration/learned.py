"""What a basin's pairs teach of its own correction, and what that says of any reading."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from basinheat.corrections.calibration.ladder import STEPS, Data, Rung, chosen, climb
from basinheat.corrections.calibration.pairs import Anchors, Pairs, Reach, find_pairs
from basinheat.corrections.calibration.robust import Errors
from basinheat.corrections.sets import ReadingSets
from basinheat.corrections.trend import RegionalTrend

Floats = NDArray[np.float64]
Flags = NDArray[np.bool_]

# How fast corrections may go on with depth where nothing was learned (common practice, no source:
# Harrison's parabola and Kehle's cubic rise by 5 to 9 K per km).
SLOPE_K_KM = 6.0
# With fewer single timed readings the times of all sets stand for unknown ones.
_FEW_SINGLE = 10
_MOST_PAIRS = 5000


@dataclass(frozen=True)
class Prediction:
    """What is to be added to the warmest readings.

    Parameters
    ----------
    correction_k, scatter_k : (n,) array, K
        Correction, never below 0, and the scatter of a reading's own about it.
    fit_k : (n, p) array, K
        Loadings on p amplitudes: what the pairs leave open of the fit.
    carried_k : (n, m) array, K
        Loadings on the anchors' own shared sources.
    slope_k : (n,) array, K
        Loading on the slope where no pair tells of it.
    beyond : (n,) array of bool
        Depths above or below those of the pairs.
    """

    correction_k: Floats
    scatter_k: Floats
    fit_k: Floats
    carried_k: Floats
    slope_k: Floats
    beyond: Flags


@dataclass(frozen=True)
class Calibration:
    """Pairs, all steps, and the one that is taken.

    Parameters
    ----------
    anchors : Anchors
        Direct temperatures.
    pairs : Pairs
        All pairs, those of wells held out too.
    rungs : list of Rung
        Every step.
    rung : Rung or None
        The step that is taken.
    circulation_h : float, h
        Circulation time where none is noted.
    carried : (p, m) array
        Change of the coefficients per unit amplitude of the anchors' shared sources.
    sources : dict of str to float, K
        Prior standard deviations of these sources, in the order of the columns.
    """

    anchors: Anchors
    pairs: Pairs
    rungs: list[Rung]
    rung: Rung | None
    circulation_h: float
    carried: Floats
    sources: dict[str, float]

    def data(self, sets: ReadingSets) -> Data:
        """Return depths and times of sets as the steps see them."""
        return _data(sets, self.circulation_h)

    def predict(self, sets: ReadingSets) -> Prediction:
        """Predict the correction of every set by the step that is taken."""
        if self.rung is None or self.rung.found is None:
            raise ValueError("there is no calibration")
        step, found = self.rung.step, self.rung.found
        data = self.data(sets)
        design = step.design(data)
        correction = np.maximum(design @ found.coefficients, 0.0)
        inside = np.clip(sets.depth_m, step.top_m, step.base_m)
        return Prediction(
            correction_k=correction,
            scatter_k=np.hypot(
                self.rung.scatter_k * self.rung.growth(correction),
                step.unknown_time_k(data, found.coefficients),
            ),
            fit_k=design @ np.linalg.cholesky(found.covariance),
            carried_k=design @ self.carried,
            slope_k=SLOPE_K_KM * (sets.depth_m - inside) / 1000.0 + self._slope_inside_k(inside),
            beyond=inside != sets.depth_m,
        )

    def _slope_inside_k(self, depth_m: Floats) -> Floats:
        """Return what a constant may err by with depth, (n,) in K; 0 for other steps.

        Where a line could be fitted and was not better, its slope and the error of that are what
        may have been missed.
        """
        line = self.rungs[STEPS.index("linear")]
        if self.rung is None or self.rung.step.name != "constant":
            return np.zeros(depth_m.size)
        missed = SLOPE_K_KM
        if line.found is not None:
            half_km = max(0.5 * (line.step.base_m - line.step.top_m), 1.0) / 1000.0
            slope, variance = line.found.coefficients[1], line.found.covariance[1, 1]
            missed = min(missed, float(np.sqrt(slope**2 + variance)) / half_km)
        middle = float(np.mean(self.pairs.depth_m[self.pairs.learn]))
        return np.asarray(missed * (depth_m - middle) / 1000.0)


def calibrate(
    sets: ReadingSets,
    anchors: Anchors,
    sources: dict[str, float],
    place_m: Floats,
    trend: RegionalTrend,
    reach: Reach,
    model: str,
    well_share: float,
    circulation_h: float,
) -> Calibration:
    """Learn the basin's own correction.

    Parameters
    ----------
    sets : ReadingSets
        Mud-cooled sets, each carried to one depth.
    anchors : Anchors
        Direct temperatures.
    sources : dict of str to float, K
        Prior standard deviations of the anchors' shared sources, by the columns of their loadings.
    place_m : (wells, 2) array, m
        Places by the number of the well.
    trend : RegionalTrend
        Rise above the surface with depth.
    reach : Reach
        How far apart the two of a pair may be.
    model : str
        A step, or auto.
    well_share : float
        Share of the corrections' scatter that is common to a well.
    circulation_h : float, h
        Circulation time where none is noted.
    """
    pairs = _thinned(find_pairs(sets, anchors, place_m, trend, reach))
    taught = np.flatnonzero(pairs.learn)
    errors = Errors(
        known_k2=pairs.anchor_std_k[taught] ** 2,
        growth=np.ones(taught.size),
        group=pairs.log[taught],
        group_std_k=pairs.log_std_k[taught],
        well=pairs.well[taught],
        well_share=well_share,
    )
    data = _data(sets.take(pairs.index[taught]), circulation_h)
    rungs = climb(data, pairs.correction_k[taught], errors, _usual(sets, circulation_h))
    rung = chosen(rungs, model)
    carried: Floats = np.zeros((0, len(sources)))
    if rung is not None and rung.found is not None:
        weighted = rung.step.design(data) * rung.found.weights[:, None]
        loadings = anchors.shared_k[pairs.anchor[taught]]
        carried = np.asarray(np.linalg.solve(rung.found.normal, weighted.T @ loadings), float)
    return Calibration(anchors, pairs, rungs, rung, circulation_h, carried, sources)


def _thinned(pairs: Pairs) -> Pairs:
    """Let at most five thousand pairs teach, evenly spread over the wells."""
    may = np.flatnonzero(pairs.learn)
    if may.size <= _MOST_PAIRS:
        return pairs
    learn = np.zeros(len(pairs), bool)
    learn[may[np.linspace(0, may.size - 1, _MOST_PAIRS).round().astype(int)]] = True
    return replace(pairs, learn=learn)


def _usual(sets: ReadingSets, circulation_h: float) -> Data:
    """Return the sets whose times stand for unknown ones: single timed readings that may teach.

    A reading without a time is as a rule the only one of its run; the last of several is later.
    """
    timed = sets.learn & (sets.timed > 0)
    single = timed & (sets.count == 1)
    return _data(sets.take(single if single.sum() >= _FEW_SINGLE else timed), circulation_h)


def _data(sets: ReadingSets, circulation_h: float) -> Data:
    noted = np.where(np.isfinite(sets.circulation_h), sets.circulation_h, circulation_h)
    return Data(sets.depth_m, sets.at(sets.since_circulation_h, sets.latest), noted)
