"""Formation tops: files that say where formations begin, as rows or as columns."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path

import numpy as np
import pandas as pd

from basinheat.errors import UserError
from basinheat.readers import InputTable, headers, read_inputs
from basinheat.settings.columns import LAYERS
from basinheat.settings.files import matches
from basinheat.settings.inputs import LayersFile


def read_layers(specs: Sequence[LayersFile], folder: str | Path) -> InputTable:
    """Read the layers, formations in columns as rows of tops.

    A blank or zero in the column of a formation means that the well has none; zero is a depth
    where the file says ``zero_is_missing: []``.

    Parameters
    ----------
    specs : sequence of LayersFile
        Files or globs, and their shape.
    folder : str or Path
        Where relative paths start.

    Returns
    -------
    InputTable
        Layers with ``shape`` and ``depth_reference`` of each row's file.
    """
    flat: list[LayersFile] = []
    lithologies, owners, faults = [], [], []
    for number, spec in enumerate(specs):
        try:
            parts = _flat(spec, number, folder)
        except UserError as error:
            faults += error.faults
            continue
        flat += [part for part, _ in parts]
        lithologies += [lithology for _, lithology in parts]
        owners += [number] * len(parts)
    if faults:
        raise UserError(faults)
    table = read_inputs("layers", flat, folder)
    frame = table.frame
    if "config" not in frame:
        return table.with_frame(frame.assign(shape="", depth_reference=""))
    part = frame["config"].to_numpy(np.int64)
    frame["config"] = np.array(owners, np.int64)[part]
    for name in ("shape", "depth_reference"):
        frame[name] = np.array([getattr(spec, name) for spec in flat], object)[part]
    wide = np.array([lithology is not None for lithology in lithologies], bool)[part]
    if not wide.any():
        return table
    # "" stands for formations of other shapes, whose rows name their rock themselves
    named = np.array([lithology or "" for lithology in lithologies], object)[part]
    frame["lithology"] = pd.Series(
        np.where(wide, named, frame["lithology"]), dtype="str", index=frame.index
    )
    zero_counts = np.array([getattr(spec, "zero_is_missing", None) == [] for spec in flat], bool)
    wrong = frame["wrong:top"].to_numpy(bool)
    top = frame["top"].to_numpy(float)
    absent = wide & ~wrong & (np.isnan(top) | ((top == 0.0) & ~zero_counts[part]))
    # a file of columns is read once per formation, and tells its broken lines as often
    told = table.broken.drop_duplicates(ignore_index=True)
    return replace(table.where(~absent), broken=told)


def with_bases(
    table: InputTable, total_depth: np.ndarray, total_m: np.ndarray
) -> tuple[InputTable, np.ndarray]:
    """Let each top's layer end where the next begins, the deepest at the well's total depth.

    Parameters
    ----------
    table : InputTable
        Layers of known wells with ``row, top_m, base_m``: below ground or sea floor.
    total_depth, total_m : ndarray, (n,)
        Total depth of each row's well, along the hole below the datum and vertical below ground,
        m; NaN where not known.

    Returns
    -------
    table : InputTable
        With ``base`` and ``base_m`` of tops filled.
    without : ndarray of bool, (n,)
        Tops whose layer has no base.
    """
    frame = table.frame
    tops = np.flatnonzero(frame["shape"].isin(["tops", "wide"]).to_numpy())
    without = np.zeros(len(frame), bool)
    if not len(tops):
        return table, without
    some = frame.iloc[tops]
    measured = (some["depth_reference"] == "measured").to_numpy()
    deep = np.where(measured, some["top"], some["top_m"])
    well, file = some["row"].to_numpy(), some["config"].to_numpy()
    order = np.lexsort([some["source_line"], some["source_file"], deep, file, well])
    last = np.r_[
        (well[order][1:] != well[order][:-1]) | (file[order][1:] != file[order][:-1]), True
    ]
    here, following = tops[order], tops[np.r_[order[1:], order[:1]]]
    ends = {
        "base": np.where(measured[order], total_depth[here], np.nan),
        "base_m": total_m[here],
    }
    for name, above in (("base", "top"), ("base_m", "top_m")):
        values = frame[name].to_numpy(float, copy=True)
        values[here] = np.where(last, ends[name], frame[above].to_numpy(float)[following])
        frame[name] = values
    deepest = here[last]
    without[deepest] = ~(frame["base_m"].to_numpy()[deepest] > frame["top_m"].to_numpy()[deepest])
    return table, without


def _flat(spec: LayersFile, number: int, folder: str | Path) -> list[tuple[LayersFile, str | None]]:
    """Return a file of intervals or tops per file or formation, with the formation's lithology."""
    if spec.shape == "intervals":
        return [(spec, None)]
    files = matches(spec.file, folder)
    if not files:
        raise UserError(f"inputs.layers[{number}].file: no file {spec.file}.")
    parts: list[tuple[LayersFile, str | None]] = []
    for path in files:
        columns = dict(spec.columns)
        if not columns:
            present = headers(path, spec)
            columns = {name: name for name in LAYERS if name in present}
        if "well" not in columns or (spec.shape == "tops" and "top" not in columns):
            raise UserError(f"{path}: there is no column well or top. Map them under `columns`.")
        columns.pop("base", None)
        one = {"file": path, "columns": columns}
        if spec.shape == "tops":
            parts.append((spec.model_copy(update=one), None))
            continue
        for header, lithology in spec.tops.items():
            named = {"columns": {"well": columns["well"], "top": header}}
            parts.append((spec.model_copy(update=one | named), lithology))
    return parts
