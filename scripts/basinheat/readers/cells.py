"""Text cells to numbers, words and dates; what is blank and what is wrong."""

from __future__ import annotations

import numpy as np
import pandas as pd

# Words that stand for nothing in tables of any origin, and the null of LAS files.
BLANK = frozenset({"", "na", "n/a", "#n/a", "nan", "null", "none", "-", "--", "-999.25"})


def words(cells: pd.Series, missing: list[str]) -> pd.Series:
    """Return the cells stripped, "" where they are blank or a missing-value word.

    Examples
    --------
    >>> words(pd.Series([" BW-1 ", "n/a", "?"]), ["?"]).tolist()
    ['BW-1', '', '']
    """
    out = cells.str.strip()
    blank = BLANK.union(word.strip().lower() for word in missing)
    return out.mask(out.str.lower().isin(blank), "")


def numbers(
    cells: pd.Series, missing: list[str], decimal: str = ".", thousands: str = ""
) -> tuple[np.ndarray, np.ndarray]:
    """Return the numbers of text cells, NaN where blank, and which cells are no numbers.

    A missing-value word that is a number stands for all its spellings: "0" also for "0.00".

    Parameters
    ----------
    cells : Series of text, (n,)
        As written.
    missing : list of str
        Words that mean missing, beside the blank.
    decimal, thousands : str
        Marks inside numbers; a comma is never guessed to be one or the other.

    Returns
    -------
    values : ndarray, (n,)
        Numbers.
    wrong : ndarray of bool, (n,)
        Cells that are neither blank nor a number.

    Examples
    --------
    >>> values, wrong = numbers(pd.Series(["12,5", "x", ""]), [], decimal=",")
    >>> float(values[0]), wrong.tolist()
    (12.5, [False, True, False])
    """
    text = words(cells, missing)
    values = pd.to_numeric(_plain(text, decimal, thousands), errors="coerce").to_numpy(float)
    wrong = ~np.isfinite(values) & (text != "").to_numpy(bool)
    nulls = [float(word) for word in (*missing, "-999.25") if _is_number(word)]
    values = np.where(np.isin(values, nulls), np.nan, values)
    return np.where(np.isfinite(values), values, np.nan), wrong


def dates(text: pd.Series, pattern: str | None) -> tuple[pd.Series, np.ndarray]:
    """Return dates as ISO 8601, "" where blank, and which are no dates.

    Without a pattern ISO 8601 is read (a year or a month alone too) and day.month.year; never
    month and day around a slash, which nobody can tell apart.

    Parameters
    ----------
    text : Series of text, (n,)
        Stripped.
    pattern : str or None
        As in ``strptime``.

    Examples
    --------
    >>> dates(pd.Series(["1984", "04.06.1989", "6/4/89"]), None)[0].tolist()
    ['1984', '1989-06-04', '']
    """
    out = text.copy()
    if pattern is None:
        iso = text.str.fullmatch(r"[12]\d{3}(-[01]\d(-[0-3]\d([T ][0-2]\d:[0-5]\d(:[0-5]\d)?)?)?)?")
        out = out.mask(~iso.astype(bool), "")
        pattern, left = "%d.%m.%Y", (text != "") & ~iso.astype(bool)
    else:
        left = text != ""
    if left.any():
        found = pd.to_datetime(text[left], format=pattern, errors="coerce")
        out[left] = found.dt.strftime("%Y-%m-%d").fillna("")
    return out, ((out == "") & (text != "")).to_numpy(bool)


def _plain(text: pd.Series, decimal: str, thousands: str) -> pd.Series:
    """Return numbers as Python writes them."""
    text = text.str.replace("\u2212", "-", regex=False)
    if thousands:
        # Groups of three only: "1,5" is then no number and not fifteen.
        mark = "\\" + thousands
        grouped = text.str.fullmatch(rf"[-+]?\d{{1,3}}({mark}\d{{3}})+(\{decimal}\d*)?")
        text = text.where(~grouped.astype(bool), text.str.replace(thousands, "", regex=False))
    if decimal == ",":
        text = text.str.replace(".", "x", regex=False).str.replace(",", ".", regex=False)
    return text


def _is_number(word: str) -> bool:
    try:
        return bool(np.isfinite(float(word)))
    except ValueError:
        return False
