"""Formations in columns: how many tops, zeros and blanks each column of a wide file holds."""

from __future__ import annotations

from typing import Any

import numpy as np

from basinheat.firstlook.inputfile import InputFile
from basinheat.readers import read_raw
from basinheat.readers.numbers import numbers
from basinheat.settings.columns import LAYERS
from basinheat.units import conversion


def formations(file: InputFile) -> tuple[list[dict[str, Any]], int]:
    """Return what the columns of the formations of a file hold, and the wells (rows) of the file.

    Parameters
    ----------
    file : InputFile
        A file of layers; nothing is told of other shapes than wide.

    Returns
    -------
    list of dict
        ``header, lithology, tops, zeros, blanks, wrong`` (rows each), ``middle_m``: the median of
        the tops that are not 0, m; None without.
    int
        Rows.
    """
    wanted = getattr(file.spec, "tops", {})
    if file.table != "layers" or not wanted:
        return [], 0
    raw = read_raw(file.path, file.spec, list(wanted))
    scale, offset = conversion(file.unit("top"), LAYERS["top"].unit)
    found = []
    for header, lithology in wanted.items():
        spec = file.spec
        cells = numbers(raw.cells[header], spec.missing, spec.decimal, spec.thousands)
        zero = cells.values == 0.0
        top = np.isfinite(cells.values) & ~zero
        middle = float(np.median(cells.values[top]) * scale + offset) if top.any() else None
        found.append(
            {
                "header": header[:200],
                "lithology": lithology[:200],
                "tops": int(top.sum()),
                "zeros": int(zero.sum()),
                "blanks": int((np.isnan(cells.values) & ~cells.wrong).sum()),
                "wrong": int(cells.wrong.sum()),
                "middle_m": middle,
            }
        )
    return found, len(raw.cells)
