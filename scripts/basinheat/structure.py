"""The conductivity structure: one covariance per kilometre of depth, and its map."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.geostat import variogram
from basinheat.geostat.engines import engine_class
from basinheat.geostat.models import Covariance
from basinheat.geostat.variogram import Experimental
from basinheat.settings.heat import BelowLayers

Floats = NDArray[np.float64]

LAGS = 12
FEWEST_PAIRS = 30  # common practice for a single lag (Journel & Huijbregts 1978)
UNTOLD = Covariance("matern15", 0.15**2, 50_000.0)  # common practice, no source
LEVELS = (0.5, 4.0)  # leave-one-out may change the fitted level by so much
TOLD = 0.1  # share of their error variance below which values can't have erred independently
GROUP_M = 1000.0  # intervals of a kilometre share one covariance: a quarter of the pairs each
CARRIED = ["heat_production_uw_m3", "reference_temperature_degc", "temperature_slope_per_k"]
BELOW_SLOPE_PER_K = -0.0009  # Vosteen & Schellschmidt (2003), sediments, k 3 W/(m K), near 100 degC
BELOW_REFERENCE_DEGC = 25.0


def fit_structure(
    points: pd.DataFrame, wells_per_interval: int, models: tuple[str, ...]
) -> dict[str, Any]:
    """Fit one covariance of ln k per kilometre of depth, and the correlation down the column.

    The variogram of each interval is measured and pooled within its group; the covariance is
    fitted by weighted least squares and its level set by leave-one-out, because wells cluster and
    boundaries between rocks make neighbours differ more than a smooth model says.

    Parameters
    ----------
    points : DataFrame
        StructurePoints.
    wells_per_interval : int
        Wells an interval needs.
    models : tuple of str
        Covariance models to choose from.

    Returns
    -------
    dict
        variograms/conductivity.json: groups (top_m, base_m, wells, covariance, experimental) and
        vertical_correlation_m.
    """
    groups, errors = [], []
    wells_per_interval = enough(points, wells_per_interval)
    points = points.assign(group=(points["top_m"] // GROUP_M).astype(int))
    edges = _lags(points)
    for _, group in points.groupby("group", sort=True):
        wells = group.groupby("top_m")["well"].transform("size")
        group = group[wells >= wells_per_interval]
        if group.empty:
            continue
        intervals = [_Interval.of(frame) for _, frame in group.groupby("top_m", sort=True)]
        experimental = _pooled([i.experimental(edges) for i in intervals])
        if all(i.assumed for i in intervals):
            # what is not known of the rock at a well is not known between wells either
            covariance, level = _all_nugget(intervals), 1.0
        else:
            covariance = _closest(experimental, models)
            left_out = [i.left_out(covariance) for i in intervals]
            level = _level(np.concatenate(left_out))
            covariance = replace(
                covariance, sill=covariance.sill * level, nugget=covariance.nugget * level
            )
            errors += [
                pd.Series(e / np.sqrt(level), index=i.wells, name=i.top)
                for i, e in zip(intervals, left_out, strict=True)
            ]
        groups.append(
            {
                "top_m": float(group["top_m"].min()),
                "base_m": float(group["base_m"].max()),
                "wells": int(group["well"].nunique()),
                "covariance": covariance.to_dict(),
                "leave_one_out_level": level,
                "experimental": experimental.to_dict(),
            }
        )
    return {
        "quantity": "ln_conductivity",
        "unit": "",
        "groups": groups,
        "vertical_correlation_m": _vertical_length(errors),
    }


@dataclass(frozen=True)
class _Interval:
    """The wells of one depth interval."""

    top: float
    wells: NDArray[np.object_]
    xy: Floats
    value: Floats
    error: Floats

    @classmethod
    def of(cls, frame: pd.DataFrame) -> _Interval:
        return cls(
            float(frame["top_m"].iloc[0]),
            frame["well"].to_numpy(object),
            frame[["easting_m", "northing_m"]].to_numpy(),
            frame["value"].to_numpy(),
            frame["value_std"].to_numpy() ** 2,
        )

    @property
    def assumed(self) -> bool:
        """Whether one rock was assumed for all wells: values far closer than errors allow."""
        return len(self.value) > 1 and self.value.var() < TOLD * self.error.mean()

    def experimental(self, edges: Floats) -> Experimental:
        return variogram.experimental(self.xy, self.value, self.error, bins=edges)

    def left_out(self, covariance: Covariance) -> Floats:
        """Standardised leave-one-out errors."""
        engine = engine_class("auto", len(self.xy))(self.xy, covariance, self.error)
        engine = engine.solve(self.value)
        predicted, variance = engine.leave_one_out()
        return (predicted - self.value) / np.sqrt(variance)


def _lags(points: pd.DataFrame) -> Floats:
    """Lags that all intervals share, up to half the diagonal of the wells."""
    span = np.ptp(points[["easting_m", "northing_m"]].to_numpy(), axis=0) if len(points) else [1, 1]
    return np.linspace(0.0, max(0.5 * float(np.hypot(*span)), 1.0), LAGS + 1)


def _pooled(parts: list[Experimental]) -> Experimental:
    """Average variograms of the same lags, weighted by pairs."""
    lags = np.concatenate([p.lag_m for p in parts])
    gamma = np.concatenate([p.gamma for p in parts])
    pairs = np.concatenate([p.pairs for p in parts]).astype(float)
    order = np.argsort(lags, kind="stable")
    bins = np.array_split(order, max(1, min(LAGS, len(order))))
    weight = [max(pairs[b].sum(), 1.0) for b in bins]
    return Experimental(
        np.array([(lags[b] * pairs[b]).sum() / w for b, w in zip(bins, weight, strict=True)]),
        np.array([(gamma[b] * pairs[b]).sum() / w for b, w in zip(bins, weight, strict=True)]),
        np.array([pairs[b].sum() for b in bins]).astype(np.int64),
    )


def enough(points: pd.DataFrame, wells_per_interval: int) -> int:
    """Return the wells an interval needs; where few wells have layers, all of these suffice."""
    return max(1, min(wells_per_interval, points["well"].nunique()))


def _closest(experimental: Experimental, models: tuple[str, ...]) -> Covariance:
    """Fit every model by weighted least squares (Cressie 1985) and keep the closest.

    Pairs too few to tell anything leave the stated covariance.
    """
    if experimental.pairs.sum() < FEWEST_PAIRS:
        return UNTOLD

    def misfit(covariance: Covariance) -> float:
        fitted = np.maximum(covariance.semivariance(experimental.lag_m), 1e-300)
        return float((experimental.pairs * (experimental.gamma / fitted - 1.0) ** 2).sum())

    return min((variogram.fit_wls(experimental, m) for m in models), key=misfit)


def _all_nugget(intervals: list[_Interval]) -> Covariance:
    """Return the wells' own error variance as that of every place."""
    variance = float(np.mean(np.concatenate([i.error for i in intervals])))
    return replace(UNTOLD, sill=0.0, nugget=variance)


