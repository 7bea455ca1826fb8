"""Kriging with every datum at once: own error variances, drift, and shared error sources."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from basinheat.geostat.data import Modes, as_error_variance, as_places, as_values, dependent
from basinheat.geostat.drift import Drift
from basinheat.geostat.gls import NotPositiveDefiniteError, deviance, factorise, left_out
from basinheat.geostat.models import Covariance
from basinheat.geostat.prediction import Prediction, Target, row_blocks
from basinheat.geostat.threads import one_blas_thread, run_tasks

Array = NDArray[np.float64]
Part = Callable[[slice], tuple[Array, Array]]  # covariances of some cells with the data, and drift

ALL_DATA = 600  # data up to which the variance rests on all of them: beyond, n^2 a place is slow
NEAREST = 64  # data that every place then sees at least
THREADED = 20_000_000_000  # data^2 x places from which a second block in memory is worth it
COMPILED = 1_000_000_000  # data x places from which compiled loops repay loading the compiler


class GlobalKriging:
    """Kriging of y = f beta + Z + micro-scale + H a + e, all data in one system.

    beta is unknown, Z has the structured covariance, e the given variances, and the amplitudes
    a ~ N(prior_mean, prior_covariance) are shared by all data through the loadings H. With
    K = C + nugget I + diag(error_variance) + H S H^T there is one Cholesky for everything.

    Parameters
    ----------
    xy : array, shape (n, 2), m
        Easting, northing.
    covariance : Covariance
        Structured covariance and micro-scale nugget.
    error_variance : array, shape (n,), value units squared, optional
        Independent error of each datum; filtered, never in the map's variance. Default 0.
    trend : {"none", "linear"} or array, shape (n, p)
        Drift beside the constant: none, the coordinates, or covariates at the data.
    loadings : array, shape (n, m), value units, optional
        Change of each datum per unit amplitude of each shared source.
    prior_mean, prior_covariance : arrays, shapes (m,) and (m, m), optional
        Of the amplitudes; default independent and unit normal.

    Raises
    ------
    UserError
        When data are missing, or determine one another exactly.

    References
    ----------
    Chiles & Delfiner (2012), Geostatistics, 2nd ed., sections 3.4 and 3.7.1. Dubrule (1983),
    Mathematical Geology 15, 687-699 (leave-one-out).

    Examples
    --------
    >>> kriging = GlobalKriging([[0, 0], [1000, 0]], Covariance("exponential", 9.0, 3000.0))
    >>> float(kriging.solve([1.0, 3.0]).predict([[500, 0]]).mean[0].round(9))
    2.0
    """

    @one_blas_thread
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
        self._xy = as_places(xy)
        self._covariance = covariance
        self._trend = trend
        self._modes = Modes.of(len(self._xy), loadings, prior_mean, prior_covariance)
        self._drift, drift_matrix = Drift.of(self._xy, trend)
        self._drift_matrix = drift_matrix
        self._noise = covariance.nugget + as_error_variance(error_variance, len(self._xy))
        matrix = covariance.between(self._xy, self._xy)
        matrix[np.diag_indices_from(matrix)] += self._noise
        matrix += self._modes.covariance_of_data()
        try:
            self._factor = factorise(matrix, drift_matrix)
        except NotPositiveDefiniteError as fault:
            raise dependent(self._xy, fault.row) from None
        shared = self._factor.whiten(self._modes.loadings @ self._modes.covariance)
        self._shared = self._factor.remove_drift(shared)
        self._shared_beta = self._factor.coefficients(shared)
        self._values: Array | None = None

    @one_blas_thread
    def solve(self, values: ArrayLike) -> GlobalKriging:
        """Take the values, shape (n,), of the data; returns itself, ready to predict."""
        self._values = as_values(values, len(self._xy))
        self._expected = self._values - self._modes.loadings @ self._modes.mean
        white = self._factor.whiten(self._expected[:, None])
        self._residual = self._factor.remove_drift(white)
        self._beta = self._factor.coefficients(white)[:, 0]
        self._dual = self._factor.unwhiten(self._residual)[:, 0]
        return self

    @one_blas_thread
    def predict(
        self,
        xy0: ArrayLike,
        drift0: ArrayLike | None = None,
        block: int | None = None,
        target: Target = "point",
        nearest: int | None = None,
        apart_m: float | None = None,
    ) -> Prediction:
        """Predict the field at places.

        Parameters
        ----------
        xy0 : array, shape (cells, 2), m
            Easting, northing.
        drift0 : array, shape (cells, p), optional
            Covariates there, when the drift has any.
        block : int, optional
            Cells at a time; the default holds 32 MB, whatever the grid.
        target : {"point", "signal"}
            With the micro-scale nugget in the variance, or the smooth part only.
        nearest : int, optional
            Take the variance from the data around each place, so many at least, as
            ``TileKriging`` does; by default from all data up to 600 of them. Mean and sources
            always rest on all data.
        apart_m : float, m, optional
            Taken for ``TileKriging``'s sake; nothing here depends on it.

        Returns
        -------
        Prediction
            The mean by dual weights, the variance by triangular solves. At a datum's place the
            datum is filtered: its micro-scale part is not passed on (see ``at_data``).
        """
        del apart_m
        places = as_places(xy0, "a cell")
        drift = self._drift.matrix(places, drift0)

        def part(rows: slice) -> tuple[Array, Array]:
            return self._covariance.between(places[rows], self._xy), drift[rows]

        micro = self._covariance.nugget if target == "point" else 0.0
        if nearest is None:
            nearest = 0 if len(self._xy) <= ALL_DATA else NEAREST
        if not nearest:
            return self._predict(part, len(places), block, self._covariance.sill + micro)
        if len(places) * len(self._xy) < COMPILED:
            prediction = self._predict(part, len(places), block, None)
        else:
            prediction = self._predict_compiled(places, drift)
        return replace(prediction, variance=micro + self._near(places, drift0, nearest))

    def _predict_compiled(self, places: Array, drift: Array) -> Prediction:
        """Predict as ``_predict`` without variance, and without a block of data and places."""
        from basinheat.geostat.dual_kernel import covariance_times

        self._need_values()
        duals = np.column_stack([self._dual, self._factor.unwhiten(self._shared)])
        told = covariance_times(self._covariance, places, self._xy, duals)
        cross = -(drift @ self._shared_beta + told[:, 1:])
        return Prediction(drift @ self._beta + told[:, 0], np.zeros(len(places)), cross)

    def _near(self, places: Array, drift0: ArrayLike | None, nearest: int) -> Array:
        """Return the variance as the data around each tile of places tell it."""
        from basinheat.geostat.engine_tiles import TileKriging

        tiles = TileKriging(
            *(self._xy, self._covariance, self._noise - self._covariance.nugget, self._trend),
            *(self._modes.loadings, self._modes.mean, self._modes.covariance),
            nearest=nearest,
        )
        return tiles.solve(self._need_values()).predict(places, drift0, target="signal").variance

    @one_blas_thread
    def at_data(self, block: int | None = None) -> Prediction:
        """Predict the field at the data's own places, each datum's micro-scale part included."""

        def part(rows: slice) -> tuple[Array, Array]:
            covariance = self._covariance.between(self._xy[rows], self._xy)
            index = np.arange(*rows.indices(len(self._xy)))
            covariance[index - rows.start, index] += self._covariance.nugget
            return covariance, self._drift_matrix[rows]

        n = len(self._xy)
        own = self._covariance.sill + self._covariance.nugget
        return self._predict(part, n, block, own)

    def amplitudes(self) -> tuple[Array, Array]:
        """Return the posterior mean (m,) and covariance (m, m) of the shared amplitudes."""
        self._need_values()
        mean = self._modes.mean + (self._shared.T @ self._residual)[:, 0]
        covariance = self._modes.covariance - self._shared.T @ self._shared
        return mean, 0.5 * (covariance + covariance.T)

    def coefficients(self) -> tuple[Array, Array]:
        """Return the drift's coefficients (p,) and their covariance (p, p), covariates as given."""
        self._need_values()
        turn = self._drift.to_raw @ self._factor.solve_triangle(np.eye(len(self._beta))).T
        return self._drift.to_raw @ self._beta, turn @ turn.T

    def deviance(self, constants: bool = True) -> float:
        """Return -2 log restricted likelihood of the values.

        ln|K| + ln|F^T K^-1 F| + y^T P y, and (n - p) ln 2 pi with ``constants``; F holds the
        covariates as given, and ln|F^T F| is left out.
        """
        self._need_values()
        n, p = self._factor.basis.shape
        raw = 2.0 * float(np.log(self._drift.scale).sum())
        value = deviance(self._factor, self._expected) + raw
        return value + (n - p) * float(np.log(2.0 * np.pi)) if constants else value

    def leave_one_out(self) -> tuple[Array, Array]:
        """Return each datum as the others predict it, and the variance of datum less prediction.

        Closed form, parameters kept; the variance holds the datum's own error, its micro-scale
        and shared part. NaN and infinite where the others cannot tell the drift.
        """
        return self.leave_block_out(np.arange(len(self._xy)))

    @one_blas_thread
    def leave_block_out(self, labels: ArrayLike) -> tuple[Array, Array]:
        """Return each datum as the data of other labels predict it, and the variance of both.

        Parameters
        ----------
        labels : array, shape (n,)
            Data of one label are left out together.

        Returns
        -------
        predicted, variance : arrays, shape (n,)
            As ``leave_one_out``; with Q = K^-1 less its drift part, the residuals of a block are
            Q_II^-1 (Q y)_I and their covariance Q_II^-1.
        """
        values = self._need_values()
        residual, variance = left_out(self._factor, self._dual, np.asarray(labels))
        return values - residual, variance

    @one_blas_thread
    def weights(self, xy0: ArrayLike, drift0: ArrayLike | None = None) -> Array:
        """Return the kriging weights (cells, n) of the data; they sum to 1 in each cell."""
        places = as_places(xy0, "a cell")
        white = self._factor.whiten(self._covariance.between(self._xy, places))
        drift = self._factor.solve_triangle(self._drift.matrix(places, drift0).T)
        white = self._factor.remove_drift(white) + self._factor.basis @ drift
        return self._factor.unwhiten(white).T

    @one_blas_thread
    def carry(self, columns: ArrayLike, xy0: ArrayLike, block: int | None = None) -> Array:
        """Return further columns of the data, (n, r), carried to places on the same weights.

        What rides with a value (its loadings, say) must be interpolated as the value is; the
        weights do not depend on the values, and dual weights make each column one product.
        """
        places = as_places(xy0, "a cell")
        drift = self._drift.matrix(places, None)
        white = self._factor.whiten(np.asfortranarray(columns, float))
        beta = self._factor.coefficients(white)
        duals = self._factor.unwhiten(self._factor.remove_drift(white))
        carried = np.empty((len(places), white.shape[1]))
        for rows in row_blocks(len(places), len(self._xy), block):
            carried[rows] = self._covariance.between(places[rows], self._xy) @ duals
            carried[rows] += drift[rows] @ beta
        return carried

    def _need_values(self) -> Array:
        if self._values is None:
            raise ValueError("call solve(values) first")
        return self._values

    def _predict(self, part: Part, cells: int, block: int | None, own: float | None) -> Prediction:
        """Predict block by block; without ``own``, the prior variance, the variance stays 0."""
        self._need_values()
        m = self._modes.mean.size
        told = Prediction(np.empty(cells), np.zeros(cells), np.empty((cells, m)))
        duals = np.column_stack([self._dual, self._factor.unwhiten(self._shared)])
        blocks = list(row_blocks(cells, len(self._xy), block))

        def some(first: int, step: int) -> None:
            for rows in blocks[first::step]:
                self._predict_block(rows, *part(rows), duals, own, told)

        if cells * len(self._xy) ** 2 < THREADED:
            some(0, 1)
        else:
            run_tasks(some, len(blocks))
        return replace(told, variance=np.maximum(told.variance, 0.0))

    def _predict_block(
        self,
        rows: slice,
        covariance: Array,
        drift: Array,
        duals: Array,
        own: float | None,
        told: Prediction,
    ) -> None:
        """Write what is told of some cells; their covariance with the data is overwritten."""
        sums = covariance @ duals
        told.mean[rows] = drift @ self._beta + sums[:, 0]
        # the loadings (times S) carried with the same weights as the values
        told.cross[rows] = -(drift @ self._shared_beta + sums[:, 1:])
        if own is None:
            return
        # C order of (cells, n) is Fortran order of its transpose: solved in place
        white = self._factor.whiten(covariance.T, overwrite=True)
        explained = np.einsum("ij,ij->j", white, white)
        open_drift = self._factor.solve_triangle(drift.T) - self._factor.basis.T @ white
        told.variance[rows] = own - explained + np.einsum("ij,ij->j", open_drift, open_drift)
