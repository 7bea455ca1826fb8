"""Temperature against depth at one well: what was read, what was made of it, what the map says."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

import numpy as np

from basinheat.corrections.registry import METHODS
from basinheat.wellpages.rows import Rows
from basinheat.wellpages.scale import Floats, Scale, limits, thinned

WIDTH, HEIGHT = 520, 450
_TOP, _BOTTOM, _RIGHT, _LEFT = 50, 436, 506, 62
_STRIP = 26
_MOST_MARKS, _MOST_NUMBERED = 150, 30
_CURVES = ("rebuilt_degc", "rebuilt_std_k", "predicted_degc")
_ROOM_PX = 12.0  # between two numbers
_SHAPES = {"bht": "round", "dst": "diamond", "equilibrium": "square", "corrected": "triangle"}


@dataclass(frozen=True)
class Tick:
    """A tick: its place in px and its label."""

    at: str
    label: str


@dataclass(frozen=True)
class Mark:
    """A formation temperature: its place, the ends of its two bars, its shape, its number."""

    x: str
    y: str
    own: tuple[str, str]
    total: tuple[str, str]
    raw: str
    shape: str
    number: str
    number_x: str
    anchor: str


@dataclass(frozen=True)
class Bed:
    """A piece of the strip of rocks: its place, its pattern, its name."""

    y: str
    height: str
    pattern: str
    name: str


@dataclass(frozen=True)
class DepthPlot:
    """Everything of the picture, as text in px."""

    left: int
    depths: list[Tick]
    degrees: list[Tick]
    marks: list[Mark]
    readings: list[tuple[str, str, bool]]
    surface: tuple[str, str, str, str] | None
    band: str = ""
    column: str = ""
    left_out: str = ""
    beds: list[Bed] = field(default_factory=list)
    legend: list[tuple[str, str]] = field(default_factory=list)
    description: str = ""
    width: int = WIDTH
    height: int = HEIGHT
    top: int = _TOP
    bottom: int = _BOTTOM
    right: int = _RIGHT


@dataclass(frozen=True)
class Drawn:
    """Rows of one well that its picture shows, and the surface there (degC, K, all parts)."""

    temperatures: Rows
    readings: Rows
    used: np.ndarray
    column: Rows
    beds: Rows
    patterns: dict[str, str]
    surface_degc: float
    surface_std_k: float


def depth_plot(well: Drawn) -> DepthPlot:
    """Draw a well.

    Parameters
    ----------
    well : Drawn
        Its rows, ``temperatures`` in the order of their numbers; a pattern for each rock.

    Returns
    -------
    DepthPlot
        Depth down, temperature to the right.
    """
    depth = Scale(0.0, _deepest(well), _TOP, _BOTTOM)
    left = _LEFT + (_STRIP + 8 if len(well.beds) else 0)
    column = _down_to(well.column, depth.high)
    degrees = Scale(*_degrees(well, column), left, _RIGHT)
    beds = _beds(well, depth)
    return DepthPlot(
        left=left,
        depths=[Tick(px(depth(v)), f"{v:,.0f}") for v in depth.ticks(8)],
        degrees=[Tick(px(degrees(v)), _degree(v)) for v in degrees.ticks(7)],
        marks=_marks(well.temperatures, degrees, depth),
        readings=_readings(well, degrees, depth),
        surface=_surface(well, degrees),
        beds=beds,
        legend=list(dict.fromkeys((bed.pattern, bed.name) for bed in beds)),
        description=_description(well),
        **_lines(column, degrees, depth),
    )


def px(value: Any) -> str:
    """Return a place as text, to a tenth of a pixel."""
    return f"{float(value):.1f}"


def points(x: Floats, y: Floats) -> str:
    """Return a line as SVG points."""
    return " ".join(f"{a:.1f},{b:.1f}" for a, b in zip(x.tolist(), y.tolist(), strict=True))


def _degree(value: float) -> str:
    return f"{value:g}".replace("-", "−")


def _deepest(well: Drawn) -> float:
    depths = np.concatenate([well.temperatures["depth_m"], well.readings["depth_m"]])
    return float(max(np.nanmax(depths, initial=0.0), 20.0)) * 1.06


def _total(temperatures: Rows) -> tuple[Floats, Floats]:
    """Return the standard uncertainty without and with what is shared, K."""
    own = np.hypot(temperatures["temperature_std_k"], temperatures["well_std_k"])
    return own, np.hypot(own, np.nan_to_num(temperatures["shared_std_k"]))


def _degrees(well: Drawn, column: dict[str, Floats]) -> tuple[float, float]:
    """Return the limits of temperature: everything that is drawn has room."""
    _, total = _total(well.temperatures)
    middle, map_std = well.temperatures["temperature_degc"], column["rebuilt_std_k"]
    values = [
        middle - total,
        middle + total,
        well.readings["temperature_degc"],
        column["rebuilt_degc"] - map_std,
        column["rebuilt_degc"] + map_std,
        column["predicted_degc"],
        np.array([-1.0, 1.0]) * np.nan_to_num(well.surface_std_k) + well.surface_degc,
    ]
    return limits(np.concatenate(values), least=10.0)


def _down_to(column: Rows, deepest_m: float) -> dict[str, Floats]:
    """Return the map's column down to a depth."""
    edges = column["depth_m"]
    if not len(edges):
        return {name: edges for name in ("depth_m", *_CURVES)}
    foot = min(deepest_m, float(edges[-1]))
    z = np.append(edges[edges < foot], foot)
    return {"depth_m": z, **{name: np.interp(z, edges, column[name]) for name in _CURVES}}


