"""Lines of a config that a user may want, as they can be typed."""

from __future__ import annotations

import json
import re
from collections.abc import Iterable, Mapping
from typing import Any

from basinheat.firstlook.headers import likeness, suggest


def setting(**lines: Any) -> str:
    """Return lines of the config as they may be typed.

    Examples
    --------
    >>> setting(units={"depth": "ft"})
    '`units: {depth: ft}`'
    """
    return "`" + ", ".join(f"{key}: {typed(value)}" for key, value in lines.items()) + "`"


def columns_and_units(
    table: str, headers: Iterable[str], taken: Iterable[str] = ()
) -> tuple[dict[str, str], dict[str, str]]:
    """Return which headers probably hold which columns of a table, and the units they name.

    Of several headers the one most like a usual name is taken; of equals the first in the file.

    Parameters
    ----------
    table : str
        wells, readings, layers or surveys.
    headers : iterable of str
        As in the file.
    taken : iterable of str
        Columns that have their header already.

    Examples
    --------
    >>> columns_and_units("surveys", ["UWI", "MD (ft)", "INCL", "AZIM", "CREW"])[1]
    {'depth': 'ft'}
    """
    taken = set(taken)
    columns: dict[str, str] = {}
    units: dict[str, str] = {}
    for header in headers:
        guess = suggest(header, table, taken)
        if guess is None:
            continue
        known = columns.get(guess.name)
        if known is None or guess.score > likeness(known, guess.name):
            columns[guess.name] = header
            units.pop(guess.name, None)
            if guess.unit:
                units[guess.name] = guess.unit
    return columns, units


def proposal(table: str, headers: Iterable[str], taken: Iterable[str] = ()) -> str:
    """Return the lines that read the headers which resemble columns, "" where none does."""
    columns, units = columns_and_units(table, headers, taken)
    if not columns:
        return ""
    return setting(columns=columns, **({"units": units} if units else {}))


def typed(value: Any) -> str:
    """Return a value in the flow style of YAML; quotes only where they are needed.

    Examples
    --------
    >>> typed({"STATIC": "equilibrium", "?": ["no", 7]})
    '{STATIC: equilibrium, "?": ["no", 7]}'
    """
    if isinstance(value, Mapping):
        return "{" + ", ".join(f"{typed(k)}: {typed(v)}" for k, v in value.items()) + "}"
    if isinstance(value, str):
        plain = re.fullmatch(r"[A-Za-z_][A-Za-z0-9_ .%/()-]*[A-Za-z0-9_)]|[A-Za-z]", value)
        risky = value.lower() in {"yes", "no", "on", "off", "true", "false", "null"}
        # The mark that sets these lines apart in a sentence must not stand inside them.
        quoted = json.dumps(value, ensure_ascii=False).replace("`", "\\u0060")
        return value if plain and not risky else quoted
    if isinstance(value, Iterable):
        return "[" + ", ".join(typed(each) for each in value) + "]"
    return json.dumps(value)
