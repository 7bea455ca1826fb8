"""Where the files of a config lie: relative paths start at the config's own folder."""

from __future__ import annotations

import glob
import os
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from basinheat.settings.heat import Conductivity
from basinheat.settings.inputs import Inputs
from basinheat.settings.maps import Maps
from basinheat.settings.model import Settings

_SHAPEFILE = (".dbf", ".shx", ".prj", ".cpg")
_LIBRARY = Path(__file__).parents[1]
_CATALOGUES = _LIBRARY / "conductivity" / "catalogues"


def nearby(path: str | Path) -> str:
    """Return the path relative to the current folder where it lies inside it, else absolute.

    Jobs remember the paths they read, so a project moved as a whole needs relative ones.
    """
    path, here = os.path.abspath(path), os.getcwd()
    return os.path.relpath(path, here) if Path(path).is_relative_to(here) else path


def data_files(folder: str) -> list[str]:
    """Return the files in a folder of the library that are no code, sorted.

    A rule that uses them reads them as inputs: the digest of the code does not see them.
    """
    found = (path for path in (_LIBRARY / folder).iterdir() if path.is_file())
    return sorted(nearby(path) for path in found if path.suffix not in (".py", ".pyc"))


def catalogue_file(source: str) -> str:
    """Return the file of a set of conductivities that comes with the program, or the path itself.

    A rule that uses it reads it as an input.
    """
    return nearby(_CATALOGUES / f"{source}.csv") if source in catalogue_sets() else source


def catalogue_sets() -> list[str]:
    """Return the names of the sets of conductivities that come with the program, sorted."""
    return sorted(path.stem for path in _CATALOGUES.glob("*.csv"))


def formation_tables(conductivity: Mapping[str, Any]) -> list[str]:
    """Return the file of formations that a section's plain values name, in a list."""
    source = conductivity["formations"]
    return [source] if isinstance(source, str) else []


def _rock_tables(conductivity: Conductivity) -> list[str]:
    """Return the user's own files among the settings of rock, as the config names them."""
    named = [conductivity.catalogue, conductivity.formations]
    return [name for name in named if isinstance(name, str) and name not in catalogue_sets()]


def located(name: str | None, folder: str | Path) -> list[str]:
    """Return the path of a file of the config, in a list that is empty where none is named."""
    return [] if name is None else [os.path.normpath(os.path.join(folder, name))]


def matches(name: str, folder: str | Path) -> list[str]:
    """Return the files that a path or glob of the config names, sorted."""
    path = located(name, folder)[0]
    if os.path.isfile(path):
        return [path]
    return sorted(found for found in glob.glob(path, recursive=True) if os.path.isfile(found))


def input_tables(inputs: Inputs, folder: str | Path) -> list[str]:
    """Return every table the inputs name, sorted."""
    kinds = ("wells", "readings", "layers", "surveys", "heat_flow", "las")
    tables = [table for kind in kinds for table in getattr(inputs, kind)]
    found = {path for table in tables for path in matches(table.file, folder)}
    beside = {part for path in found for part in _parts(path)}
    return sorted(found.union(beside, located(inputs.decisions, folder)))


def _parts(path: str) -> list[str]:
    """Return the files that belong to a shapefile: its attributes, index, CRS and encoding."""
    stem, suffix = os.path.splitext(path)
    if suffix.lower() != ".shp":
        return []
    near = [f"{stem}{case(part)}" for part in _SHAPEFILE for case in (str.lower, str.upper)]
    return [part for part in near if os.path.isfile(part)]


def input_files(settings: Settings, folder: str | Path) -> list[str]:
    """Return every file that a scenario's settings name, sorted."""
    singles = (
        *(path for _, path in settings.inputs.rasters),
        settings.kriging.variogram.pinned,
        *_rock_tables(settings.conductivity),
    )
    found = {path for name in singles for path in located(name, folder)}
    found.update(input_tables(settings.inputs, folder), polygons(settings.maps, folder))
    return sorted(found)


def polygons(maps: Maps, folder: str | Path) -> list[str]:
    """Return the polygon files that bound the maps."""
    drawn = isinstance(maps.extent, str) and maps.extent != "wells"
    extent = located(maps.extent, folder) if drawn else []
    return [*located(maps.mask.polygon, folder), *extent]


def with_paths(settings: Settings, folder: str | Path) -> dict[str, Any]:
    """Return the settings as plain values, single files as paths that can be opened from here.

    The input tables stay as written: the reader names them in every record it refuses.
    """
    plain = settings.model_dump(mode="json", exclude={"scenarios"})
    for section, key in (
        *((plain["inputs"]["rasters"], raster) for raster in plain["inputs"]["rasters"]),
        (plain["maps"]["mask"], "polygon"),
        (plain["kriging"]["variogram"], "pinned"),
    ):
        section[key] = next(iter(located(section[key], folder)), None)
    own = _rock_tables(settings.conductivity)
    for key in ("catalogue", "formations"):
        named = plain["conductivity"][key]
        plain["conductivity"][key] = located(named, folder)[0] if named in own else named
    extent = plain["maps"]["extent"]
    if isinstance(extent, str) and extent != "wells":
        plain["maps"]["extent"] = located(extent, folder)[0]
    return plain
