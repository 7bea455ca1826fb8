"""Where the files of a config lie: relative paths start at the config's own folder."""

from __future__ import annotations

import glob
import os
from pathlib import Path
from typing import Any

from basinheat.settings.inputs import Inputs
from basinheat.settings.maps import Maps
from basinheat.settings.model import Settings

_LIBRARY = Path(__file__).parents[1]


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
    tables = [*inputs.wells, *inputs.readings, *inputs.layers, *inputs.surveys]
    found = {path for table in tables for path in matches(table.file, folder)}
    return sorted(found.union(located(inputs.decisions, folder)))


def input_files(settings: Settings, folder: str | Path) -> list[str]:
    """Return every file that a scenario's settings name, sorted."""
    singles = (
        *(path for _, path in settings.inputs.rasters),
        settings.kriging.variogram.pinned,
        settings.conductivity.catalogue,
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
        (plain["conductivity"], "catalogue"),
    ):
        section[key] = next(iter(located(section[key], folder)), None)
    extent = plain["maps"]["extent"]
    if isinstance(extent, str) and extent != "wells":
        plain["maps"]["extent"] = located(extent, folder)[0]
    return plain
