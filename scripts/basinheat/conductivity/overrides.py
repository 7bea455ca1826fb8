"""Values of the config in place of the catalogue's, and rocks that only the config describes."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np

from basinheat.conductivity.catalogue import Catalogue, load, plain
from basinheat.conductivity.conditions import LAW_NAMES
from basinheat.errors import UserError

Stated = Mapping[str, Mapping[str, Any]]

# What of a rock the config may state: the catalogue's array, its unit, and what counts for a rock
# of its own where it is not stated (common practice, no source).
_PROPERTIES = {
    "conductivity_w_mk": ("conductivity_w_mk", 1.0, np.nan),
    "std_ln": ("std_ln", 1.0, 0.15),
    "porosity_surface": ("porosity_surface", 1.0, 0.0),
    "compaction_per_km": ("compaction_per_m", 1e-3, 0.0),
    "heat_production_uw_m3": ("heat_production_w_m3", 1e-6, 1.2),
    "anisotropy": ("anisotropy", 1.0, 1.0),
}
# Laws by which catalogues mark the classes of rock that the config may give other laws.
_CLASSES = {
    "sedimentary": "vosteen2003_sed",
    "crystalline": "vosteen2003_cryst",
    "salt": "halite",
}
_SEDIMENT = LAW_NAMES.index(_CLASSES["sedimentary"])


def load_overridden(source: str | Path | None, conductivity: Mapping[str, Any]) -> Catalogue:
    """Read a catalogue and put the config's own values into it.

    Parameters
    ----------
    source : str, Path or None
        As for :func:`basinheat.conductivity.catalogue.load`.
    conductivity : mapping
        Plain values of that section of the settings; ``std_ln``, ``laws`` and ``overrides`` are
        used, the last before the others.
    """
    rocks = load(source)
    if conductivity.get("std_ln"):
        rocks = replace(rocks, std_ln=np.full(len(rocks.names), float(conductivity["std_ln"])))
    return overridden(rocks, conductivity["overrides"], conductivity.get("laws", {}))


def law_of(kind: str, laws: Mapping[str, str]) -> int:
    """Return the law of a class of rock, as its place in ``conditions.LAW_NAMES``."""
    return LAW_NAMES.index(laws.get(kind, _CLASSES[kind]))


def overridden(
    rocks: Catalogue, overrides: Stated, laws: Mapping[str, str] | None = None
) -> Catalogue:
    """Return the catalogue with values of the config in place of its own.

    Parameters
    ----------
    rocks : Catalogue
    overrides : mapping
        Lithology or formation to properties, None for what stays. A name that the catalogue does
        not know becomes a rock of its own; it needs ``conductivity_w_mk``, of the whole rock where
        no ``porosity_surface`` is stated, and counts as sediment.
    laws : mapping, optional
        ``sedimentary``, ``crystalline``, ``salt`` to the law of the class; overrides go before.

    Raises
    ------
    UserError
        Rocks of their own without conductivity, all at once.
    """
    stated = {
        plain(name): {key: value for key, value in values.items() if value is not None}
        for name, values in overrides.items()
    }
    new = [name for name in overrides if plain(name) not in rocks.aliases]
    faults = [
        f"conductivity.overrides.{name}: {rocks.hint(name)}; as a rock of its own it needs "
        "conductivity_w_mk"
        for name in new
        if "conductivity_w_mk" not in stated[plain(name)]
    ]
    if faults:
        raise UserError(faults)
    rocks = _with_new(rocks, list(dict.fromkeys(map(plain, new))))
    sources = list(rocks.sources)
    arrays = {name: getattr(rocks, name).copy() for name, _, _ in _PROPERTIES.values()}
    law = rocks.law.copy()
    for kind, usual in _CLASSES.items():
        law[rocks.law == LAW_NAMES.index(usual)] = law_of(kind, laws or {})
    for name, values in stated.items():
        place = rocks.aliases[name]
        for key, value in values.items():
            if key == "law":
                law[place] = LAW_NAMES.index(value)
            else:
                array, unit, _ = _PROPERTIES[key]
                arrays[array][place] = value * unit
        told = f"Config: {', '.join(sorted(values))}. " if values else ""
        sources[place] = f"{told}{sources[place]}".strip()
    return replace(rocks, **arrays, law=law, sources=tuple(sources))


def _with_new(rocks: Catalogue, names: list[str]) -> Catalogue:
    """Return the catalogue with rocks of whose properties nothing is stated yet."""
    count = len(names)
    arrays = {
        array: np.concatenate([getattr(rocks, array), np.full(count, unstated * unit)])
        for array, unit, unstated in _PROPERTIES.values()
    }
    places = range(len(rocks.names), len(rocks.names) + count)
    return replace(
        rocks,
        names=(*rocks.names, *names),
        aliases={**rocks.aliases, **dict(zip(names, places, strict=True))},
        law=np.concatenate([rocks.law, np.full(count, _SEDIMENT)]),
        sedimentary=np.concatenate([rocks.sedimentary, np.ones(count, bool)]),
        sources=(*rocks.sources, *[""] * count),
        made=rocks.made | set(names),
        **arrays,
    )
