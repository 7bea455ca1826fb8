"""Small records between stages, as JSON, and pages of text: files that appear whole."""

from __future__ import annotations

import json
import os
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any

SIGNIFICANT_DIGITS = 10


def save(record: Mapping[str, Any], path: str | Path) -> None:
    """Write a record, whole or not at all, its keys sorted and its numbers rounded.

    Rounded as in the tables: the last bits of a sum must not change a file. What is no finite
    number is written as null, since JSON knows no other word for it.
    """
    text = json.dumps(_plain(record), indent=2, sort_keys=True, ensure_ascii=False)
    write_text(f"{text}\n", path)


def write_text(text: str, path: str | Path) -> None:
    """Write text as UTF-8 with plain line ends, whole or not at all."""
    part = Path(f"{path}.part")
    part.parent.mkdir(parents=True, exist_ok=True)
    part.write_text(text, encoding="utf-8", newline="\n")
    os.replace(part, path)


def load(path: str | Path | Sequence[str]) -> dict[str, Any] | None:
    """Read a record; None where no path is given, as for an optional input of a rule."""
    return json.loads(Path(path).read_text(encoding="utf-8")) if path else None


def _plain(value: Any) -> Any:
    """Return plain Python values, for numpy's too."""
    if isinstance(value, Mapping):
        return {str(key): _plain(each) for key, each in value.items()}
    if hasattr(value, "tolist"):
        value = value.tolist()
    if isinstance(value, list | tuple):
        return [_plain(each) for each in value]
    if isinstance(value, float):
        finite = value - value == 0.0
        return float(f"{value:.{SIGNIFICANT_DIGITS}g}") if finite else None
    return value
