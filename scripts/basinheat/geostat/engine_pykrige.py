"""Kriging by PyKrige: an independent check of the global engine on small runs.

PyKrige knows no error variance per datum and no shared sources. So it takes every datum as
exact up to the nugget, and does not learn the sources' amplitudes: they keep their prior. It is
still told how they act on the map: kriging weights do not depend on the values, so kriging a
column of loadings gives the loading of the map.
"""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from basinheat.errors import UserError
from basinheat.geostat.data import Modes, as_places, as_values
from basinheat.geostat.models import PRACTICAL_OVER_NATURAL, Covariance
from basinheat.geostat.prediction import Prediction, Target, row_blocks
from basinheat.geostat.threads import one_blas_thread

Array = NDArray[np.float64]

# PyKrige's own parameter over the practical range: e^(-3 h/r), e^(-(7 h / 4 r)^2), h/r
_PARAMETER_OVER_PRACTICAL = {
    "exponential": 3.0 / PRACTICAL_OVER_NATURAL["exponential"],
    "gaussian": 7.0 / 4.0 / PRACTICAL_OVER_NATURAL["gaussian"],
    "spherical": 1.0,
}


def _own_form(covariance: Covariance) -> dict[str, Any]:
    """Return PyKrige's arguments for a model; those it lacks go in as a function."""
    if covariance.model in _PARAMETER_OVER_PRACTICAL:
        numbers = {
            "psill": covariance.sill,
            "range": covariance.range_m * _PARAMETER_OVER_PRACTICAL[covariance.model],
            "nugget": covariance.nugget,
        }
        return {"variogram_model": covariance.model, "variogram_parameters": numbers}

    def function(_: object, distance: ArrayLike) -> Array:
        return covariance.nugget + covariance.sill - covariance.at_distance(np.array(distance))

    return {
        "variogram_model": "custom",
        "variogram_parameters": [],
        "variogram_function": function,
    }


class PyKrigeKriging:
    """Ordinary or universal kriging by PyKrige, with the interface of ``GlobalKriging``.

    Parameters
    ----------
    xy, covariance, error_variance, trend, loadings, prior_mean, prior_covariance
        As for ``GlobalKriging``; ``error_variance`` is not used, ``trend`` is none or linear.

    Notes
    -----
    Holds n x n matrices; for some thousand wells at most. Predictions at a datum's place are
    the datum.
    """

    def __init__(
        self,
        xy: ArrayLike,
        covariance: Covariance,
        error_variance: ArrayLike | None = None,
        trend: str | ArrayLike = "none",
        loadings: ArrayLike | None = None,
        prior_mean: ArrayLike | None = None,
        prior_covariance: ArrayLike | None = None,
    ) -> None:
        if not isinstance(trend, str) or trend not in ("none", "linear"):
            raise UserError("kriging.engine: pykrige takes drift none or linear; choose global")
        del error_variance
        self._xy = as_places(xy)
        self._covariance = covariance
        self._trend = trend
        self._modes = Modes.of(len(self._xy), loadings, prior_mean, prior_covariance)
        if len(np.unique(self._xy, axis=0)) < len(self._xy):
            raise UserError(
                "kriging.engine: pykrige takes one well at a place; choose global, which weighs "
                "wells that share a place by their errors"
            )

    def solve(self, values: ArrayLike) -> PyKrigeKriging:
        """Take the values, shape (n,), of the data; returns itself, ready to predict."""
        data = as_values(values, len(self._xy))
        self._expected = data - self._modes.loadings @ self._modes.mean
        return self

    @one_blas_thread
    def predict(
        self,
        xy0: ArrayLike,
        drift0: None = None,
        block: int | None = None,
        target: Target = "point",
        apart_m: float | None = None,
    ) -> Prediction:
        """Predict the field at places; parameters and result as ``GlobalKriging.predict``."""
        del drift0, apart_m
        places = self._covariance.isotropic(as_places(xy0, "a cell"))
        mean, variance = self._krige(self._expected, places, block)
        if target == "signal":
            variance -= self._covariance.nugget
        columns = [self._krige(column, places, block)[0] for column in self._modes.loadings.T]
        carried = np.array(columns).reshape(-1, len(places)).T
        cross = -carried @ self._modes.covariance
        variance -= np.einsum("ij,ij->i", cross, carried)
        return Prediction(mean, np.maximum(variance, 0.0), cross)

    def amplitudes(self) -> tuple[Array, Array]:
        """Return the prior mean and covariance of the shared amplitudes: none is learned."""
        return self._modes.mean.copy(), self._modes.covariance.copy()

    def _krige(self, values: Array, places: Array, block: int | None) -> tuple[Array, Array]:
        # imported here: it takes a second that no other engine should pay
        from pykrige.ok import OrdinaryKriging
        from pykrige.uk import UniversalKriging

        x, y = self._covariance.isotropic(self._xy).T
        form = _own_form(self._covariance)
        if self._trend == "none":
            engine = OrdinaryKriging(x, y, values, **form)
        else:
            engine = UniversalKriging(x, y, values, drift_terms=["regional_linear"], **form)
        parts = [
            engine.execute("points", *places[rows].T, backend="vectorized")
            for rows in row_blocks(len(places), len(x), block)
        ]
        mean, variance = np.hstack([np.ma.getdata(part) for part in parts])
        return mean, variance
