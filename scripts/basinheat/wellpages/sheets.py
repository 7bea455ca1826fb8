"""The small tables below the pictures of a well."""

from __future__ import annotations

from typing import Any

import numpy as np

from basinheat.report.sheet import Sheet, number, words
from basinheat.wellpages.rows import Rows

_MOST_ROWS = 60
_OTHER_KIND = ": treats "
_UNITS = {"bht": "mud-cooled", "dst": "drill-stem test"}


def temperatures_sheet(temperatures: Rows, closure: Rows) -> Sheet:
    """List formation temperatures with their errors and what the map says there."""
    rows = []
    for i, (row, judged) in enumerate(_pairs(temperatures, closure), start=1):
        z = -judged.left_out_k / judged.left_out_std_k if judged.left_out_std_k > 0 else np.nan
        rows.append(
            [
                str(i),
                number(row.depth_m),
                number(row.temperature_degc, 1),
                number(row.temperature_std_k, 1),
                number(row.well_std_k, 1),
                number(row.shared_std_k, 1),
                number(row.correction_k, 1, sign=True),
                words(row.method),
                number(-judged.residual_k, 1, sign=True),
                number(-judged.left_out_k, 1, sign=True),
                number(z, 1, sign=True),
                _joined(row.flags),
                passed_over(row.passed_over),
            ]
        )
    headers = ["#no.", "#depth (m)", "#°C", "#σ own (K)", "#σ well (K)", "#σ shared (K)",
               "#correction (K)", "method", "#well − map (K)", "#well − others (K)",
               "#in σ", "flags", "passed over"]  # fmt: skip
    return Sheet("Formation temperatures", headers, rows, _cut(len(temperatures)))


def readings_sheet(readings: Rows, became: list[str]) -> Sheet:
    """List readings, and what became of each in words."""
    rows = [
        [
            number(row.depth_m),
            number(row.temperature_degc, 1),
            number(row.temperature_std_k, 1),
            _UNITS.get(row.kind, words(row.kind)),
            number(row.since_circulation_h, 1),
            number(row.circulation_h, 1),
            row.log_run,
            row.date,
            told,
            _joined(row.flags),
            f"{row.source_file}:{row.source_line}",
        ]
        for row, told in zip(readings.each(_MOST_ROWS), became, strict=False)
    ]
    headers = ["#depth (m)", "#read (°C)", "#σ (K)", "kind", "#since circulation (h)",
               "#circulated (h)", "run", "date", "used for", "flags", "file:line"]  # fmt: skip
    return Sheet("Readings", headers, rows, _cut(len(readings)))


def refused_sheet(rejected: Rows) -> Sheet:
    """List the rows of a well that were refused or merged."""
    rows = [
        [
            row.table,
            f"{row.source_file}:{row.source_line}",
            row.column,
            row.value,
            words(row.code),
            row.sentence,
        ]
        for row in rejected.each(_MOST_ROWS)
    ]
    headers = ["table", "file:line", "column", "value", "rule", "why"]
    return Sheet("Refused or merged", headers, rows, _cut(len(rejected)))


def passed_over(text: str) -> str:
    """Return why methods were passed over; those for another kind of reading go without saying.

    Examples
    --------
    >>> passed_over("dst: treats dst readings;horner: fewer than 2 timed readings")
    'horner: fewer than 2 timed readings'
    """
    return "; ".join(part for part in text.split(";") if part and _OTHER_KIND not in part)


def _joined(flags: str) -> str:
    return ", ".join(words(flag) for flag in flags.split(";") if flag)


def _pairs(temperatures: Rows, closure: Rows) -> list[tuple[Any, Any]]:
    return list(zip(temperatures.each(_MOST_ROWS), closure.each(_MOST_ROWS), strict=True))


def _cut(count: int) -> str:
    if count <= _MOST_ROWS:
        return ""
    return f"The first {_MOST_ROWS} of {count:,}; the GeoPackage and the input files hold all."
