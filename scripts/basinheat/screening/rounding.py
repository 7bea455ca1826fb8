"""Rounding of temperatures: the step they were written in, and files that round to 5 or 10."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.flags import mark
from basinheat.settings.wells import Screening
from basinheat.units import conversion

Array = NDArray[np.float64]

COARSE = (10, 5)  # steps people round to, the coarsest first
FEWEST_READINGS = 30  # fewer tell no habit from chance
KINDS = ("bht", "dst")  # read by eye off a thermometer; a logging tool writes decimals


@dataclass(frozen=True)
class Heaped:
    """A file in which more values end in 0 or 5 than chance would have.

    Parameters
    ----------
    source_file, unit : str
        File, and the unit its temperatures are written in.
    step : int
        What was rounded to, in that unit.
    whole, ending : int
        Values without decimals, and those of them that may have been rounded to the step.
    score : float
        Standard deviations above chance.
    """

    source_file: str
    unit: str
    step: int
    whole: int
    ending: int
    score: float


def heaping_score(ending: Array, whole: Array, share: float) -> Array:
    """Return how many standard deviations a count lies above its share of all.

    z = (n_ending - p n) / sqrt(p (1 - p) n), with p = 0.2 for values that end in 0 or 5.

    Parameters
    ----------
    ending, whole : ndarray
        Values with the ending, all values.
    share : float
        Share that chance would have.

    References
    ----------
    Binomial test in its normal limit; the rule is METHODS K, Q08 (common practice).

    Examples
    --------
    >>> round(float(heaping_score(60.0, 150.0, 0.2)), 2)
    6.12
    """
    return (ending - share * whole) / np.sqrt(share * (1.0 - share) * whole)


def widen_rounded(frame: pd.DataFrame, rules: Screening, std_k: float) -> list[Heaped]:
    """Widen the uncertainty of readings in files that round, and give all their ``step_k``.

    Of a file that rounds, only the multiples of its step can have been rounded. An even spread
    over a step s has the standard deviation s / sqrt(12), which is added in quadrature.

    Parameters
    ----------
    frame : DataFrame
        Readings with ``as_written:temperature, unit:temperature, source_file, kind``. Gains
        ``step_k``, the step a reading was rounded to, in K.
    rules : Screening
        ``heaping_score``.
    std_k : float
        Standard uncertainty of a reading that states none, K.

    Returns
    -------
    list of Heaped
        The files that round.
    """
    written, digits, scale = _as_written(frame)
    frame["step_k"] = scale * 10.0**-digits
    whole = frame["kind"].isin(KINDS).to_numpy() & (written == np.round(written))
    group = frame.groupby(["source_file", "unit:temperature"], sort=True)
    number, names = group.ngroup().to_numpy(), list(group.groups)
    tens, fives = whole & (written % 10 == 0.0), whole & (written % 10 == 5.0)
    counts = (np.bincount(number[rows], minlength=len(names)) for rows in (whole, tens, fives))
    score = dict(zip(COARSE, _scores(*(n.astype(float) for n in counts)), strict=True))
    enough = np.bincount(number[whole], minlength=len(names)) >= FEWEST_READINGS
    found, step = [], np.zeros(len(frame))
    for coarse, multiple in zip(COARSE, (tens, tens | fives), strict=True):
        heaped = enough & (score[coarse] > rules.heaping_score)
        multiple = multiple & heaped[number] & (step == 0.0)
        step[multiple] = coarse
        found += [
            Heaped(
                *names[i],
                coarse,
                int((whole & (number == i)).sum()),
                int((multiple & (number == i)).sum()),
                float(score[coarse][i]),
            )
            for i in np.flatnonzero(heaped)
        ]
    rounded = step > 0.0
    frame["step_k"] = np.where(rounded, step * scale, frame["step_k"])
    stated = frame["temperature_std"].to_numpy(float)
    base_k = np.where(np.isfinite(stated), stated, std_k)
    wider = np.hypot(base_k, frame["step_k"].to_numpy() / np.sqrt(12.0))
    frame["temperature_std"] = np.where(rounded, wider, stated)
    for coarse in COARSE:
        mark(frame, step == coarse, f"rounded_to_{coarse}")
    return found


def _scores(whole: Array, tens: Array, fives: Array) -> tuple[Array, Array]:
    """Return the scores of rounding to 10 and to 5, -inf where there is nothing to count."""
    with np.errstate(divide="ignore", invalid="ignore"):
        # Tens must stand out among the fives too, else every file of fives rounds to ten; and
        # where they do, the odd fives have to stand out among what is left.
        ten = np.minimum(heaping_score(tens, whole, 0.1), heaping_score(tens, tens + fives, 0.5))
        five = np.where(
            ten > 3.0,
            heaping_score(fives, whole - tens, 1.0 / 9.0),
            heaping_score(tens + fives, whole, 0.2),
        )
    return np.nan_to_num(ten, nan=-np.inf), np.nan_to_num(five, nan=-np.inf)


def _as_written(frame: pd.DataFrame) -> tuple[Array, Array, Array]:
    """Return numbers as written, their decimals, and kelvin per unit."""
    units = {unit: conversion(unit, "degC") for unit in frame["unit:temperature"].unique()}
    scale, offset = (
        frame["unit:temperature"]
        .map({unit: both[part] for unit, both in units.items()})
        .astype(float)
        for part in (0, 1)
    )
    number = ((frame["temperature"] - offset) / scale).to_numpy(float).round(6)
    # Few different texts fill millions of cells.
    codes, texts = pd.factorize(frame["as_written:temperature"])
    behind = pd.Series(texts, dtype="str").str.extract(r"[.,](\d+)\D*$")[0].fillna("")
    if not len(texts):
        return number, np.zeros(len(number)), scale.to_numpy(float)
    decimals = behind.str.len().to_numpy(float)[codes]
    # Digits behind a mark that are no part of the number stand for thousands.
    zeros = (behind.str.strip("0") == "").to_numpy(bool)[codes]
    decimals[(number == np.round(number)) & ~zeros] = 0.0
    return number, decimals, scale.to_numpy(float)
