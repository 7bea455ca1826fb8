"""The small map of the wells, drawn inline and in characters."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np

WIDTH = 480.0  # of the drawing; its height follows
LEAST = 60.0
RADIUS, WIDEST = 3.2, 7.0
# Pixels around the frame, for the axes and the scale bar.
LEFT, RIGHT, ABOVE, BELOW = 58.0, 24.0, 8.0, 56.0
TICKS = 4.0  # along the longer side, at least
SCREEN_COLUMNS, SCREEN_ROWS = 64, 20
TALL = 2.0  # a character is about twice as high as wide
MARKS = ((100, "#"), (10, "O"), (3, "o"), (1, "."))  # wells in a character, at least


def svg(place: Mapping[str, Any]) -> str:
    """Return the map as inline SVG; numbers only, so that nothing needs escaping.

    Parameters
    ----------
    place : mapping
        ``map`` of the record.

    Returns
    -------
    str
        "" without wells.
    """
    if not place["wells"]:
        return ""
    cell = WIDTH / max(place["columns"], place["rows"])
    margin = WIDEST + 1.0
    width = max(cell * place["columns"], LEAST) + 2.0 * margin
    height = max(cell * place["rows"], LEAST) + 2.0 * margin
    dots = [
        f'<circle class="{"used" if used else "bare"}" cx="{margin + (column + 0.5) * cell:.1f}" '
        f'cy="{margin + (row + 0.5) * cell:.1f}" r="{_radius(count):.1f}"/>'
        for row, column, count, used in place["cells"]
    ]
    scale = cell / place["cell_m"]  # pixels a metre
    step = _round_length(max(width, height) / scale / TICKS)
    east = [(margin + (at - place["west"]) * scale, at)
            for at in _ticks(place["west"] - margin / scale, width / scale, step)]  # fmt: skip
    south = place["north"] - (height - margin) / scale
    north = [(margin + (place["north"] - at) * scale, at)
             for at in _ticks(south, height / scale, step)]  # fmt: skip
    wide, high = width + LEFT + RIGHT, height + ABOVE + BELOW
    return "\n".join(
        [
            f'<svg viewBox="{-LEFT:.0f} {-ABOVE:.0f} {wide:.0f} {high:.0f}" '
            f'width="{wide:.0f}" height="{high:.0f}" role="img" '
            'aria-label="Map of the wells, easting and northing in km">',
            f'<rect class="frame" x="0.5" y="0.5" width="{width - 1.0:.1f}" '
            f'height="{height - 1.0:.1f}"/>',
            *(line for at, metres in east for line in _east(at, metres, height)),
            *(line for at, metres in north for line in _north(at, metres)),
            f'<text x="{width / 2.0:.1f}" y="{height + 32.0:.1f}" text-anchor="middle">'
            "easting and northing, km</text>",
            *dots,
            *_bar(width, height, scale),
            "</svg>",
        ]
    )


def _east(at: float, metres: float, height: float) -> list[str]:
    """Return a tick of the lower edge, and its easting in km."""
    return [
        f'<path class="bar" d="M{at:.1f} {height - 1.0:.1f}v5"/>',
        f'<text x="{at:.1f}" y="{height + 17.0:.1f}" text-anchor="middle">{_km(metres)}</text>',
    ]


def _north(at: float, metres: float) -> list[str]:
    """Return a tick of the left edge, and its northing in km."""
    return [
        f'<path class="bar" d="M-4 {at:.1f}h5"/>',
        f'<text x="-7" y="{at + 4.0:.1f}" text-anchor="end">{_km(metres)}</text>',
    ]


def _bar(width: float, height: float, scale: float) -> list[str]:
    """Return the scale bar below the map."""
    length = _round_length(width / scale / 3.0)
    foot, pixels = height + 46.0, length * scale
    return [
        f'<path class="scale" d="M1 {foot - 5.0:.1f}V{foot:.1f}H{pixels + 1.0:.1f}'
        f'V{foot - 5.0:.1f}"/>',
        f'<text x="{pixels + 8.0:.1f}" y="{foot + 3.0:.1f}">{_length(length)}</text>',
    ]


def _ticks(start: float, length: float, step: float) -> list[float]:
    """Return the multiples of a step inside a length."""
    first = np.ceil(start / step)
    count = int(np.floor((start + length) / step) - first) + 1
    return [float((first + i) * step) for i in range(max(count, 0))]


def _km(metres: float) -> str:
    return f"{metres / 1000.0:.10g}"


def characters(place: Mapping[str, Any]) -> list[str]:
    """Return the map as lines of characters, and what they mean.

    Examples
    --------
    >>> place = {"wells": 2, "columns": 2, "rows": 1, "cells": [[0, 0, 1, 1], [0, 1, 12, 9]]}
    >>> characters(place)[1].count("O")
    1
    """
    if not place["wells"]:
        return []
    scale = max(place["columns"] / SCREEN_COLUMNS, place["rows"] / (TALL * SCREEN_ROWS))
    shape = (
        int((place["rows"] - 1) / (TALL * scale)) + 1,
        int((place["columns"] - 1) / scale) + 1,
    )
    row, column, count, _ = np.array(place["cells"], np.int64).T
    counts = np.zeros(shape, np.int64)
    np.add.at(counts, ((row / (TALL * scale)).astype(int), (column / scale).astype(int)), count)
    lines = ["".join(_mark(each) for each in line) for line in counts]
    edge = "+" + "-" * shape[1] + "+"
    key = "wells in a character: . 1 or 2, o 3 to 9, O 10 to 99, # 100 or more"
    return [edge, *(f"|{line}|" for line in lines), edge, key]


def _mark(count: int) -> str:
    return next((mark for least, mark in MARKS if count >= least), " ")


def _radius(count: int) -> float:
    """Return the radius of a dot: the area grows slowly with the wells in it."""
    return min(RADIUS * count**0.25, WIDEST)


def _round_length(metres: float) -> float:
    """Return 1, 2 or 5 times a power of ten, at most a length."""
    power = 10.0 ** np.floor(np.log10(max(metres, 1.0)))
    return float(max(step * power for step in (1.0, 2.0, 5.0) if step * power <= max(metres, 1.0)))


def _length(metres: float) -> str:
    return f"{metres / 1000.0:g} km" if metres >= 1000.0 else f"{metres:g} m"
