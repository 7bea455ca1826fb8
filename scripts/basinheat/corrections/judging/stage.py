"""Judge the correction methods: the stage behind the rule compare_corrections."""

from __future__ import annotations

import logging
from collections.abc import Iterable, Iterator
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

import numpy as np
import pandas as pd

from basinheat.corrections.judging import comparison, intercepts, sigmas
from basinheat.corrections.judging.verdicts import Verdict, judge_sets
from basinheat.corrections.registry import METHODS
from basinheat.corrections.stage import Basis, prepare

if TYPE_CHECKING:
    from basinheat.settings.heat import Correction

log = logging.getLogger(__name__)


@dataclass(frozen=True)
class Fitted:
    """What the joint fit left: tables of these names, and the record of heat flow's variogram."""

    estimates: pd.DataFrame
    temperatures: pd.DataFrame
    resistances: pd.DataFrame
    sources: pd.DataFrame
    source_covariance: pd.DataFrame
    variogram: dict[str, Any]


@dataclass(frozen=True)
class Judgement:
    """Tables by the contracts CorrectionSummary, AnchorDifferences, Intercepts, MethodSigmas.

    ``comparison`` yields CorrectionComparison one method at a time: whole, it may be too long.
    """

    described: pd.DataFrame
    verdicts: list[Verdict]
    summary: pd.DataFrame
    anchors: pd.DataFrame
    intercepts: pd.DataFrame
    sigmas: pd.DataFrame

    @property
    def comparison(self) -> Iterator[pd.DataFrame]:
        """Yield the rows of one method after the other."""
        return comparison.side_by_side(self.described, self.verdicts)


def judge(
    readings: pd.DataFrame,
    wells: pd.DataFrame,
    fitted: Fitted,
    settings: Correction,
    holdout: Iterable[str] = (),
    surface_shared_std_k: float = 0.7,
) -> Judgement:
    """Apply every method to every mud-cooled set and judge what each says.

    Parameters
    ----------
    readings, wells, settings, holdout, surface_shared_std_k
        As for ``corrections.correct``.
    fitted : Fitted
        What became of the methods of ``correction.order``.

    Returns
    -------
    Judgement
        Each set and method once.
    """
    basis = _with_mud_cooled(prepare(readings, wells, settings, holdout, surface_shared_std_k))
    described = comparison.describe_sets(basis, fitted.estimates, fitted.temperatures)
    sets = basis.sets["bht"]
    methods = [method for method in METHODS.values() if method.kind == "bht" and len(sets)]
    verdicts = judge_sets(sets, methods, basis.context)
    ground = intercepts.lay_ground(
        fitted.estimates, fitted.resistances, wells, fitted.sources, fitted.source_covariance
    )
    judged = Judgement(
        described=described,
        verdicts=verdicts,
        summary=comparison.summarise(described, verdicts),
        anchors=comparison.against_anchors(basis, described, verdicts),
        intercepts=intercepts.intercepts(
            ground, described, verdicts, fitted.estimates, fitted.temperatures
        ),
        sigmas=sigmas.method_sigmas(
            verdicts,
            fitted.estimates,
            fitted.temperatures,
            fitted.variogram["variance_scales"],
            settings.order,
        ),
    )
    for row in judged.sigmas.itertuples():
        if row.verdict:
            log.warning("%s (%s): %s", row.method, row.variance_class, row.verdict)
    return judged


def _with_mud_cooled(basis: Basis) -> Basis:
    """Return the basis with a set of no readings where no reading is mud-cooled."""
    if "bht" in basis.sets:
        return basis
    none = next(iter(basis.sets.values())).take(np.zeros(0, np.int64))
    return replace(basis, sets={**basis.sets, "bht": none})
