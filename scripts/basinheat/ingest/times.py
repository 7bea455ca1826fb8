"""Time since circulation: a duration in any writing, or the difference of two times of day."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.flags import mark
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.settings.inputs import LasFile, ReadingsFile
from basinheat.settings.wells import Screening

Array = NDArray[np.float64]

DAY_H = 24.0
DURATIONS = ("since_circulation", "circulation", "drilling")
CLOCKS = ("circulation_stopped", "logger_on_bottom")
_COLONS = r"(?P<h>\d{1,3}):(?P<m>[0-5]\d)(?::[0-5]\d)?"
_WORDS = (
    r"(?:(?P<d>\d+(?:[.,]\d+)?)\s*d(?:ays?)?)?\s*"
    r"(?:(?P<h>\d+(?:[.,]\d+)?)\s*h(?:ou)?(?:rs?)?\.?)?\s*"
    r"(?:(?P<m>\d+(?:[.,]\d+)?)\s*(?:m|min|mins|minutes?)?\.?)?"
)
# Four digits that a clock shows; a duration of a thousand hours or of "0730" hours is none.
_CLOCK_DIGITS = r"(?:[01]\d|2[0-3])[0-5]\d(?:[.,]0+)?"
_CLOCK = (
    r"(?:(?P<date>\S*\d\S*)[T ]\s*)?(?P<h>[01]?\d|2[0-4])(?P<mark>[:.h]?)(?P<m>[0-5]\d)"
    r"(?::[0-5]\d(?:\.\d+)?)?\s*(?P<half>[ap]\.?m\.?)?(?:h|hrs|hours|Z)?"
)
_LONGEST_CLOCK_H = 100.0  # a four-digit number below this may be hours after all


def read_times(
    table: InputTable, ledger: Ledger, specs: Sequence[ReadingsFile | LasFile], rules: Screening
) -> None:
    """Fill ``since_circulation`` and ``circulation`` from what the cells say of times.

    Durations written as text are read; a duration that is a time of day is dropped; times of day
    give a duration where none is noted, or where both of them have dates and the duration
    disagrees. A value that a reviewer set stays.

    Parameters
    ----------
    table : InputTable
        Readings; ``since_circulation`` in h with ``as_written:`` and ``wrong:`` beside it, and
        the texts ``circulation_stopped, logger_on_bottom``.
    ledger : Ledger
        Takes what was dropped or overruled.
    specs : sequence of ReadingsFile
        Date formats of the files.
    rules : Screening
        ``time_disagreement_h``.
    """
    frame = table.frame
    for name in DURATIONS:
        wrong = frame[f"wrong:{name}"].to_numpy(bool)
        if wrong.any():
            hours = durations(frame.loc[wrong, f"as_written:{name}"])
            frame.loc[wrong, name] = np.where(hours > 0.0, hours, np.nan)
            frame.loc[wrong, f"wrong:{name}"] = np.isnan(hours)
    _drop_times_of_day(table, ledger)
    if (frame[list(CLOCKS)] != "").to_numpy().any():
        _from_clocks(table, ledger, specs, rules.time_disagreement_h)


def durations(text: pd.Series) -> Array:
    """Return durations written as text, in h, NaN where it is none.

    Examples
    --------
    >>> durations(pd.Series(["7:30", "7h30", "7 h 30 min", "450 min", "1 d 2 h", "soon"])).tolist()
    [7.5, 7.5, 7.5, 7.5, 26.0, nan]
    """
    text = text.astype("str").str.strip().str.lower()
    colons = text.str.extract(f"^{_COLONS}$").astype(float)
    words = text.str.extract(f"^{_WORDS}$").apply(
        lambda part: pd.to_numeric(part.str.replace(",", ".", regex=False), errors="coerce")
    )
    # A bare number is for the reader of numbers to judge, with the marks that the config states.
    said = text.str.contains(r"\d\s*[dhm]").to_numpy(bool)
    total = words["d"].fillna(0.0) * DAY_H + words["h"].fillna(0.0) + words["m"].fillna(0.0) / 60.0
    spelled = np.where(said & words.notna().any(axis=1).to_numpy(), total, np.nan)
    return np.where(colons["h"].notna(), colons["h"] + colons["m"] / 60.0, spelled)


def clocks(text: pd.Series, date_format: str | None) -> tuple[Array, Array]:
    """Return hour of the day and day (since 1970, NaN for no date) of times written as text.

    Examples
    --------
    >>> hour, day = clocks(pd.Series(["14:30", "0230", "1984-06-04 23:15", "2:30 pm", "x"]), None)
    >>> hour.tolist()
    [14.5, 2.5, 23.25, 14.5, nan]
    >>> float(day[2])
    5268.0
    """
    # A day has few minutes: few different texts fill many cells.
    codes, texts = pd.factorize(text)
    parts = pd.Series(texts, dtype="str").str.strip().str.extract(f"(?i)^{_CLOCK}$")
    hour = parts["h"].astype(float).to_numpy() + parts["m"].astype(float).to_numpy() / 60.0
    half = parts["half"].str.slice(0, 1).str.lower().to_numpy(object)
    hour = np.where(half == "p", hour % 12.0 + 12.0, np.where(half == "a", hour % 12.0, hour))
    day = _days(parts["date"].fillna(""), date_format)
    unread = (parts["date"].notna() & np.isnan(day)).to_numpy()
    # A spreadsheet gives a time without a date the day its calendar starts.
    day = np.where(day < -25_000.0, np.nan, day)
    wrong = unread | (hour > DAY_H)
    return np.where(wrong, np.nan, hour)[codes], np.where(wrong, np.nan, day)[codes]


def _days(text: pd.Series, date_format: str | None) -> Array:
    """Return days since 1970, NaN where the text is no date.

    ISO 8601 is read with any form stated: so are the dates of workbooks and of headers of logs.
    """
    out = np.full(len(text), np.nan)
    for pattern in [date_format or "%d.%m.%Y", "%Y-%m-%d"]:
        found = pd.to_datetime(text, format=pattern, errors="coerce").to_numpy("datetime64[s]")
        days = found.astype(np.int64) // 86_400
        out = np.where(np.isnat(found) | ~np.isnan(out), out, days)
    return out


def _drop_times_of_day(table: InputTable, ledger: Ledger) -> None:
    """Drop durations that only a clock can have shown."""
    frame = table.frame
    written = frame["as_written:since_circulation"]
    since = frame["since_circulation"].to_numpy(float)
    set_by_hand = _set(frame)
    # Only numbers that were not converted stand in a column of hours.
    long = (since >= _LONGEST_CLOCK_H) & ~set_by_hand
    digits, colons = np.zeros(len(frame), bool), np.zeros(len(frame), bool)
    digits[long] = written[long].str.fullmatch(_CLOCK_DIGITS).to_numpy(bool)
    number = pd.to_numeric(written.where(digits, ""), errors="coerce").to_numpy(float)
    digits &= number == since
    above = (since > DAY_H) & ~set_by_hand
    colons[above] = written[above].str.fullmatch(_COLONS).to_numpy(bool)
    ledger.drop(
        table,
        digits | colons,
        "since_circulation",
        "since_circulation_is_time_of_day",
        'time since circulation "{written}" is no duration: a time of day stands in column '
        '"{header}", or hours and minutes above 24 h. The reading is used without it; times of '
        "day belong into circulation_stopped and logger_on_bottom.",
    )


def _from_clocks(
    table: InputTable, ledger: Ledger, specs: Sequence[ReadingsFile | LasFile], most_h: float
) -> None:
    """Work durations out from the times of day, and compare with those noted."""
    frame = table.frame
    stop, bottom = (_read_clock(table, ledger, name, specs) for name in CLOCKS)
    hours, dated, across = between(*stop, *bottom)
    ledger.drop(
        table,
        dated & (hours < 0.0),
        "logger_on_bottom",
        "logger_on_bottom_dropped",
        "the logger was on bottom at {logger_on_bottom}, before circulation stopped at "
        "{circulation_stopped}; both are left out.",
    )
    # Nothing between them is a time not noted, as everywhere.
    hours = np.where(hours > 0.0, hours, np.nan)
    noted = frame["since_circulation"].to_numpy(float)
    off = np.abs(hours - noted)
    # Without dates the clock tells hours modulo a day.
    off = np.where(dated, off, np.abs((off + DAY_H / 2.0) % DAY_H - DAY_H / 2.0))
    disagree = off > most_h
    counts = np.isfinite(hours) & (np.isnan(noted) | (disagree & dated)) & ~_set(frame)
    frame["_clock"] = hours
    frame["_which"] = np.where(
        counts, "the times of day have dates and count", "the noted one counts"
    )
    sentence = (
        "a time since circulation of {since_circulation:.2f} h is noted, and {_clock:.2f} h lie "
        f"between the times of day, more than {most_h:g} h apart "
        "(screening.time_disagreement_h); {_which}."
    )
    ledger.remark(table, disagree, "since_circulation", "times_disagree", sentence)
    del frame["_clock"], frame["_which"]
    mark(frame, disagree, "times_disagree")
    mark(frame, counts & across, "time_across_midnight")
    frame["since_circulation"] = np.where(counts, hours, noted)


def between(
    stop_h: Array, stop_day: Array, bottom_h: Array, bottom_day: Array
) -> tuple[Array, NDArray[np.bool_], NDArray[np.bool_]]:
    """Return hours from stop to bottom, whether both have dates, and where midnight was assumed.

    Parameters
    ----------
    stop_h, bottom_h : ndarray, (n,)
        Hour of the day, NaN where not known.
    stop_day, bottom_day : ndarray, (n,)
        Day, NaN for no date: then the clock goes on to the next time it shows that hour.

    Returns
    -------
    hours : ndarray, (n,)
        Negative where the dates are in the wrong order.
    dated, across : ndarray of bool, (n,)
        Both have dates; a day was added.
    """
    days = bottom_day - stop_day
    dated = np.isfinite(days)
    hours = bottom_h - stop_h + DAY_H * np.where(dated, days, 0.0)
    across = (hours < 0.0) & (~dated | (days == 0.0))
    return np.where(across, hours + DAY_H, hours), dated, across


def _read_clock(
    table: InputTable, ledger: Ledger, name: str, specs: Sequence[ReadingsFile | LasFile]
) -> tuple[Array, Array]:
    """Return hour and day of a column of times; drop what is no time."""
    frame = table.frame
    hour, day = (np.full(len(frame), np.nan) for _ in range(2))
    noted = (frame[name] != "").to_numpy(bool)
    for number, spec in enumerate(specs):
        rows = np.flatnonzero(noted & (frame["config"] == number).to_numpy(bool))
        hour[rows], day[rows] = clocks(frame[name].iloc[rows], spec.date_format)
    sentence = f'"{{written}}" in column "{{header}}" is no time ({name}); it is left out.'
    ledger.drop(table, noted & np.isnan(hour), name, f"{name}_dropped", sentence)
    return hour, day


def _set(frame: pd.DataFrame) -> NDArray[np.bool_]:
    """Tell where a reviewer set the time since circulation."""
    nothing = np.zeros(len(frame), bool)
    return np.asarray(frame.get("set:since_circulation", nothing), bool)
