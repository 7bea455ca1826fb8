"""What closes a delivery: the rejects as CSV, README.txt and the manifest of all files."""

from __future__ import annotations

import json
import os
from collections.abc import Mapping
from pathlib import Path, PurePosixPath, PureWindowsPath
from typing import Any

import pandas as pd

from basinheat import provenance
from basinheat.delivery import readme, rejects
from basinheat.delivery.metadata import About
from basinheat.grid import Grid

NAME = "manifest.json"


def write(
    folder: str | Path,
    grid: Grid,
    rejected: pd.DataFrame,
    about: About,
    config: Mapping[str, Any],
    inputs: Mapping[str, str],
    code: Mapping[str, str],
) -> None:
    """Write rejected.csv, README.txt and manifest.json into a delivery that is else complete.

    Parameters
    ----------
    folder : str or Path
        The delivery.
    grid : Grid
        Of the maps.
    rejected : DataFrame
        What ``rejects.join`` made of the ledgers.
    about : About
        Of the delivery.
    config : mapping
        The scenario's settings as the user could write them.
    inputs : mapping
        Input file, relative to the config, to SHA-256.
    code : mapping
        Rule to digest of the code it runs.
    """
    folder = Path(folder)
    rejects.write(rejected, folder / "rejected.csv")
    rasters = sorted(path.stem for path in folder.glob("rasters/*.tif"))
    _replace(folder / "README.txt", readme.text(rasters, grid, about))
    content = {
        "files": digests(folder),
        "config": without_folders(config),
        "inputs": dict(inputs),
        "versions": provenance.versions(),
        "code": dict(code),
    }
    text = json.dumps(content, indent=1, sort_keys=True, ensure_ascii=False, allow_nan=False)
    _replace(folder / NAME, text + "\n")


def without_folders(value: Any) -> Any:
    """Return settings in which an absolute path goes by its name: where it lay is of no use.

    Examples
    --------
    >>> without_folders({"wells": [{"file": "/data/of/mine/wells.csv"}], "crs": "EPSG:32631"})
    {'wells': [{'file': 'wells.csv'}], 'crs': 'EPSG:32631'}
    """
    if isinstance(value, Mapping):
        return {key: without_folders(each) for key, each in value.items()}
    if isinstance(value, list | tuple):
        return [without_folders(each) for each in value]
    if isinstance(value, str):
        for kind in (PurePosixPath, PureWindowsPath):
            if kind(value).is_absolute():
                return kind(value).name
    return value


def digests(folder: Path) -> dict[str, str]:
    """Return the SHA-256 of every file of a delivery but the manifest, by its relative path."""
    files = (path for path in folder.rglob("*") if path.is_file() and path != folder / NAME)
    finished = (path for path in files if path.suffix != ".part")
    return provenance.file_digests(finished, folder)


def _replace(path: Path, text: str) -> None:
    part = path.with_name(f"{path.name}.part")
    part.write_text(text, encoding="utf-8", newline="\n")
    os.replace(part, path)
