"""Facts of the columns of one file: how full, what range, how rounded, which words."""

from __future__ import annotations

from heapq import nsmallest
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.units import conversion

Array = NDArray[np.float64]

STEPS = (100.0, 50.0, 10.0, 5.0, 1.0, 0.5, 0.1)
NEARLY_ALL = 0.95
HEAP = 0.3  # share of the values at a multiple that is more than chance, with three times its due
FEWEST = 10  # values from which rounding and heaps are told
# Numbers that stand for nothing in tables of wells (common practice).
STAND_INS = (-1.0, -99.0, -999.0, -9999.0, 99.0, 999.0, 999.25, 9999.0, 99999.0, 999999.0)


def number_facts(
    frame: pd.DataFrame, name: str, unit: str, written_unit: str | None
) -> dict[str, Any]:
    """Return what is to be told of a column of numbers.

    Parameters
    ----------
    frame : DataFrame, (n,)
        Rows of the file with ``<name>``, ``wrong:<name>`` and ``as_written:<name>``.
    name : str
        Canonical column.
    unit, written_unit : str
        Its unit in the tables, and in the file; None where each row has its own.

    Returns
    -------
    dict
        ``missing, wrong`` (rows), ``low, middle, high`` (canonical unit), ``as_written`` (the
        cells of these three), ``missing_words, wrong_words`` (word, rows), ``rounding`` (step,
        share at it, coarser heap and its share), ``stand_ins`` (number, rows).
    """
    values = frame[name].to_numpy(float)
    wrong = frame[f"wrong:{name}"].to_numpy(bool)
    text = frame[f"as_written:{name}"]
    known = np.isfinite(values)
    written = np.empty(0)
    if written_unit is not None:
        scale, offset = conversion(written_unit, unit)
        written = (values[known] - offset) / scale
    low, middle, high, cells = _range(values, known, text)
    return {
        "missing": int((~known & ~wrong).sum()),
        "missing_words": _top(text[~known & ~wrong & (text != "").to_numpy()]),
        "wrong": int(wrong.sum()),
        "wrong_words": _top(text[wrong]),
        "low": low,
        "middle": middle,
        "high": high,
        "as_written": cells,
        "rounding": rounding(written),
        "stand_ins": _stand_ins(written),
    }


def text_facts(cells: pd.Series) -> dict[str, Any]:
    """Return what is to be told of a column of text: blanks, distinct words, the commonest."""
    told = cells[cells != ""]
    counts = told.value_counts()
    return {
        "missing": int(len(cells) - len(told)),
        "distinct": len(counts),
        "words": _commonest(counts, 3),
    }


def rounding(written: Array) -> dict[str, float] | None:
    """Return to what numbers are rounded, in the unit they are written in.

    Parameters
    ----------
    written : ndarray, (n,)
        Numbers as written; no NaN.

    Returns
    -------
    dict or None
        ``step`` and ``share``: the coarsest step that nearly all are multiples of, 0 for none of
        these; ``heap`` and ``heap_share``: a coarser one that more are multiples of than chance
        explains. None with too few values.

    Examples
    --------
    >>> found = rounding(np.arange(0.0, 400.0, 1.0))
    >>> found["step"], found["heap"]
    (1.0, 0.0)
    """
    told = written[written != 0.0]
    if len(told) < FEWEST:
        return None
    shares = {step: float(_at_multiples(told, step).mean()) for step in STEPS}
    step = next((step for step in STEPS if shares[step] >= NEARLY_ALL), 0.0)
    due = {each: step / each if step else 0.0 for each in STEPS}
    heap = next(
        (
            each
            for each in STEPS
            if each > step and shares[each] >= max(HEAP, 3.0 * due[each]) and each >= 1.0
        ),
        0.0,
    )
    return {
        "step": step,
        "share": shares.get(step, 0.0),
        "heap": heap,
        "heap_share": shares.get(heap, 0.0),
    }


def _at_multiples(values: Array, step: float) -> NDArray[np.bool_]:
    """Tell which values are multiples of a step, but for what converting units left of digits."""
    ratio = values / step
    return np.abs(ratio - np.round(ratio)) * step < 1e-6 * np.maximum(np.abs(values), 1.0)


def _range(
    values: Array, known: NDArray[np.bool_], text: pd.Series
) -> tuple[float | None, float | None, float | None, list[str]]:
    """Return least, median and greatest value, and the cells that hold them (or lie next)."""
    if not known.any():
        return None, None, None, []
    rows = np.flatnonzero(known)
    told = values[rows]
    at = (len(told) - 1) // 2
    places = [int(told.argmin()), int(np.argpartition(told, at)[at]), int(told.argmax())]
    cells = [str(text.iloc[rows[place]]) for place in places]
    return float(told.min()), float(np.median(told)), float(told.max()), cells


def _stand_ins(written: Array) -> list[list[Any]]:
    """Return numbers that usually stand for nothing, and occur too often to be readings."""
    least = max(3, len(written) // 200)
    found = []
    for each in STAND_INS:
        here = np.isclose(written, each, rtol=0.0, atol=1e-6)
        rows = int(here.sum())
        # 99 degC among readings of 90 and 110 is a reading.
        if rows >= least and (rows == len(written) or _apart(each, written[~here])):
            found.append([each, rows])
    return found


def _apart(value: float, others: Array) -> bool:
    """Tell whether a value lies outside all but a few of the others."""
    low, high = np.quantile(others, (0.01, 0.99))
    return bool(value < low or value > high)


def _top(cells: pd.Series, most: int = 3) -> list[list[Any]]:
    """Return the commonest cells."""
    return _commonest(cells.value_counts(), most)


def _commonest(counts: pd.Series, most: int) -> list[list[Any]]:
    """Return word and rows of the commonest, by rows and then by word."""
    if counts.empty:
        return []
    least = counts.iloc[min(most, len(counts)) - 1]
    more = [(-int(rows), str(word)) for word, rows in counts[counts > least].items()]
    equal = nsmallest(most - len(more), map(str, counts.index[counts == least]))
    top = [*sorted(more), *((-int(least), word) for word in equal)]
    return [[word[:200], -rows] for rows, word in top]
