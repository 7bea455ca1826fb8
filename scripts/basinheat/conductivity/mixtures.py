"""What the layers' words for rock stand for: one lithology, a mixture, or a formation's mix."""

from __future__ import annotations

import csv
import difflib
import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path

from basinheat.conductivity.catalogue import Catalogue, plain
from basinheat.errors import UserError

Mix = Mapping[str, float]

UNKNOWN, UNCLEAR = "lithology_unknown", "mixture_unclear"
_ABSENT = "is not in the catalogue; "
_ROUNDING = 0.015  # of percentages that were rounded to whole numbers; common practice
_NUMBER = r"(\d+(?:[.,]\d+)?)\s*%?"
_BETWEEN = " \t,;/+&:()[]-|"
_JOINTS = re.compile(r"\s*[/,;+&|]\s*|\s+and\s+|\s+with\s+")
_COLUMNS = ("formation", "lithology", "percent")


@dataclass(frozen=True)
class Meaning:
    """What a word stands for: place in the catalogue to share, sum 1; else why for nothing.

    ``code`` is "" where the word is understood, else UNKNOWN or UNCLEAR, and ``why`` the reason.
    """

    shares: tuple[tuple[int, float], ...] = ()
    code: str = ""
    why: str = ""


class Vocabulary:
    """All names of rock that a run knows.

    A word is looked up in the config's own names, then among the formations, then in the
    catalogue; last it is read as a mixture ("sandstone 60 shale 40").

    Parameters
    ----------
    rocks : Catalogue
    lithologies : mapping
        Setting ``conductivity.lithologies``: word in the layers to lithology, mixture or formation.
    formations : mapping
        Formation to the percentages of its lithologies.

    Raises
    ------
    UserError
        Every name in the two mappings that stands for nothing.
    """

    def __init__(
        self, rocks: Catalogue, lithologies: Mapping[str, str], formations: Mapping[str, Mix]
    ) -> None:
        self._rocks = rocks
        mapped = {plain(name): to for name, to in lithologies.items()}
        # What the config describes itself is a rock of its own, whatever else has that name.
        self._own = {name: Meaning(((rocks.aliases[name], 1.0),)) for name in rocks.made}
        self._own |= {
            name: Meaning(((rocks.aliases[plain(to)], 1.0),))
            for name, to in mapped.items()
            if plain(to) in rocks.aliases and name not in rocks.made
        }
        faults: list[str] = []
        self._formations: dict[str, Meaning] = {}
        for name, mix in formations.items():
            meaning = self._formations[plain(name)] = self._mix(mix)
            faults += [f"conductivity.formations.{name}: {meaning.why}"] if meaning.code else []
        rest = {}
        for name, to in lithologies.items():
            if plain(name) not in self._own:
                meaning = rest[plain(name)] = self.meaning(to)
                told = f'conductivity.lithologies.{name}: "{to}" {meaning.why}'
                faults += [told] if meaning.code else []
        self._own |= rest
        if faults:
            raise UserError(
                faults,
                "name each lithology's rock under conductivity.lithologies "
                "(name in the layers: name in the catalogue):",
            )

    def meaning(self, word: str) -> Meaning:
        """Return what a word stands for."""
        key = plain(word)
        known = self._own.get(key) or self._formations.get(key) or self._rock(key)
        return known or self._mixture(word)

    def meanings(self, words: Iterable[str]) -> dict[str, Meaning]:
        """Return what each of the words stands for, in the words' order."""
        return {word: self.meaning(word) for word in sorted(set(words))}

    def unknown(self, words: Iterable[str]) -> dict[str, str]:
        """Return the words that stand for nothing: the nearest that does, or why."""
        return {
            word: each.why.removeprefix(_ABSENT)
            for word, each in self.meanings(words).items()
            if each.code
        }

    def _rock(self, name: str) -> Meaning | None:
        """Return what a part of a mixture stands for: never a formation."""
        place = self._rocks.aliases.get(plain(name))
        known = None if place is None else Meaning(((place, 1.0),))
        return self._own.get(plain(name), known)

    def _mixture(self, word: str) -> Meaning:
        """Read a word as names with percentages."""
        pairs = _pairs(word)
        if any(self._rock(name) for name, _ in pairs):
            mix: dict[str, float] = {}
            for name, percent in pairs:
                mix[name] = mix.get(name, 0.0) + percent
            return self._mix(mix)
        parts = [part for part in _JOINTS.split(word.strip().lower()) if part]
        if len(parts) > 1 and all(self._rock(part) for part in parts):
            states = " ".join(f"{part} {100 // len(parts)}" for part in parts)
            return Meaning((), UNCLEAR, f'states no percentages; write such as "{states}"')
        pieces = [piece for part in parts for piece in re.split(_NUMBER, part)[::2]]
        if len(pieces) > len(parts) and any(self._rock(piece.strip(_BETWEEN)) for piece in pieces):
            why = "states no percentage for each rock; write such as"
            return Meaning((), UNCLEAR, f'{why} "sandstone 60 shale 40"')
        return Meaning((), UNKNOWN, f"{_ABSENT}{self._near(word)}")

    def _mix(self, mix: Mix) -> Meaning:
        """Return the meaning of lithologies with their percentages, or shares of 1."""
        total = sum(mix.values())
        whole = 1.0 if total <= 1.0 + _ROUNDING else 100.0
        if not mix or min(mix.values()) < 0.0 or abs(total / whole - 1.0) > _ROUNDING:
            stated = f"the percentages sum to {total:g}, must be 100" if mix else "states no rock"
            return Meaning((), UNCLEAR, stated)
        shares: dict[int, float] = {}
        for name, percent in mix.items():
            part = self._rock(name)
            if part is None or part.code:
                return Meaning((), UNKNOWN, f'"{name}" {_ABSENT}{self._near(name)}')
            for place, share in part.shares:
                shares[place] = shares.get(place, 0.0) + share * percent / total
        return Meaning(tuple(sorted((place, share) for place, share in shares.items() if share)))

    def _near(self, word: str) -> str:
        names = {**{name: name for name in self._formations}, **self._own_names()}
        close = difflib.get_close_matches(plain(word), sorted(names), 1, 0.5)
        if close:
            return f"the nearest is {names[close[0]]}"
        return f"choose one of {', '.join(self._rocks.names)}"

    def _own_names(self) -> dict[str, str]:
        return {alias: self._rocks.names[place] for alias, place in self._rocks.aliases.items()}


