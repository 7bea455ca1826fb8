"""Headers: how they are compared, and in which line they stand."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from difflib import get_close_matches
from pathlib import Path

from basinheat.errors import UserError

LOOKED_AT = 50  # lines in which the headers may stand where `skip_lines` is auto


def clean(header: str) -> str:
    r"""Return a header without blanks around it and without a line break inside.

    Examples
    --------
    >>> clean(" Depth\n(ft) ")
    'Depth (ft)'
    """
    return re.sub(r"\s*[\r\n]+\s*", " ", header).strip()


def choose(
    candidates: Iterable[tuple[int, list[str]]], needed: Sequence[str]
) -> tuple[int, list[str]] | None:
    """Return the first candidate that holds every header needed, else the one that holds most.

    Parameters
    ----------
    candidates : iterable of (int, list of str)
        Row counted from 0 and its cells as written, in the order of preference.
    needed : sequence of str
        Headers.

    Returns
    -------
    tuple or None
        None where every candidate is blank.
    """
    best, most = None, -1
    for row, cells in candidates:
        header = [clean(cell) for cell in cells]
        if not any(header):
            continue
        held = sum(clean(name) in header for name in needed)
        if held > most:
            best, most = (row, header), held
        if held == len(needed):
            break
    return best


def place(name: str, header: Sequence[str], path: str | Path) -> int:
    """Return where a header stands; it must stand there once.

    Raises
    ------
    UserError
        Where it is absent, or stands there more than once.
    """
    fault = fault_of(name, header, path)
    if fault:
        raise UserError(fault)
    return list(header).index(clean(name))


def fault_of(name: str, header: Sequence[str], path: str | Path) -> str:
    """Return what keeps a header from naming one column, "" for nothing."""
    count = list(header).count(clean(name))
    if count > 1:
        return f'{path}: the header "{name}" stands there {count} times. Rename all but one.'
    if count == 1:
        return ""
    near = get_close_matches(name, header, 1) or [each for each in header if each][:1] or [""]
    return f'{path}: there is no column "{name}"; the nearest is "{near[0]}".'


def no_headers(path: str | Path, line: int) -> UserError:
    """Return the fault of a file whose line of headers is blank."""
    return UserError(
        f"{path}: line {line} holds no headers. Is the file empty? Lines before the headers are "
        "stated under `skip_lines`."
    )
