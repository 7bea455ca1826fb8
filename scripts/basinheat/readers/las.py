"""Headers of well logs (LAS 1.2, 2.0, 3.0): what each line says, by its line in the file."""

from __future__ import annotations

import re
from dataclasses import dataclass
from pathlib import Path

from basinheat.errors import UserError
from basinheat.readers.encoding import read_text

HEAD = 4_000_000  # bytes that surely hold the header; the curves below are not read
LONGEST = 1000  # characters of a line, and dots in it: more is no header, and slow to match
MOST_DOTS = 40
MOST_LINES = 20_000
# Sections whose lines say something of the well or a run: ~Well, ~Parameter, ~Log_Parameter.
_TOLD = re.compile(r"~\s*(W|P(?!ERF)|LOG_P)", re.IGNORECASE)
_DATA = re.compile(r"~\s*(A|LOG_D\w*A\b|\w+_DATA)", re.IGNORECASE)
_NEEDED = re.compile(r"\s*~\s*[VW]", re.IGNORECASE)
# Where these stand for values, the values stand behind the colon: LAS 1.2, whatever is stated.
_CAPTIONS = {"WELL": "WELL", "COMP": "COMPANY", "UWI": "UNIQUE WELL ID", "DATE": "LOG DATE"}
_RUN = re.compile(r"\|\s*RUN\s*\[\s*(\d+)\s*\]", re.IGNORECASE)
# BHT[1], BHT:1 as other programs number them; lasio would take the colon for the end of a value.
_COLON = re.compile(r"^(\s*[A-Za-z_]+)\s*:\s*(\d{1,3})(?=\s*\.)")
_NUMBERED = re.compile(r"(.*?)(?:\[(\d{1,3})\]|_?(\d{1,2}))")


@dataclass(frozen=True)
class Item:
    """One line of a header.

    Parameters
    ----------
    mnemonic : str
        In capitals, without the number of a run.
    unit, value, description : str
        As written; the value of LAS 1.2 too, whichever side of the colon it is on.
    run : int
        Number of the run it belongs to, 0 for none.
    line : int
        In the file, 1 being the first.
    """

    mnemonic: str
    unit: str
    value: str
    description: str
    run: int
    line: int


def read_header(path: str | Path, known: frozenset[str]) -> list[Item]:
    """Return the lines of a header that tell of the well and its runs.

    Parameters
    ----------
    path : str or Path
        File.
    known : frozenset of str
        Mnemonics that are looked for: only of these a number behind is that of a run.

    Raises
    ------
    UserError
        If the file is no LAS.
    """
    text, _ = read_text(path, "utf-8-sig", HEAD)
    lines = text[:HEAD].splitlines()[:MOST_LINES]
    if not any(_NEEDED.match(line) for line in lines):
        raise UserError(f"{path}: holds no section ~Version or ~Well.")
    items = _items(lines, _version(lines))
    if any(
        item.mnemonic in _CAPTIONS and item.value.upper() == _CAPTIONS[item.mnemonic]
        for item in items
    ):
        items = _items(lines, 1.2)
    return _by_run(items, known)


def _version(lines: list[str]) -> float:
    """Return the version of the standard that the file states; 2.0 where it states none."""
    for line in lines[:200]:
        found = re.match(r"\s*VERS\s*\.\s*(\d)(?:\.(\d+))?", line, re.IGNORECASE)
        if found:
            return {"1": 1.2, "3": 3.0}.get(found[1], 2.0)
    return 2.0


def _items(lines: list[str], version: float) -> list[Item]:
    """Return every line of the sections that tell something."""
    from lasio.reader import SectionParser, read_line

    class AsWritten(SectionParser):
        """Leave values as text: 0042 is a name, and no number."""

        def num(self, x: str, default: object = None) -> str:
            return str(x).strip()

    items, parser = [], None
    for number, line in enumerate(lines, 1):
        text = line.strip().strip("\x00")
        if text.startswith("~"):
            if _DATA.match(text):
                parser = None
                if version < 3.0:
                    break
            else:
                parser = AsWritten(text[:80], version=version) if _TOLD.match(text) else None
            continue
        passed = not text or text[0] == "#" or len(text) > LONGEST or text.count(".") > MOST_DOTS
        if parser is None or passed:
            continue
        try:
            parts = read_line(_COLON.sub(r"\1[\2]", text), section_name=parser.section_name2)
            item = parser(**parts)
        except (AttributeError, KeyError, ValueError):
            continue  # a line that is none of a header is no fault of the file
        run = _RUN.search(f"{item.descr}")
        items.append(
            Item(
                str(item.original_mnemonic).strip().upper(),
                str(item.unit).strip(),
                str(item.value).strip(),
                str(item.descr).split("|")[0].strip(),
                int(run[1]) if run else 0,
                number,
            )
        )
    return items


def _by_run(items: list[Item], known: frozenset[str]) -> list[Item]:
    """Give each item its run: as it says, by the number behind its name, or as it is repeated."""
    said: dict[str, set[str]] = {}
    for item in items:
        said.setdefault(item.mnemonic, set()).add(item.value)
    seen: dict[str, int] = {}
    out = []
    for item in items:
        name, run = item.mnemonic, item.run
        numbered = None if name in known else _NUMBERED.fullmatch(name)
        if numbered and numbered[1] in known:
            name, run = numbered[1], run or int(numbered[2] or numbered[3])
        elif not run and len(said[name]) > 1:
            seen[name] = run = seen.get(name, 0) + 1
        out.append(Item(name, item.unit, item.value, item.description, run, item.line))
    return out