def load_formations(source: Mapping[str, Mix] | str | Path | None) -> dict[str, dict[str, float]]:
    """Return the formations of the config, or of a table with a row per formation and lithology.

    Parameters
    ----------
    source : mapping, path or None
        Formation to lithology to percent; or a CSV file of formation, lithology, percent.

    Raises
    ------
    UserError
        Every fault of the file, with its line.
    """
    if source is None or isinstance(source, Mapping):
        return {name: dict(mix) for name, mix in (source or {}).items()}
    path = Path(source)
    try:
        with path.open(encoding="utf-8-sig", newline="") as file:
            reader = csv.DictReader(file)
            header = reader.fieldnames or ()
            rows = [(reader.line_num, row) for row in reader]
    except (OSError, UnicodeDecodeError, csv.Error) as fault:
        raise UserError(f"conductivity.formations: {path} can't be read ({fault}).") from fault
    missing = [name for name in _COLUMNS if name not in header]
    if missing:
        raise UserError(
            f"conductivity.formations: {path.name} has no column {', '.join(missing)}; "
            f"it needs {', '.join(_COLUMNS)}."
        )
    return _formations(rows, path.name)


def _formations(rows: list[tuple[int, dict[str, str]]], file: str) -> dict[str, dict[str, float]]:
    """Return formations from the lines of a table."""
    out: dict[str, dict[str, float]] = {}
    spelling: dict[str, str] = {}
    faults = []
    for line, row in rows:
        name, lithology, written = ((row[column] or "").strip() for column in _COLUMNS)
        try:
            percent = float(written.removesuffix("%").replace(",", "."))
        except ValueError:
            percent = -1.0
        if not name or not lithology:
            faults.append(f"{file}, line {line}: formation or lithology is blank")
        elif not 0.0 <= percent <= 100.0:
            faults.append(f'{file}, line {line}: percent is "{written}", must be from 0 to 100')
        else:
            mix = out.setdefault(spelling.setdefault(plain(name), name), {})
            if plain(lithology) in {plain(each) for each in mix}:
                faults.append(f'{file}, line {line}: "{name}" has "{lithology}" twice')
            mix[lithology] = percent
    if faults:
        raise UserError(faults, f"{file} is not a valid table of formations:")
    return out


def _pairs(word: str) -> list[tuple[str, float]]:
    """Return names and numbers of a cell, numbers all before or all behind their names.

    Examples
    --------
    >>> _pairs("Sandstone 60 shale 40")
    [('sandstone', 60.0), ('shale', 40.0)]
    >>> _pairs("60% sandstone, 40% black shale")
    [('sandstone', 60.0), ('black shale', 40.0)]
    >>> _pairs("sandstone / shale")
    []
    """
    pieces = re.split(_NUMBER, f" {word.lower()} ")
    texts = [piece.strip(_BETWEEN) for piece in pieces[::2]]
    numbers = [float(number.replace(",", ".")) for number in pieces[1::2]]
    if not numbers:
        return []
    before, behind = texts[:-1], texts[1:]
    if not texts[0] and all(behind):
        return [(_bare(name), number) for name, number in zip(behind, numbers, strict=True)]
    if not texts[-1] and all(before):
        return [(_bare(name), number) for name, number in zip(before, numbers, strict=True)]
    return []


def _bare(name: str) -> str:
    """Return a name without the word that joined it to the one beside."""
    return re.sub(r"^(and|with)\s+|\s+(and|with)$", "", name).strip(_BETWEEN)
