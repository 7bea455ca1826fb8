"""A small table of the page, and how its cells are worded."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Any

import numpy as np

LONGEST = 400  # characters of a cell: a name of 10,000 would bury the page
# Characters that do not show and change what stands beside them: controls, marks of direction,
# zero-width and line separators (Unicode 15, categories Cc, Cf, Zl, Zp; from memory).
_HIDDEN = re.compile(
    "[\x00-\x08\x0b-\x1f\x7f-\x9f\xad\u061c\u180e\u200b-\u200f\u2028-\u202e\u2060-\u206f\ufeff"
    "\ud800-\udfff\ufff9-\ufffb]"
)


@dataclass(frozen=True)
class Sheet:
    """A small table of the page.

    Parameters
    ----------
    title : str
        Above it.
    headers : list of str
        One a column; a column whose header starts with ``#`` holds numbers and is set right; where
        it starts with a grave accent, cells hold a name as the config has it, and ``: `` before
        what is said of it.
    rows : list of list of str
        Text, as printed.
    note : str
        Below it: how to read it.
    """

    title: str
    headers: list[str]
    rows: list[list[str]]
    note: str = ""

    @property
    def columns(self) -> list[tuple[str, str]]:
        """Return (header, CSS class) of the columns."""
        kinds = {"#": "number", "`": "code"}
        return [(name.lstrip("#`"), kinds.get(name[:1], "")) for name in self.headers]


def shown(text: Any, longest: int = LONGEST) -> str:
    """Return text in which nothing is hidden and that is not too long to read.

    Examples
    --------
    >>> shown("BW\u202e0413"), shown("x" * 9, longest=5)
    ('BW[U+202E]0413', 'xxxx…')
    """
    text = str(text)
    if len(text) > longest:
        text = text[: longest - 1] + "…"
    return _HIDDEN.sub(lambda match: f"[U+{ord(match.group()):04X}]", text)


def words(code: str) -> str:
    """Return a code as words.

    Examples
    --------
    >>> words("depth_unit_suspect")
    'depth unit suspect'
    """
    return code.replace("_", " ")


def number(value: Any, digits: int = 0, sign: bool = False) -> str:
    """Return a number with a fixed count of digits, a dash where there is none.

    Examples
    --------
    >>> number(12345.678, 1), number(None), number(-0.04, 1), number(2.5, 1, sign=True)
    ('12,345.7', '–', '0.0', '+2.5')
    """
    if value is None or not np.isfinite(value):
        return "–"
    rounded = round(float(value), digits) + 0.0  # no "-0.0"
    return f"{rounded:{'+' if sign and rounded else ''},.{digits}f}".replace("-", "−")


def percent(share: Any) -> str:
    """Return a share as a percentage that does not round to nothing or to all.

    Examples
    --------
    >>> percent(0.123), percent(0.002), percent(0.998), percent(None)
    ('12 %', 'under 1 %', 'over 99 %', '–')
    """
    if share is None or not np.isfinite(share):
        return "–"
    if 0.0 < share < 0.005:
        return "under 1 %"
    return "over 99 %" if 0.995 <= share < 1.0 else f"{100 * share:.0f} %"
