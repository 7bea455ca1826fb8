"""From a raw config to complete settings, one per scenario, or to every fault at once."""

from __future__ import annotations

import sys
from collections.abc import Iterator, Mapping
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from basinheat.errors import UserError
from basinheat.settings.check import check
from basinheat.settings.faults import describe
from basinheat.settings.model import Settings
from basinheat.settings.wells import surface_keys

OVERLAID = (
    "surface_temperature",
    "correction",
    "gradient",
    "conductivity",
    "heat_flow",
    "kriging",
)
# YAML may say much in little: an alias that holds itself never ends.
DEEPEST, MOST = 50, 100_000


def load_config(
    raw: Mapping[str, Any], source: str, folder: str | Path, check_files: bool = True
) -> dict[str, Settings]:
    """Return the settings of every scenario, ``base`` first.

    Parameters
    ----------
    raw : mapping
        The config as read from YAML.
    source : str
        Name of the config file, for messages.
    folder : str or Path
        Where relative paths of the config start.
    check_files : bool, optional
        Whether to look into the files that the config names; jobs on a cluster need not again.

    Returns
    -------
    dict
        Scenario to complete, frozen settings.

    Raises
    ------
    UserError
        With one line for every fault.
    """
    plain = _plain(raw, iter(range(MOST)))
    faults: list[str] = []
    configs = {"base": plain}
    for name, overlay in _overlays(plain, faults).items():
        configs[name] = _overlaid(plain, overlay)
    settings: dict[str, Settings] = {}
    for name, config in configs.items():
        try:
            settings[name] = Settings.model_validate(config)
        except ValidationError as error:
            prefix = "" if name == "base" else f"scenarios.{name}."
            lines = describe(error, config, Settings)
            faults += [f"{prefix}{line}" for line in lines if line not in faults]
    if check_files:
        faults += check(configs, folder)
    if faults:
        raise UserError(list(dict.fromkeys(faults)), heading=f"{source} is not valid:")
    return settings


def load_or_exit(
    raw: Mapping[str, Any], source: str, folder: str | Path, check_files: bool = True
) -> dict[str, Settings]:
    """Return the settings, or end the program with the faults as plain lines."""
    try:
        return load_config(raw, source, folder, check_files)
    except UserError as error:
        sys.exit(str(error))


def merged(base: Any, overlay: Any) -> Any:
    """Return the overlay laid over the base: mappings merge at every depth, all else replaces."""
    if not (isinstance(base, Mapping) and isinstance(overlay, Mapping)):
        return overlay
    both = {key: merged(base[key], overlay[key]) for key in base if key in overlay}
    return {**base, **overlay, **both}


def _plain(raw: Any, left: Iterator[int], depth: int = 0) -> Any:
    """Return the config as plain dicts, their keys sorted; an empty section means its defaults.

    Sorted, so that the order in which a config is written changes neither jobs nor bytes. ``left``
    counts down the values there may be.
    """
    if depth > DEEPEST or next(left, None) is None:
        raise UserError(
            f"the config: it has more than {MOST:,} values or {DEEPEST} levels one inside another; "
            "does an alias (*name) stand inside what it names?"
        )
    if isinstance(raw, Mapping):
        filled = {
            str(key): _plain(value, left, depth + 1)
            for key, value in raw.items()
            if value is not None
        }
        return dict(sorted(filled.items()))
    return [_plain(value, left, depth + 1) for value in raw] if isinstance(raw, list) else raw


def _overlays(plain: dict[str, Any], faults: list[str]) -> dict[str, dict[str, Any]]:
    """Return the scenarios' overlays, and list those that lay over what all scenarios share."""
    scenarios = plain.get("scenarios", {})
    if not isinstance(scenarios, Mapping):
        return {}  # the whole config's own fault
    for name, overlay in scenarios.items():
        path = f"scenarios.{name}"
        if name == "base":
            faults.append(f"{path}: base is the config itself; choose another name")
        elif isinstance(overlay, Mapping):
            faults += [
                f"{path}.{key}: a scenario may change only {', '.join(OVERLAID)}"
                for key in overlay
                if key not in OVERLAID
            ]
    return {
        name: {key: value for key, value in overlay.items() if key in OVERLAID}
        for name, overlay in scenarios.items()
        if isinstance(overlay, Mapping) and name != "base"
    }


def _overlaid(plain: Mapping[str, Any], overlay: Mapping[str, Any]) -> dict[str, Any]:
    """Return the config with a scenario's overlay laid over it."""
    config = dict(merged(plain, overlay))
    surface, base = overlay.get("surface_temperature"), plain.get("surface_temperature")
    if isinstance(surface, Mapping) and isinstance(base, Mapping) and "model" in surface:
        # Another model has other keys: what only the old one knows would be refused.
        known = surface_keys(surface["model"])
        kept = {key: value for key, value in base.items() if key in known}
        config["surface_temperature"] = merged(kept, surface)
    return config
