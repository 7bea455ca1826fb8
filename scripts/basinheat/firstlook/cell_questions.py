"""Questions about cells: no numbers, numbers and words that stand for nothing, dates."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterator, Mapping, Sequence
from typing import Any

from basinheat.firstlook.inputfile import InputFile
from basinheat.firstlook.proposals import setting
from basinheat.firstlook.questions import (
    LIKELY,
    MANY,
    PRESSING,
    Question,
    ask,
    count_rows,
    listed,
    share,
    told,
)

SOME_WORDS = 3  # equal cells that are no number, from which a word is asked about
TIMES = ("date", "circulation_stopped", "logger_on_bottom")  # text in which figures are expected
_THOUSANDS = re.compile(r"[-+]?\d{1,3}(,\d{3})+(\.\d*)?")
_DECIMALS = re.compile(r"[-+]?\d+,\d+")
_FIGURE = re.compile(r"\d")
Column = Mapping[str, Any]


def about_cells(file: InputFile, entry: Mapping[str, Any]) -> Iterator[Question]:
    """Ask about cells that are no numbers, and numbers that are none; each cause once a file."""
    rows = entry["rows"]
    columns = [
        each
        for each in entry["columns"]
        if each.get("wrong") and each["wrong"] >= min(SOME_WORDS, 0.5 * rows)
    ]
    figures = {each["header"]: [w for w, _ in each["wrong_words"] if _FIGURE.search(w)]
               for each in columns}  # fmt: skip
    thousands = [each for each in columns if _all(figures[each["header"]], _THOUSANDS)]
    decimals = [
        each
        for each in columns
        if each not in thousands and _all(figures[each["header"]], _DECIMALS)
    ]
    yield from _about_commas(file, [*map(_figures, decimals)], [*map(_figures, thousands)], rows)
    for each in columns:
        others = figures[each["header"]]
        if others and each not in decimals and each not in thousands:
            seen = _no_numbers([each], others[:1], rows)
            yield ask(file, _weight([each], rows), seen, "Is this the right column?",
                      rows=each["wrong"])  # fmt: skip
    yield from _about_words(file, columns, rows)
    yield from _about_stand_ins(file, entry)


def about_dates(
    file: InputFile, entry: Mapping[str, Any], written: Sequence[str]
) -> Iterator[Question]:
    """Ask for the form of dates that could not be read.

    Parameters
    ----------
    file : InputFile
        A file of readings.
    entry : mapping
        What is told of it.
    written : sequence of str
        Cells that are no dates.
    """
    written = [each for each in written if _FIGURE.search(each)]
    if len(written) < SOME_WORDS or getattr(file.spec, "date_format", None):
        return
    form = date_form(written)
    yield ask(
        file,
        LIKELY,
        f"{count_rows(len(written))} with a date that is not read, such as {told(written[0])}.",
        f"Add {setting(date_format=form)} to {file.place}?"
        if form
        else f"State `date_format` in {file.place}?",
        {"date_format": form} if form else {},
        rows=len(written),
    )


def date_form(written: Sequence[str]) -> str:
    """Return the form of dates with two-figure day and month, "" where it can't be told.

    Examples
    --------
    >>> date_form(["3/4/1989", "12/31/1988"]), date_form(["3/4/1989", "4/5/1990"])
    ('%m/%d/%Y', '')
    """
    parts = [re.fullmatch(r"(\d{1,2})([/\-.])(\d{1,2})\2(\d{4}|\d{2})", each) for each in written]
    known = [each.groups() for each in parts if each]
    if len(known) < 0.9 * len(written) or not known:
        return ""
    mark, long = known[0][1], len(known[0][3]) == 4
    first, second = (max(int(each[place]) for each in known) for place in (0, 2))
    year = "%Y" if long else "%y"
    if first > 12 >= second:
        return f"%d{mark}%m{mark}{year}"
    return f"%m{mark}%d{mark}{year}" if second > 12 >= first else ""


def _about_commas(
    file: InputFile, decimals: list[Column], thousands: list[Column], rows: int
) -> Iterator[Question]:
    """Ask what commas in numbers are; both marks at once can't be stated."""
    for columns, key, what in (
        (decimals, "decimal", "Is the comma the decimal mark?"),
        (thousands, "thousands", "Do commas part thousands?"),
    ):
        if not columns:
            continue
        lines = {key: ","}
        answer = f"Then add {setting(**lines)} to {file.place}."
        if key == "thousands" and decimals:
            lines, answer = {}, "Then mend them: in other columns the comma is the decimal mark."
        words = [word for each in columns for word, _ in each["wrong_words"]]
        seen = _no_numbers(columns, [word for word in words if _FIGURE.search(word)][:1], rows)
        yield ask(file, _weight(columns, rows), seen, f"{what} {answer}", lines,
                  rows=_most(columns))  # fmt: skip


