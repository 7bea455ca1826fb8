"""The first method of an order that applies to each set."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from basinheat.corrections.method import Context, Floats, Loading, Method, Outcome
from basinheat.corrections.sets import ReadingSets

Ints = NDArray[np.int64]
# METHODS Q21 (common practice): a correction beyond this share of the rise above the surface.
_LARGE, LARGE = 0.5, "correction_above_half_of_rise"
# Two sets further apart are never one place.
_WELL_STRIDE_M = 1.0e6


@dataclass(frozen=True)
class Choice:
    """What the chosen methods say of sets of one kind.

    Parameters
    ----------
    rank : (sets,) array of int
        Place of the chosen method in the order, -1 for none.
    temperature_degc, independent_std_k, well_std_k : (sets,) array
        As in Outcome.
    variance_class, passed_over, flags : (sets,) array of text
        Class of variance, why earlier methods did not apply, what was assumed.
    loadings : dict of str to Loading
        Shared sources, 0 where another method was chosen.
    learned : dict
        By method, what was learned.
    outcomes : dict of int to Outcome
        By place in the order, all that a method said; methods that were not asked are absent.
    """

    rank: Ints
    temperature_degc: Floats
    independent_std_k: Floats
    well_std_k: Floats
    variance_class: NDArray[np.object_]
    passed_over: NDArray[np.object_]
    flags: NDArray[np.object_]
    loadings: dict[str, Loading]
    learned: dict[str, dict[str, object]]
    outcomes: dict[int, Outcome]


def choose(sets: ReadingSets, kind: str, order: list[Method], context: Context) -> Choice:
    """Apply the methods of an order to sets of one kind and keep the first that holds.

    Parameters
    ----------
    sets : ReadingSets
        Sets of one kind.
    kind : str
        Their kind.
    order : list of Method
        Methods, the preferred first.
    context : Context
        Settings and trend.

    Returns
    -------
    Choice
        One row per set.
    """
    rank = np.full(len(sets), -1, np.int64)
    # Methods of another kind of reading say nothing of these sets, and nothing is said of them.
    reason = np.zeros((len(sets), len(order)), np.int64)
    outcomes: dict[int, Outcome] = {}
    for place, method in enumerate(order):
        if method.kind != kind or len(sets) == 0 or (rank >= 0).all():
            continue
        outcomes[place] = outcome = method.estimate(sets, context)
        reason[:, place] = outcome.reason
        rank[(rank < 0) & (outcome.reason == 0)] = place
    return _merge(sets, order, rank, reason, outcomes)


def _merge(
    sets: ReadingSets, order: list[Method], rank: Ints, reason: Ints, outcomes: dict[int, Outcome]
) -> Choice:
    numbers = {
        name: np.full(len(sets), np.nan)
        for name in ("temperature_degc", "independent_std_k", "well_std_k")
    }
    classes = np.full(len(sets), "", object)
    raised: dict[str, NDArray[np.bool_]] = {}
    loadings: dict[str, Loading] = {}
    for place, outcome in outcomes.items():
        rows = rank == place
        for name, values in numbers.items():
            values[rows] = getattr(outcome, name)[rows]
        classes[rows] = outcome.variance_class[rows]
        for source, loading in outcome.loadings.items():
            own = np.where(rows, loading.values, 0.0)
            if source in loadings:
                own = own + loadings[source].values
            if np.any(own != 0.0):
                loadings[source] = Loading(own, loading.prior_std, loading.unit)
        for flag, here in outcome.flags.items():
            raised[flag] = raised.get(flag, np.zeros(len(sets), bool)) | (rows & here)
    learned = {order[place].name: o.learned for place, o in outcomes.items() if o.learned}
    return Choice(
        rank=rank,
        variance_class=classes,
        flags=_joined(raised | {LARGE: _large(sets, numbers["temperature_degc"])}, len(sets)),
        loadings=loadings,
        learned=learned,
        outcomes=outcomes,
        passed_over=_passed_over(order, rank, reason),
        **numbers,
    )


def _large(sets: ReadingSets, temperature: Floats) -> NDArray[np.bool_]:
    """Tell which corrections are larger than the half of the rise above the surface."""
    with np.errstate(invalid="ignore"):
        rise = temperature - sets.surface_temperature_degc
        return np.asarray(temperature - sets.warmest_degc > _LARGE * rise)


def _joined(raised: dict[str, NDArray[np.bool_]], n: int) -> NDArray[np.object_]:
    """Return the names of the flags of each of n sets, sorted and joined."""
    out = np.full(n, "", object)
    for name in sorted(raised):
        here = raised[name]
        out[here] += np.where(out[here] == "", name, ";" + name)
    return out


def _passed_over(order: list[Method], rank: Ints, reason: Ints) -> NDArray[np.object_]:
    """Return why the methods before the chosen one did not apply, in words."""
    before = np.arange(len(order)) < np.where(rank < 0, len(order), rank)[:, None]
    said, inverse = np.unique(np.where(before, reason, 0), axis=0, return_inverse=True)
    texts = [
        ";".join(
            _sentence(method, int(code))
            for method, code in zip(order, row, strict=True)
            if code != 0
        )
        for row in said
    ]
    return np.array(texts, dtype=object)[inverse.ravel()]


def _sentence(method: Method, code: int) -> str:
    return f"{method.name}: {method.reasons[code - 1]}"


def counts(well: Ints, depth_m: Floats, kind: Ints, rank: Ints, near_m: float) -> NDArray[np.bool_]:
    """Return the sets that count: of different kinds at one place only the preferred one.

    Parameters
    ----------
    well, kind : (sets,) array of int
        Well and kind.
    depth_m : (sets,) array, m
        Depth.
    rank : (sets,) array of int
        Place of the method in the order.
    near_m : float, m
        Sets of one well closer than this lie at one place.

    Examples
    --------
    >>> import numpy as np
    >>> counts(
    ...     np.array([0, 0, 0]),
    ...     np.array([900.0, 905.0, 1500.0]),
    ...     np.array([0, 1, 0]),
    ...     np.array([3, 1, 3]),
    ...     15.0,
    ... )
    array([False,  True,  True])
    """
    key = well * _WELL_STRIDE_M + depth_m
    used = np.zeros(well.size, bool)
    for place in np.unique(rank):
        rows = np.flatnonzero(rank == place)
        taken = np.zeros(rows.size, bool)
        for other in np.unique(kind[used]):
            better = np.sort(key[used & (kind == other)])
            right = np.searchsorted(better, key[rows])
            gap = np.minimum(
                np.abs(key[rows] - better[np.minimum(right, better.size - 1)]),
                np.abs(key[rows] - better[np.maximum(right - 1, 0)]),
            )
            taken |= (gap < near_m) & (kind[rows] != other)
        used[rows[~taken]] = True
    return used