def _lines(column: dict[str, Floats], degrees: Scale, depth: Scale) -> dict[str, str]:
    """Return band and lines of the map's column."""
    if len(column["depth_m"]) < 2:
        return {}
    middle, std, y = column["rebuilt_degc"], column["rebuilt_std_k"], depth(column["depth_m"])
    around = np.concatenate([degrees(middle - std), degrees(middle + std)[::-1]])
    return {
        "band": points(around, np.concatenate([y, y[::-1]])),
        "column": points(degrees(middle), y),
        "left_out": points(degrees(column["predicted_degc"]), y),
    }


def _marks(temperatures: Rows, degrees: Scale, depth: Scale) -> list[Mark]:
    own, total = _total(temperatures)
    middle = temperatures["temperature_degc"]
    y, raw = depth(temperatures["depth_m"]), degrees(temperatures["raw_temperature_degc"])
    shapes = [_shape(name) for name in temperatures["method"]]
    marks, last = [], -np.inf
    for i in thinned(len(temperatures), _MOST_MARKS):
        ends = degrees(np.array([-1.0, 1.0]) * total[i] + middle[i])
        room = len(temperatures) <= _MOST_NUMBERED and y[i] - last >= _ROOM_PX
        last = y[i] if room else last
        beyond = ends[1] > _RIGHT - 18
        marks.append(
            Mark(
                x=px(degrees(middle[i])),
                y=px(y[i]),
                own=(px(degrees(middle[i] - own[i])), px(degrees(middle[i] + own[i]))),
                total=(px(ends[0]), px(ends[1])),
                raw=px(raw[i]) if np.isfinite(raw[i]) else "",
                shape=shapes[i],
                number=str(i + 1) if room else "",
                number_x=px(min(ends[0], raw[i]) - 7 if beyond else ends[1] + 5),
                anchor="end" if beyond else "start",
            )
        )
    return marks


def _shape(method: str) -> str:
    return _SHAPES.get(METHODS[method].kind, "round") if method in METHODS else "round"


def _readings(well: Drawn, degrees: Scale, depth: Scale) -> list[tuple[str, str, bool]]:
    x, y = degrees(well.readings["temperature_degc"]), depth(well.readings["depth_m"])
    return [(px(x[i]), px(y[i]), bool(well.used[i])) for i in thinned(len(x), _MOST_MARKS)]


def _surface(well: Drawn, degrees: Scale) -> tuple[str, str, str, str] | None:
    if not np.isfinite(well.surface_degc):
        return None
    std = well.surface_std_k if np.isfinite(well.surface_std_k) else 0.0
    x, low, high = (degrees(well.surface_degc + k * std) for k in (0.0, -1.0, 1.0))
    return px(x), px(low), px(high), px(_TOP)


def _beds(well: Drawn, depth: Scale) -> list[Bed]:
    """Return the strip; neighbours of one rock are drawn as one, slivers not at all."""
    out: list[Bed] = []
    ends: list[float] = []
    for row in well.beds.each(len(well.beds)):
        pattern = well.patterns[row.lithology]
        top, base = (float(depth(min(v, depth.high))) for v in (row.top_m, row.base_m))
        if out and out[-1].name == row.lithology and top - ends[-1] < 0.5:
            ends[-1] = base
            start = float(out[-1].y)
            out[-1] = Bed(out[-1].y, px(base - start), pattern, row.lithology)
        elif base - top >= 0.3:
            out.append(Bed(px(top), px(base - top), pattern, row.lithology))
            ends.append(base)
    return out


def _description(well: Drawn) -> str:
    temperatures = well.temperatures
    if not len(temperatures):
        return "No formation temperature; readings only."
    said = [
        f"{t:.0f} °C at {z:,.0f} m"
        for t, z in zip(
            temperatures["temperature_degc"][:8], temperatures["depth_m"][:8], strict=True
        )
    ]
    more = f" and {len(temperatures) - 8} more" if len(temperatures) > 8 else ""
    return f"Formation temperatures: {', '.join(said)}{more}."
