"""Every method of mud-cooled readings on every set: what each says, kept small."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from basinheat.corrections.method import Context, Flags, Floats, Method, Outcome
from basinheat.corrections.sets import ReadingSets

# A method takes part in the common sets when it treats at least this share of the sets with
# repeated timed readings (no source): one that treats hardly any would leave nothing in common.
COMPARED = 0.25


@dataclass(frozen=True)
class Verdict:
    """What one method says of all sets; numbers are NaN where it does not apply.

    Parameters
    ----------
    method : Method
        The method.
    reason : (sets,) array of int
        As in Outcome: 0 where it applies.
    temperature_degc : (sets,) array, degC
        Formation temperature.
    independent_std_k, well_std_k, shared_std_k : (sets,) array, K
        Parts of its standard uncertainty, before a scale.
    class_names : list of str
        Classes of variance.
    class_code : (sets,) array of int
        Place of each set's class in them.
    """

    method: Method
    reason: NDArray[np.int16]
    temperature_degc: Floats
    independent_std_k: Floats
    well_std_k: Floats
    shared_std_k: Floats
    class_names: list[str]
    class_code: NDArray[np.int16]

    @property
    def applies(self) -> Flags:
        """Return where the method applies, (sets,)."""
        return np.asarray(self.reason == 0)

    @property
    def total_std_k(self) -> Floats:
        """Return the standard uncertainty, all parts, (sets,) in K."""
        parts = self.independent_std_k**2 + self.well_std_k**2 + self.shared_std_k**2
        return np.asarray(np.sqrt(parts))

    def words(self) -> list[str]:
        """Return the reasons in words, by their number."""
        return ["", *self.method.reasons]


def judge_sets(sets: ReadingSets, methods: list[Method], context: Context) -> list[Verdict]:
    """Apply methods to all sets, one after the other; what a method worked with is let go.

    Parameters
    ----------
    sets : ReadingSets
        Sets of one kind, at one depth each.
    methods : list of Method
        Methods of that kind.
    context : Context
        Settings and trend.
    """
    return [_verdict(method, method.estimate(sets, context), sets, context) for method in methods]


def _verdict(method: Method, outcome: Outcome, sets: ReadingSets, context: Context) -> Verdict:
    applies = outcome.reason == 0
    shared = np.zeros(len(sets))
    for loading in outcome.loadings.values():
        shared += loading.values**2
    gradient = context.trend.gradient_k_m(sets.depth_m)
    well = np.hypot(outcome.well_std_k, sets.depth_error_k(gradient))
    names, code = np.unique(outcome.variance_class, return_inverse=True)
    return Verdict(
        method=method,
        reason=outcome.reason.astype(np.int16),
        temperature_degc=np.where(applies, outcome.temperature_degc, np.nan),
        independent_std_k=np.where(applies, outcome.independent_std_k, np.nan),
        well_std_k=np.where(applies, well, np.nan),
        shared_std_k=np.where(applies, np.sqrt(shared), np.nan),
        class_names=[str(name) for name in names],
        class_code=code.ravel().astype(np.int16),
    )


def common_sets(verdicts: list[Verdict], timed: NDArray[np.int64]) -> tuple[list[str], Flags]:
    """Return the compared methods, and the sets that all of them treat.

    Parameters
    ----------
    verdicts : list of Verdict
        Of all methods.
    timed : (sets,) array of int
        Timed readings of each set.

    Returns
    -------
    list of str
        Methods that treat a quarter or more of the sets with repeated timed readings (of all
        sets, where none is repeated).
    (sets,) array of bool
        Sets that each of them treats.
    """
    repeated = timed >= 2
    base = repeated if repeated.any() else np.ones(timed.size, bool)
    compared = [v for v in verdicts if base.any() and v.applies[base].mean() >= COMPARED]
    common = np.full(timed.size, bool(compared))
    for verdict in compared:
        common &= verdict.applies
    return [verdict.method.name for verdict in compared], common
