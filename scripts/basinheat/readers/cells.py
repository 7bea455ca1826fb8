"""Text cells to words and dates; what is blank."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
import pandas as pd

from basinheat.readers.encoding import NUL

# Words that stand for nothing in tables of any origin, in any case.
BLANK = frozenset(
    {
        *("", "na", "n/a", "#n/a", "nan", "null", "none", "-", "--", "?"),
        *("nil", "nil:missing", "nil:unknown", "nil:inapplicable"),
        *("unspecified", "[unspecified]", "unknown"),
    }
)


def words(cells: pd.Series, missing: Iterable[str]) -> pd.Series:
    """Return the cells stripped, "" where they are blank or a missing-value word.

    Examples
    --------
    >>> words(pd.Series([" BW-1 ", "n/a", "x.x"]), ["x.x"]).tolist()
    ['BW-1', '', '']
    """
    out = stripped(cells)
    return out.mask(is_missing(out, missing), "")


def stripped(cells: pd.Series) -> pd.Series:
    """Return words without blanks around them, nor NULs that pad fixed fields."""
    out = cells.str.strip()
    padded = out.str.contains(NUL, regex=False).to_numpy(bool)
    return out.mask(padded, out.str.strip(NUL).str.strip()) if padded.any() else out


def is_missing(text: pd.Series, missing: Iterable[str]) -> np.ndarray:
    """Tell which cells are blank or a missing-value word.

    Parameters
    ----------
    text : Series of text, (n,)
        Without blanks around.
    missing : iterable of str
        Words that mean missing, beside those that always do.
    """
    blank = BLANK.union(word.strip().lower() for word in missing)
    return text.str.lower().isin(blank).to_numpy(bool)


def counted(text: pd.Series, mask: np.ndarray) -> dict[str, int]:
    """Return how often each word stands in the cells of a mask, blanks left out."""
    if not mask.any():
        return {}
    counts = text[mask].value_counts()
    return {str(word): int(count) for word, count in sorted(counts.items()) if word}


def dates(text: pd.Series, pattern: str | None) -> tuple[pd.Series, np.ndarray]:
    """Return dates as ISO 8601, "" where blank, and which are no dates.

    Without a pattern ISO 8601 is read (a year or a month alone too) and day.month.year; never
    month and day around a slash, which nobody can tell apart. With a pattern, what does not fit it
    is read where it is a whole ISO date: so are the dates of workbooks.

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
    clock = r"([T ][0-2]\d:[0-5]\d(:[0-5]\d)?)?"
    part = rf"(-[01]\d(-[0-3]\d{clock})?)?" if pattern is None else rf"-[01]\d-[0-3]\d{clock}"
    iso = text.str.fullmatch(rf"[12]\d{{3}}{part}").astype(bool)
    out = text.mask(~iso, "")
    left = (text != "") & ~iso if pattern is None else text != ""
    if left.any():
        found = pd.to_datetime(text[left], format=pattern or "%d.%m.%Y", errors="coerce")
        found = found.dt.strftime("%Y-%m-%d")
        out[left] = found.where(found.notna(), out[left])
    return out, ((out == "") & (text != "")).to_numpy(bool)


def from_serials(text: pd.Series, day_0: str) -> pd.Series:
    """Return dates that stand there as numbers of days as ISO 8601, other cells as they are.

    Four digits are a year and no serial.

    Parameters
    ----------
    text : Series of text, (n,)
        Stripped.
    day_0 : str
        Day 0 of the numbers, ISO 8601.

    Examples
    --------
    >>> from_serials(pd.Series(["31113", "1984"]), "1899-12-30").tolist()
    ['1985-03-07', '1984']
    """
    serial = text.str.fullmatch(r"[1-7]\d{4}([.,]\d+)?").to_numpy(bool)
    if not serial.any():
        return text
    days = text[serial].str.extract(r"^(\d+)")[0].astype(np.int64)
    found = pd.Timestamp(day_0) + pd.to_timedelta(days, unit="D")
    out = text.copy()
    out[serial] = found.dt.strftime("%Y-%m-%d").to_numpy()
    return out
