"""The first look as a page: one file, no outside link, every text from the data escaped."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import Any

from basinheat import documents
from basinheat.firstlook import answers, chart, wording
from basinheat.report import template

TEMPLATES = Path(__file__).parent / "templates"


def write(path: str | Path, record: Mapping[str, Any]) -> None:
    """Write first_look.html, whole or not at all.

    Parameters
    ----------
    path : str or Path
        The page.
    record : mapping
        Of ``stage.look``.
    """
    documents.write_text(html(record), path)


def html(record: Mapping[str, Any]) -> str:
    """Return the page as text."""
    environment = template.environment(TEMPLATES)
    environment.filters["code"] = code_parts
    return environment.get_template("first_look.html.j2").render(
        run=record["run"],
        questions=[{**each, "label": wording.label(each)} for each in record["questions"]],
        together=answers.together(record),
        files=wording.files_sheet(record),
        decisions=wording.decisions_sheet(record),
        map_lines=wording.map_lines(record),
        map=chart.svg(record["map"]),
        sections=[_section(entry, record) for entry in record["files"]],
    )


def code_parts(text: str) -> list[tuple[str, bool]]:
    """Return a question in parts: text, and whether it is a line of the config.

    Examples
    --------
    >>> code_parts("Add `units: {depth: ft}`?")
    [('Add ', False), ('units: {depth: ft}', True), ('?', False)]
    """
    return [(part, index % 2 == 1) for index, part in enumerate(text.split("`")) if part]


def _section(entry: Mapping[str, Any], record: Mapping[str, Any]) -> dict[str, Any]:
    """Return what the page shows of one file."""
    numbers = [
        number
        for number, each in enumerate(record["questions"], start=1)
        if [entry["place"], entry["file"]] in [list(pair) for pair in each["files"]]
    ]
    kinds = wording.kinds_sheet(entry)
    return {
        "title": f"{entry['table']}: {entry['file']}",
        "place": entry["place"],
        "summary": wording.summary(entry),
        "absent": wording.absent(entry),
        "questions": numbers,
        "columns": wording.columns_sheet(entry),
        "headers": wording.headers_sheet(entry),
        "formations": wording.formations_sheet(entry),
        "kinds": kinds if kinds.rows else None,
        "reasons": wording.reasons_sheet(entry),
        "flags": wording.flags_sheet(entry),
    }