def _about_words(file: InputFile, columns: list[Column], rows: int) -> Iterator[Question]:
    """Ask about words without figures where numbers, dates or times should stand."""
    found: Counter[str] = Counter()
    concerned = []
    for each in columns:
        here = {word: n for word, n in each["wrong_words"] if _is_word(word, n)}
        found.update(here)
        concerned += [{**each, "wrong": sum(here.values())}] if here else []
    for name in TIMES:
        if file.table != "readings" or name not in file.columns:
            continue
        counts = file.frame[name].value_counts()
        counts = counts[counts >= SOME_WORDS]  # times of day are many, and mostly different
        here = {str(w)[:200]: int(n) for w, n in counts.items() if w and _is_word(str(w), int(n))}
        found.update(here)
        if here:
            concerned.append({"header": file.columns[name], "wrong": sum(here.values())})
    words = sorted(found, key=lambda word: (-found[word], word))[:8]
    if words:
        yield ask(
            file,
            _weight(concerned, rows),
            _no_numbers(concerned, words, rows),
            f"Do these mean missing? Then add {setting(missing=words)} to {file.place}.",
            {"missing": words},
            rows=_most(concerned),
        )


def _about_stand_ins(file: InputFile, entry: Mapping[str, Any]) -> Iterator[Question]:
    """Ask about numbers that usually stand for nothing."""
    found = [
        (f"{value:g}", rows, each["header"])
        for each in entry["columns"]
        for value, rows in each.get("stand_ins", [])
    ]
    if found:
        seen = "; ".join(f"{value} stands {rows:,} times in column {told(header)}"
                         for value, rows, header in found[:8])  # fmt: skip
        values = list(dict.fromkeys(value for value, _, _ in found))
        what = "Does it" if len(values) == 1 else "Do they"
        yield ask(
            file,
            LIKELY,
            f"{seen}.",
            f"{what} mean missing? Then add {setting(missing=values)} to {file.place}.",
            {"missing": values},
            rows=max(rows for _, rows, _ in found),
        )


def _figures(column: Column) -> Column:
    """Return a column with its cells of words left out of the count."""
    words = sum(rows for word, rows in column["wrong_words"] if not _FIGURE.search(word))
    return {**column, "wrong": column["wrong"] - words}


def _is_word(word: str, rows: int) -> bool:
    return rows >= SOME_WORDS and not _FIGURE.search(word)


def _all(words: list[str], pattern: re.Pattern[str]) -> bool:
    return bool(words) and all(pattern.fullmatch(word) for word in words)


def _most(columns: list[Column]) -> int:
    return max(each["wrong"] for each in columns)


def _weight(columns: list[Column], rows: int) -> int:
    return PRESSING if _most(columns) > MANY * rows else LIKELY


def _no_numbers(columns: list[Column], words: Sequence[str], rows: int) -> str:
    """Return how many cells of which columns can't be read."""
    cells = sum(each["wrong"] for each in columns)
    if len(columns) == 1:
        what = f"{cells:,} cells ({share(cells, rows)}) of column {told(columns[0]['header'])}"
    else:
        what = f"{cells:,} cells of columns {listed(each['header'] for each in columns)}"
    return f"{what} can't be read, such as {listed(words, 4)}."
