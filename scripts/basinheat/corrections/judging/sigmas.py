"""How unsure every correction method is: its parts of sigma, what the fit made of them, sources."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import Any

import numpy as np
import pandas as pd

from basinheat import tables
from basinheat.corrections.judging.verdicts import Verdict
from basinheat.corrections.method import Method
from basinheat.corrections.registry import METHODS

# Outside, the stated variance is worth a sentence (common practice, no source).
ORDINARY = (0.5, 2.0)
_PARTS = ["temperature_std_k", "well_std_k", "shared_std_k"]


def method_sigmas(
    verdicts: list[Verdict],
    estimates: pd.DataFrame,
    temperatures: pd.DataFrame,
    scales: dict[str, float],
    order: Iterable[str],
) -> pd.DataFrame:
    """Return one row per method and class of variance, by the contract MethodSigmas.

    Parameters
    ----------
    verdicts : list of Verdict
        Of methods for mud-cooled sets: medians are over all sets a method treats.
    estimates, temperatures : DataFrame
        Tables of these names; other methods' medians are over their estimates.
    scales : dict of str to float
        By class of variance, the factor that the joint fit found.
    order : iterable of str
        ``correction.order``.
    """
    judged = {verdict.method.name: verdict for verdict in verdicts}
    used = temperatures.groupby(["method", "variance_class"]).size().to_dict()
    named, rows = set(order), []
    for name, method in METHODS.items():
        parts = list(
            _of_verdict(judged[name]) if name in judged else _of_estimates(estimates, name)
        )
        for kind, medians in parts or [("", {})]:
            scale = scales.get(kind, np.nan) if used.get((name, kind)) else np.nan
            rows.append(
                _about(method)
                | medians
                | {
                    "in_order": name in named,
                    "variance_class": kind,
                    "n_estimates": used.get((name, kind), 0),
                    "scale": scale,
                    "verdict": _verdict(scale),
                }
            )
    return tables.MethodSigmas.conform(pd.DataFrame(rows))


def _of_verdict(verdict: Verdict) -> Iterator[tuple[str, dict[str, float]]]:
    """Yield class and medians over all sets that a method can treat."""
    for code, kind in enumerate(verdict.class_names):
        rows = verdict.applies & (verdict.class_code == code)
        if rows.any():
            values = (verdict.independent_std_k, verdict.well_std_k, verdict.shared_std_k)
            yield kind, dict(zip(_PARTS, (np.median(v[rows]) for v in values), strict=True))


def _of_estimates(estimates: pd.DataFrame, name: str) -> Iterator[tuple[str, dict[str, float]]]:
    """Yield class and medians over the estimates of a method for readings of another kind."""
    own = estimates[estimates["method"] == name]
    for kind, part in own.groupby("variance_class", sort=True):
        yield str(kind), {name: float(part[name].median()) for name in _PARTS}


def _about(method: Method) -> dict[str, Any]:
    """Return what is known of a method without data."""
    reference, uncertainty = method.reference, method.uncertainty
    return {
        "method": method.name,
        "title": method.title,
        "kind": method.kind,
        "known_bias": uncertainty.known_bias,
        "stated_total_k": uncertainty.total_k,
        "stated_shared_k": uncertainty.shared_k,
        "source": uncertainty.source,
        "reference": f"{reference.author} ({reference.year}), {reference.title}",
        "status": reference.status,
        "validity": method.validity,
        "regions": ";".join(sorted(method.regions)),
        "top_m": method.depth_range_m[0],
        "base_m": method.depth_range_m[1],
    }


def _verdict(scale: float) -> str:
    """Say what a scale far from one means."""
    if not np.isfinite(scale) or ORDINARY[0] <= scale <= ORDINARY[1]:
        return ""
    word = "more" if scale > 1.0 else "less"
    return (
        f"these temperatures scatter {word} among their neighbours than stated: σ is "
        f"{np.sqrt(scale):.2g} times what the method says, and the maps use that"
    )
