"""What only the files can tell: whether they exist, hold the columns named, and fit together."""

from __future__ import annotations

import os
from collections.abc import Iterator, Mapping
from pathlib import Path
from typing import Any, TypeVar

from pydantic import BaseModel, ValidationError

from basinheat.errors import UserError
from basinheat.settings.check_tables import las_units, rock_faults, table_faults
from basinheat.settings.files import catalogue_sets, located, matches
from basinheat.settings.heat import Conductivity
from basinheat.settings.inputs import (
    HeatFlowFile,
    LasFile,
    LayersFile,
    PlacesFile,
    Rasters,
    ReadingsFile,
    TableFile,
    WellsFile,
)
from basinheat.settings.maps import Kriging, Maps

S = TypeVar("S", bound=BaseModel)

_TABLES = {
    "wells": WellsFile,
    "readings": ReadingsFile,
    "layers": LayersFile,
    "surveys": TableFile,
    "heat_flow": HeatFlowFile,
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
        if isinstance(table, PlacesFile) and table.crs is not None:
            faults += _crs(f"{path}.crs", table.crs)
    faults += _logs(inputs.get("las"), folder)
    rasters = _valid(Rasters, inputs.get("rasters", {}))
    for key, name in rasters or ():
        faults += _absent(f"inputs.rasters.{key}", name, folder)
    decisions = inputs.get("decisions")
    return faults + (
        _absent("inputs.decisions", decisions, folder) if isinstance(decisions, str) else []
    )


def _logs(entries: Any, folder: str | Path) -> list[str]:
    """Return the faults of the well logs: none found, CRS or unit that is none."""
    faults = []
    for index, entry in enumerate(entries if isinstance(entries, list) else []):
        logs, path = _valid(LasFile, entry), f"inputs.las[{index}]"
        if logs is None:
            continue
        if not matches(logs.file, folder):
            faults += _absent(f"{path}.file", logs.file, folder)
        if logs.crs is not None:
            faults += _crs(f"{path}.crs", logs.crs)
        faults += las_units(path, logs)
    return faults


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
    surface, inputs = config.get("surface_temperature"), config.get("inputs")
    inputs = inputs if isinstance(inputs, Mapping) else {}
    conductivity = _valid(Conductivity, config.get("conductivity", {}))
    if conductivity is not None:
        faults += _rocks(conductivity, inputs, folder)
    if isinstance(surface, Mapping):
        faults += _surface_source(surface.get("model"), inputs)
    return faults


def _rocks(conductivity: Conductivity, inputs: Mapping[str, Any], folder: str | Path) -> list[str]:
    """Return the faults of the files of rock, and of the names of rock in the config."""
    source, formations = conductivity.catalogue, conductivity.formations
    faults = []
    if source not in catalogue_sets():
        faults = [
            f"{fault}; a set of the program is {' or '.join(catalogue_sets())}"
            for fault in _absent("conductivity.catalogue", source, folder)
        ]
    if isinstance(formations, str):
        faults += _absent("conductivity.formations", formations, folder)
    return faults or _names_of_rock(conductivity, inputs, folder)


def _names_of_rock(
    conductivity: Conductivity, inputs: Mapping[str, Any], folder: str | Path
) -> list[str]:
    """Return the names of rock in the config that stand for nothing."""
    from basinheat.conductivity.mixtures import Vocabulary, load_formations
    from basinheat.conductivity.overrides import load_overridden

    source, formations = conductivity.catalogue, conductivity.formations
    if source not in catalogue_sets():
        source = located(source, folder)[0]
    if isinstance(formations, str):
        formations = located(formations, folder)[0]
    try:
        rocks = load_overridden(source, conductivity.model_dump())
        words = Vocabulary(rocks, conductivity.lithologies, load_formations(formations))
    except UserError as error:
        return list(error.faults)
    faults = [
        f'conductivity.{setting}: "{name}" {words.meaning(name).why}'
        for setting in ("default_lithology", "non_net_lithology")
        if words.meaning(name := getattr(conductivity, setting)).code
    ]
    tops = [(path, table) for _, path, table in _tables(inputs) if isinstance(table, LayersFile)]
    return faults + [fault for path, table in tops for fault in rock_faults(path, table, words)]


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
