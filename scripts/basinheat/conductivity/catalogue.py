"""The catalogue of rocks: conductivity, its uncertainty, porosity and heat production."""

from __future__ import annotations

import csv
import difflib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from basinheat.conductivity.conditions import LAW_NAMES
from basinheat.errors import UserError

Array = NDArray[np.float64]
FOLDER = Path(__file__).with_name("catalogues")
DEFAULT = "beardsmore2001"
OWN = FOLDER / f"{DEFAULT}.csv"

_RANGES = {
    "conductivity_w_mk": (0.02, 20.0),
    "std_ln": (0.001, 1.5),
    "porosity_surface": (0.0, 0.95),
    "compaction_per_km": (0.0, 10.0),
    "heat_production_uw_m3": (0.0, 50.0),
}
_COLUMNS = ("lithology", "aliases", *_RANGES, "law", "source")


@dataclass(frozen=True)
class Catalogue:
    """Rocks by place: names and one array a property, all of length m.

    ``conductivity_w_mk`` is the matrix at 25 degC (the whole rock where ``porosity_surface`` is
    0), ``std_ln`` the standard deviation of ln k common to a basin, ``law`` the place of the
    temperature law in ``conditions.LAW_NAMES``, ``aliases`` other names: place of the rock,
    ``anisotropy`` k along over k across the bedding (``conductivity_w_mk`` is that across),
    ``sedimentary`` whether pressure counts, ``made`` the rocks that only the config describes.
    """

    names: tuple[str, ...]
    aliases: dict[str, int]
    conductivity_w_mk: Array
    std_ln: Array
    porosity_surface: Array
    compaction_per_m: Array
    heat_production_w_m3: Array
    law: NDArray[np.int64]
    sources: tuple[str, ...]
    anisotropy: Array
    sedimentary: NDArray[np.bool_]
    made: frozenset[str] = frozenset()

    def places(self, names: Iterable[str], mapping: Mapping[str, str]) -> dict[str, int]:
        """Return the place of each name, by the mapping, the catalogue's names and aliases.

        Parameters
        ----------
        names : iterable of str
            Names as in the layers; spelling of case, spaces and hyphens does not matter.
        mapping : mapping
            Name in the layers: name in the catalogue; goes before the catalogue's own names.

        Raises
        ------
        UserError
            Every name that is not known, with the nearest that is.
        """
        own = {plain(name): plain(to) for name, to in mapping.items()}
        faults = [
            f'conductivity.lithologies.{name}: "{to}" is not in the catalogue; {self._near(to)}'
            for name, to in mapping.items()
            if plain(to) not in self.aliases
        ]
        found = {}
        for name in sorted(set(names)):
            place = self.aliases.get(own.get(plain(name), plain(name)))
            if place is not None:
                found[name] = place
            elif plain(name) not in own:
                faults.append(
                    f'lithology "{name}" is not in the conductivity catalogue; {self._near(name)}'
                )
        if faults:
            raise UserError(
                faults,
                "name each lithology's rock under conductivity.lithologies "
                "(name in the layers: name in the catalogue):",
            )
        return found

    def unknown(self, names: Iterable[str], mapping: Mapping[str, str]) -> dict[str, str]:
        """Return the names that neither mapping nor catalogue knows: the nearest known."""
        known = self.aliases.keys() | {plain(name) for name in mapping}
        return {name: self._near(name) for name in sorted(set(names)) if plain(name) not in known}

    def hint(self, name: str) -> str:
        """Return that a name is not known, and the rock whose name is spelled most like it."""
        return f"is not in the catalogue; {self._near(name)}"

    def _near(self, name: str) -> str:
        close = difflib.get_close_matches(plain(name), sorted(self.aliases), 1, 0.5)
        if close:
            return f"the nearest is {self.names[self.aliases[close[0]]]}"
        return f"choose one of {', '.join(self.names)}"


