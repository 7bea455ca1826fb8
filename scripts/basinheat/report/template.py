"""Pages from templates: one file, no outside link, every text from the data escaped."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from basinheat.report import sheet

FOLDER = Path(__file__).parent / "templates"  # style and tables that all pages share


def environment(*folders: Path) -> Any:
    """Return the templates of some folders, before those that all pages share."""
    import jinja2

    found = jinja2.Environment(
        loader=jinja2.FileSystemLoader([*folders, FOLDER]),
        autoescape=True,
        undefined=jinja2.StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    found.filters["shown"] = sheet.shown
    return found
