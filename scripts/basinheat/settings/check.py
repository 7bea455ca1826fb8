"""What only the files can tell: whether they exist, hold the columns named, and fit together."""

from __future__ import annotations

import os
from collections.abc import Iterator, Mapping
from pathlib import Path
from typing import Any, TypeVar

from pydantic import BaseModel, ValidationError

from basinheat.errors import UserError
from basinheat.settings.check_tables import table_faults
from basinheat.settings.files import located
from basinheat.settings.heat import Conductivity
from basinheat.settings.inputs import Rasters, ReadingsFile, TableFile, WellsFile
from basinheat.settings.maps import Kriging, Maps

S = TypeVar("S", bound=BaseModel)

_TABLES = {
    "wells": WellsFile,
    "readings": ReadingsFile,
    "layers": TableFile,
    "surveys": TableFile,
}


def check(scenarios: Mapping[str, Mapping[str, Any]], folder: str | Path) -> list[str]:
    """Return one line per fault of the files, coordinates and units that configs name.

    Parts that are not valid by themselves are passed over: their faults are told elsewhere.

    Parameters
    ----------
    scenarios : mapping
        Scenario to its raw config, overlay merged; ``base`` among them.
    folder : str or Path
        Where relative paths start.
    """
    base = scenarios["base"]
    crs = base.get("crs")
    faults = _crs("crs", crs, for_maps=True) if isinstance(crs, str) else []
    faults += _inputs(base.get("inputs"), folder)
    maps = _valid(Maps, base.get("maps", {}))
    if maps is not None:
        faults += _absent("maps.mask.polygon", maps.mask.polygon, folder)
        if isinstance(maps.extent, str) and maps.extent != "wells":
            faults += _absent("maps.extent", maps.extent, folder)
    for name, config in scenarios.items():
        prefix = "" if name == "base" else f"scenarios.{name}."
        faults += [f"{prefix}{fault}" for fault in _scenario(config, folder) if fault not in faults]
    return faults


def _inputs(inputs: Any, folder: str | Path) -> list[str]:
    """Return the faults of the section ``inputs``."""
    if not isinstance(inputs, Mapping):
        return []
    faults = []
    for kind, path, table in _tables(inputs):
        faults += table_faults(path, kind, table, folder)
        if isinstance(table, WellsFile) and table.crs is not None:
            faults += _crs(f"{path}.crs", table.crs)
    rasters = _valid(Rasters, inputs.get("rasters", {}))
    for key, name in rasters or ():
        faults += _absent(f"inputs.rasters.{key}", name, folder)
    decisions = inputs.get("decisions")
    return faults + (
        _absent("inputs.decisions", decisions, folder) if isinstance(decisions, str) else []
    )


def _tables(inputs: Mapping[str, Any]) -> Iterator[tuple[str, str, TableFile]]:
    """Yield kind, path and entry of every input table that is valid by itself."""
    for kind, model in _TABLES.items():
        entries = inputs.get(kind, [])
        for index, entry in enumerate(entries if isinstance(entries, list) else []):
            table = _valid(model, entry)
            if table is not None:
                yield kind, f"inputs.{kind}[{index}]", table


def _scenario(config: Mapping[str, Any], folder: str | Path) -> list[str]:
    """Return the faults of what a scenario may change."""
    faults = []
    kriging = _valid(Kriging, config.get("kriging", {}))
    if kriging is not None:
        faults += _pinned("kriging.variogram.pinned", kriging.variogram.pinned, folder)
    conductivity = _valid(Conductivity, config.get("conductivity", {}))
    if conductivity is not None:
        faults += _absent("conductivity.catalogue", conductivity.catalogue, folder)
    surface, inputs = config.get("surface_temperature"), config.get("inputs")
    if isinstance(surface, Mapping) and isinstance(inputs, Mapping):
        faults += _surface_source(surface.get("model"), inputs)
    return faults


def _surface_source(model: Any, inputs: Mapping[str, Any]) -> list[str]:
    """Return what a model of the surface temperature misses among the inputs."""
    rasters = _valid(Rasters, inputs.get("rasters", {}))
    if model == "raster" and rasters is not None and rasters.surface_temperature is None:
        return ["surface_temperature.model: raster needs inputs.rasters.surface_temperature"]
    if model != "column":
        return []
    return [
        f"surface_temperature.model: column needs surface_temperature in {path}.columns"
        for kind, path, table in _tables(inputs)
        if kind == "wells" and table.columns and "surface_temperature" not in table.columns
    ]


def _pinned(path: str, name: str | None, folder: str | Path) -> list[str]:
    """Return what keeps a file from being a reviewed covariance model."""
    absent = _absent(path, name, folder)
    if name is None or absent:
        return absent
    from basinheat import documents
    from basinheat.geostat.models import Covariance

    way_out = "take a heat_flow.json of results/.../variograms"
    try:
        record = documents.load(located(name, folder)[0])
        Covariance.from_dict(record["covariance"])
    except UserError as error:
        return [f"{path}: {name}: {fault}; {way_out}" for fault in error.faults]
    except (ValueError, KeyError, TypeError):
        return [f"{path}: {name} holds no covariance model; {way_out}"]
    return []


def _absent(path: str, name: str | None, folder: str | Path) -> list[str]:
    """Return a line where a named file does not exist."""
    return [
        f"{path}: no file {file} (relative paths start at the config's own folder)"
        for file in located(name, folder)
        if not os.path.isfile(file)
    ]


def _crs(path: str, crs: str, for_maps: bool = False) -> list[str]:
    """Return a line where a coordinate reference system is not known, or cannot carry maps."""
    from basinheat.projection import crs_fault

    fault = crs_fault(crs, for_maps)
    return [f"{path}: {fault}"] if fault else []


def _valid(model: type[S], raw: Any) -> S | None:
    """Return the part of the config where it is valid by itself."""
    try:
        return model.model_validate(raw)
    except ValidationError:
        return None