def _level(left_out: Floats) -> float:
    """Mean square of the standardised errors, 1 where no well can be left out."""
    known = left_out[np.isfinite(left_out)]
    return float(np.clip(np.mean(known**2), *LEVELS)) if len(known) else 1.0


def _vertical_length(errors: list[pd.Series]) -> float:
    """Correlation length of the errors down the column, from pairs of intervals of one well."""
    if len(errors) < 2:
        return GROUP_M
    correlation = pd.concat(errors, axis=1).corr(min_periods=8)
    tops = correlation.columns.to_numpy(float)
    upper = np.triu(np.ones(correlation.shape, bool), 1)
    apart = np.abs(tops[:, None] - tops[None, :])[upper]
    rho = correlation.to_numpy()[upper]
    good = np.isfinite(rho) & (apart <= 2 * GROUP_M)
    if not good.any():
        return GROUP_M
    lengths = np.geomspace(50.0, 5000.0, 60)
    misfit = [((rho[good] - np.exp(-apart[good] / length)) ** 2).sum() for length in lengths]
    return float(lengths[int(np.argmin(misfit))])


def krige_conductivity(
    points: pd.DataFrame,
    fitted: dict[str, Any],
    cells: pd.DataFrame,
    interval_m: float,
    deepest_m: float,
    wells_per_interval: int,
    below: BelowLayers,
) -> pd.DataFrame:
    """Krige ln of mean conductivity of each depth interval, with all it depends on.

    Heat production, the temperature slope and the loadings on the lithology sources ride on the
    same weights. Intervals that too few wells reach get the stated rock below the layers, with an
    uncertainty that grows with depth below the last interval with data.

    Returns
    -------
    DataFrame
        StructureGrid, by cell and interval.
    """
    xy = cells[["easting_m", "northing_m"]].to_numpy()
    by_top = dict(tuple(points.groupby("top_m")))
    wells_per_interval = enough(points, wells_per_interval)
    names = sorted(c for c in points.columns if c.startswith("loading_"))
    columns = ["ln_conductivity", *CARRIED, *names, "variance"]
    tops = np.arange(0.0, deepest_m, interval_m)
    # a column apart for each quantity, by cell and interval: no sorting, no second copy
    values = {name: np.empty((len(cells), len(tops))) for name in columns}
    deepest_known = 0.0
    for i, top in enumerate(tops):
        frame = by_top.get(top)
        whole = top + interval_m <= deepest_m
        if frame is not None and len(frame) >= wells_per_interval and whole:
            kriged, variance = _krige_interval(frame, _covariance_at(fitted, top), xy, names)
            deepest_known = top + interval_m
        else:
            kriged, variance = _below(below, top, deepest_known, len(xy), len(names))
        for name, column in zip(columns, [*kriged.T, variance], strict=True):
            values[name][:, i] = column
    n = len(tops)
    return pd.DataFrame(
        {
            "row": np.repeat(cells["row"].to_numpy(), n),
            "col": np.repeat(cells["col"].to_numpy(), n),
            "top_m": np.tile(tops, len(cells)),
            "base_m": np.tile(np.minimum(tops + interval_m, deepest_m), len(cells)),
            **{name: array.ravel() for name, array in values.items()},
        },
        copy=False,
    )


