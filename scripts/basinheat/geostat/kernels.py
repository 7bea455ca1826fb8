"""Covariance along a row of places, compiled and without branches inside the loops."""

from __future__ import annotations

import math
from typing import Any

import numba
import numpy as np
from numba.extending import intrinsic
from numpy.typing import NDArray

from basinheat.geostat.compiled import compiled, inlined
from basinheat.geostat.models import MODELS, PRACTICAL_OVER_NATURAL, Covariance

Array = NDArray[np.float64]

_EXPONENTIAL = MODELS.index("exponential")
_GAUSSIAN = MODELS.index("gaussian")
_MATERN15 = MODELS.index("matern15")
_MATERN25 = MODELS.index("matern25")
_SPHERICAL = MODELS.index("spherical")

_LOG2_E = float(np.log2(np.e))
_THIRD = 1.0 / 3.0
# 2^r for |r| <= 1/2: interpolated at Chebyshev's points, relative error 2e-16
_TWO_TO = np.polynomial.chebyshev.Chebyshev.interpolate(np.exp2, 10, domain=[-0.5, 0.5])
_C0, _C1, _C2, _C3, _C4, _C5, _C6, _C7, _C8, _C9, _C10 = (
    float(c) for c in _TWO_TO.convert(kind=np.polynomial.Polynomial).coef
)


# numba's own names, whose types say less than they do
_int32: Any = numba.int32
_int64: Any = numba.int64
_float64: Any = numba.float64


def _read_as_double(_: Any, bits: Any) -> Any:
    """Read the bits of a whole number as those of a double."""

    def generate(context: Any, builder: Any, signature: Any, values: Any) -> Any:
        return builder.bitcast(values[0], context.get_value_type(_float64))

    return _float64(_int64), generate


_as_double: Any = intrinsic(_read_as_double)


@inlined
def exp2_of_negative(x: float) -> float:
    """Return 2^x for x <= 0, to 1e-15 of itself; below 2^-1000 it stays there."""
    bounded = x if x > -1000.0 else -1000.0
    whole = _int32(bounded - 0.5)
    r = bounded - _float64(whole)
    high = _C6 + r * (_C7 + r * (_C8 + r * (_C9 + r * _C10)))
    power = _C0 + r * (_C1 + r * (_C2 + r * (_C3 + r * (_C4 + r * (_C5 + r * high)))))
    return power * _as_double((_int64(whole) + 1023) << 52)


@inlined
def _distance(dx: float, dy: float) -> float:
    return math.sqrt(dx * dx + dy * dy)


@compiled
def covariances(
    row: Array, px: Array, py: Array, x: float, y: float, model: int, scale: float, sill: float
) -> None:
    """Fill a row with the covariance of places (px, py) with the place (x, y).

    Parameters
    ----------
    row, px, py : arrays, shape (n,)
        Written; eastings and northings, in coordinates made isotropic, m.
    x, y : float, m
    model : int
        Place of the model in ``MODELS``.
    scale : float, 1/m
        One over the natural range.
    sill : float, value units squared

    Notes
    -----
    The arrays must be slices from 0 of their own: the compiler vectorises only where it need not
    mind negative indices.
    """
    n = row.shape[0]
    if model == _EXPONENTIAL:
        for i in range(n):
            h = _distance(px[i] - x, py[i] - y) * scale
            row[i] = sill * exp2_of_negative(-_LOG2_E * h)
    elif model == _GAUSSIAN:
        for i in range(n):
            h = _distance(px[i] - x, py[i] - y) * scale
            row[i] = sill * exp2_of_negative(-_LOG2_E * h * h)
    elif model == _MATERN15:
        for i in range(n):
            h = _distance(px[i] - x, py[i] - y) * scale
            row[i] = sill * (1.0 + h) * exp2_of_negative(-_LOG2_E * h)
    elif model == _MATERN25:
        for i in range(n):
            h = _distance(px[i] - x, py[i] - y) * scale
            row[i] = sill * (1.0 + h + h * h * _THIRD) * exp2_of_negative(-_LOG2_E * h)
    elif model == _SPHERICAL:
        for i in range(n):
            h = _distance(px[i] - x, py[i] - y) * scale
            h = h if h < 1.0 else 1.0
            row[i] = sill * (1.0 + h * (0.5 * h * h - 1.5))
    else:
        for i in range(n):
            h = _distance(px[i] - x, py[i] - y) * scale
            h = h if h < 1.0 else 1.0
            q = h * h
            row[i] = sill * (1.0 + q * (h * (8.75 + q * (0.75 * q - 3.5)) - 7.0))


def numbers_of(covariance: Covariance) -> tuple[int, float, float]:
    """Return model, scale and sill as ``covariances`` takes them."""
    natural = PRACTICAL_OVER_NATURAL[covariance.model]
    return MODELS.index(covariance.model), natural / covariance.range_m, covariance.sill
