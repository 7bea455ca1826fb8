"""The lines of the config as they would be if every question were answered with yes."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import PurePath
from typing import Any

from basinheat.firstlook.proposals import typed

Entry = Mapping[str, Any]
UNKNOWN = "?"  # an answer that the user alone knows


def stated(settings: Any) -> dict[str, Any]:
    """Return what the config states of inputs, surface and rocks, without what is the default.

    Parameters
    ----------
    settings : Settings
        The config.

    Returns
    -------
    dict
        ``inputs, surface_temperature, conductivity``; files outside the config's folder by their
        names alone, since results must not tell where on a machine a project lies.
    """
    out: dict[str, Any] = {
        name: getattr(settings, name).model_dump(mode="json", exclude_defaults=True)
        for name in ("inputs", "surface_temperature")
    }
    out["conductivity"] = {"lithologies": dict(settings.conductivity.lithologies)}
    # Nothing is asked about rasters and decisions, whose paths are of this machine too.
    out["inputs"] = {table: each for table, each in out["inputs"].items() if isinstance(each, list)}
    for entries in out["inputs"].values():
        for entry in entries:
            if PurePath(entry["file"]).is_absolute():
                entry["file"] = PurePath(entry["file"]).name
    return out


def together(record: Entry) -> list[str]:
    """Return the config with every named answer in it, as lines of YAML: each key as a whole.

    Where two answers name the same key, the more pressing one counts; questions with more than one
    possible answer are left out, and what only the user knows stands as a comment.

    Parameters
    ----------
    record : mapping
        Of ``stage.look``.
    """
    answers: dict[str, dict[str, Any]] = {}
    for each in record["questions"]:
        here = answers.setdefault(each["at"], {})
        for key, value in each["lines"].items():
            here[key] = _joined(here[key], value) if key in here else value
    answers = {at: found for at, found in answers.items() if found}
    lines: list[str] = []
    if any(at.startswith("inputs") for at in answers):
        lines += ["inputs:", *_inputs(record["stated"]["inputs"], answers)]
    for at, found in answers.items():
        if not at.startswith("inputs"):
            lines += [f"{at}:", *_keys(record["stated"].get(at, {}), found, "  ")]
    return lines


def _inputs(inputs: Entry, answers: Mapping[str, Entry]) -> list[str]:
    """Return the keys of the inputs that an answer changes, lists with all their entries."""
    lines = _keys({}, answers.get("inputs", {}), "  ")
    for table, entries in inputs.items():
        if not any(at.startswith(f"inputs.{table}[") for at in answers):
            continue
        lines.append(f"  {table}:")
        for number, entry in enumerate(entries):
            found = answers.get(f"inputs.{table}[{number}]", {})
            rest = _keys({k: v for k, v in entry.items() if k != "file"}, found, "      ")
            lines += [f"    - file: {typed(entry['file'])}", *rest]
    return lines


def _keys(known: Entry, found: Entry, indent: str) -> list[str]:
    """Return keys with what is stated and what is answered."""
    lines = []
    for key, value in {**known, **{k: _joined(v, known.get(k)) for k, v in found.items()}}.items():
        if not isinstance(value, Mapping):
            lines.append(f"{indent}{key}: {typed(value)}")
            continue
        items = [
            f"{'# ' if one == UNKNOWN else ''}{typed(name)}: {typed(one)}"
            for name, one in value.items()
        ]
        bare = all(one == UNKNOWN for one in value.values())
        # A key with comments alone would be null, which is no mapping.
        lines.append(f"{indent}{'# ' if bare else ''}{key}:")
        lines += [f"{indent}  {item}" for item in items]
    return lines


def _joined(first: Any, second: Any) -> Any:
    """Return two answers as one: mappings and lists joined, else the first."""
    if isinstance(first, Mapping) and isinstance(second, Mapping):
        return {**second, **first}
    if isinstance(first, list) and isinstance(second, list):
        return list(dict.fromkeys([*second, *first]))
    return first