def _covariance_at(fitted: dict[str, Any], top: float) -> Covariance:
    group = next(g for g in fitted["groups"] if g["top_m"] <= top < g["base_m"])
    return Covariance.from_dict(group["covariance"])


def _krige_interval(
    frame: pd.DataFrame, covariance: Covariance, xy: Floats, names: list[str]
) -> tuple[Floats, Floats]:
    """Krige ln k and everything that rides on its weights, for one interval."""
    engine = engine_class("auto", len(frame))(
        frame[["easting_m", "northing_m"]].to_numpy(),
        covariance,
        frame["value_std"].to_numpy() ** 2,
    ).solve(frame["value"].to_numpy())
    prediction = engine.predict(xy)
    carried = engine.carry(frame[[*CARRIED, *names]].to_numpy(), xy)
    values = np.column_stack([prediction.mean, carried])
    values[:, 1] = np.maximum(values[:, 1], 0.0)
    return values, prediction.variance


def _below(
    below: BelowLayers, top: float, deepest_known: float, n_cells: int, n_loadings: int
) -> tuple[Floats, Floats]:
    """Rock below the layers: stated conductivity, and doubt that grows with depth."""
    std = below.std_ln + below.growth_ln_per_km * (top - deepest_known) / 1000.0
    row = [
        np.log(below.conductivity_w_mk),
        below.heat_production_uw_m3,
        BELOW_REFERENCE_DEGC,
        BELOW_SLOPE_PER_K,
        *[0.0] * n_loadings,
    ]
    return np.tile(row, (n_cells, 1)), np.full(n_cells, std**2)