def plain(name: str) -> str:
    """Return a name in the catalogue's spelling.

    Examples
    --------
    >>> plain(" Rock-Salt ")
    'rock_salt'
    """
    return "_".join(str(name).lower().replace("-", " ").replace("_", " ").split())


def set_names() -> tuple[str, ...]:
    """Return the names of the sets that come with the program."""
    return tuple(sorted(path.stem for path in FOLDER.glob("*.csv")))


def set_file(source: str | Path) -> Path:
    """Return the file of a named set, or the path itself."""
    return FOLDER / f"{source}.csv" if str(source) in set_names() else Path(source)


def load(source: str | Path | None = None) -> Catalogue:
    """Read a catalogue; default the set ``DEFAULT``.

    Parameters
    ----------
    source : str or Path, optional
        Name of a set that comes with the program, or a CSV file of the same columns.

    Raises
    ------
    UserError
        Every fault, with its line.
    """
    path = set_file(DEFAULT if source is None else source)
    try:
        with path.open(encoding="utf-8-sig", newline="") as file:
            reader = csv.DictReader(file)
            header = tuple(reader.fieldnames or ())
            rows = [(reader.line_num, row) for row in reader]
    except (OSError, UnicodeDecodeError, csv.Error) as fault:
        raise UserError(f"conductivity.catalogue: {path} can't be read ({fault}).") from fault
    missing = [name for name in _COLUMNS if name not in header]
    if missing or not rows:
        what = f"columns {', '.join(missing)} are absent" if missing else "there is no row"
        raise UserError(f"{path.name}: {what}. Take the program's own catalogue as the pattern.")
    faults: list[str] = []
    numbers = [_numbers(row, f"{path.name}, line {line}", faults) for line, row in rows]
    aliases = _aliases(rows, path.name, faults)
    if faults:
        raise UserError(faults, f"{path.name} is not a valid catalogue:")
    column = {name: np.array([row[name] for row in numbers]) for name in _RANGES}
    return Catalogue(
        names=tuple(plain(row["lithology"]) for _, row in rows),
        aliases=aliases,
        conductivity_w_mk=column["conductivity_w_mk"],
        std_ln=column["std_ln"],
        porosity_surface=column["porosity_surface"],
        compaction_per_m=column["compaction_per_km"] / 1000.0,
        heat_production_w_m3=column["heat_production_uw_m3"] * 1e-6,
        law=np.array([LAW_NAMES.index(row["law"].strip()) for _, row in rows]),
        sources=tuple((row["source"] or "").strip() for _, row in rows),
        anisotropy=np.ones(len(rows)),
        sedimentary=np.array([row["law"].strip() == "vosteen2003_sed" for _, row in rows]),
    )


def _numbers(row: dict[str, str], where: str, faults: list[str]) -> dict[str, float]:
    """Return the numbers of a row; faults are added to the list."""
    out = {}
    for name, (low, high) in _RANGES.items():
        written = (row[name] or "").strip()
        try:
            out[name] = float(written)
        except ValueError:
            out[name] = np.nan
        if not low <= out[name] <= high:
            faults.append(f'{where}: {name} is "{written}", must be from {low:g} to {high:g}')
    law = (row["law"] or "").strip()
    if law not in LAW_NAMES:
        faults.append(f'{where}: law is "{law}", must be one of {", ".join(LAW_NAMES)}')
    return out


def _aliases(
    rows: list[tuple[int, dict[str, str]]], file: str, faults: list[str]
) -> dict[str, int]:
    """Return every name of every rock: its place; faults are added to the list."""
    out: dict[str, int] = {}
    for place, (line, row) in enumerate(rows):
        if not plain(row["lithology"] or ""):
            faults.append(f"{file}, line {line}: lithology is blank")
        for name in [row["lithology"] or "", *(row["aliases"] or "").split(";")]:
            if plain(name) and out.setdefault(plain(name), place) != place:
                faults.append(f'{file}, line {line}: "{name}" names two rocks')
    return out
