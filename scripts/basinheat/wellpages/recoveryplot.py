"""Recovery of a set of timed readings: against time, and against Horner time."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from basinheat.corrections.methods.horner import horner_time
from basinheat.corrections.recovery.sources import MUD
from basinheat.wellpages.contents import Contents
from basinheat.wellpages.cooling import curves, horner_lines
from basinheat.wellpages.depthplot import Tick, points, px
from basinheat.wellpages.fits import Fits
from basinheat.wellpages.scale import Floats, Scale, limits

WIDTH, HEIGHT = 300, 226
_LEFT, _RIGHT, _TOP, _BOTTOM = 44, 290, 12, 182
_STEPS = 48
_LATEST_H = 3000.0  # as good as endless rest
_EARLIEST = 0.75  # of the first reading's time: where curves begin
# A straight line that ends farther off than this many spans of the picture is not followed.
_FOLLOWED = 0.75


@dataclass(frozen=True)
class Panel:
    """One of the two pictures of a set, as text in px."""

    label: str
    description: str
    ticks: list[Tick]
    degrees: list[Tick]
    curve: str
    marks: list[tuple[str, str, str, str]]
    formation: str
    band: tuple[str, str]
    line: str = ""
    ends: tuple[str, str] | None = None
    width: int = WIDTH
    height: int = HEIGHT
    left: int = _LEFT
    right: int = _RIGHT
    top: int = _TOP
    bottom: int = _BOTTOM


@dataclass(frozen=True)
class SetPlot:
    """A set: its title, what is said of it, its panels."""

    title: str
    words: str
    panels: list[Panel]


@dataclass(frozen=True)
class Curves:
    """Of some sets: which, their times and curves, and Horner's straight lines."""

    which: np.ndarray
    since_h: Floats
    degc: Floats
    intercept_degc: Floats
    slope_k: Floats


def all_curves(contents: Contents, fits: Fits, which: np.ndarray) -> Curves:
    """Return the curves of the sets to draw, all at once."""
    sets = type(fits.sets)(**{name: value[which] for name, value in vars(fits.sets).items()})
    cooled = type(fits.cooled)(**{name: value[which] for name, value in vars(fits.cooled).items()})
    first = np.nanmin(sets.since_h, axis=1, initial=np.inf, where=np.isfinite(sets.since_h))
    last = np.nanmax(sets.since_h, axis=1, initial=0.0, where=np.isfinite(sets.since_h))
    first = np.maximum(_EARLIEST * first, 1e-2)
    end = np.maximum(1.25 * last, first * 1.5)
    early = np.geomspace(first, end, _STEPS, axis=1)
    late = np.geomspace(end, np.maximum(_LATEST_H, 10.0 * end), _STEPS, axis=1)
    since = np.concatenate([early, late[:, 1:]], axis=1)
    degc = curves(sets, cooled, since, MUD, contents.diffusivity_m2_s)
    return Curves(which, since, degc, *horner_lines(sets))


def set_plot(
    fits: Fits, drawn: Curves, at: int, title: str, begin: str, total_std_k: float
) -> SetPlot:
    """Draw one set.

    Parameters
    ----------
    fits : Fits
        All sets.
    drawn : Curves
        Of the sets that are drawn.
    at : int
        Place of the set in ``drawn``.
    title, begin : str
        Above it, and how what is said of it begins.
    total_std_k : float, K
        Standard uncertainty of its formation temperature, all parts.
    """
    i = int(drawn.which[at])
    sets = fits.sets
    there = np.isfinite(sets.since_h[i])
    since, degc, std = (v[i][there] for v in (sets.since_h, sets.temperature_degc, sets.std_k))
    formation = float(sets.formation_degc[i])
    intercept = float(drawn.intercept_degc[at])
    near = np.concatenate([degc - std, degc + std, [formation - total_std_k],
                           [formation + total_std_k], drawn.degc[at, :_STEPS]])  # fmt: skip
    low, high = limits(near, least=5.0)
    seen = np.isfinite(intercept) and abs(intercept - formation) < _FOLLOWED * (high - low)
    if seen:
        low, high = limits(np.append(near, intercept), least=5.0)
    scale = Scale(low, high, _BOTTOM, _TOP)
    marks = since, degc, std
    band = formation, total_std_k
    panels = [_against_time(drawn, at, scale, marks, band)]
    if np.isfinite(intercept):
        circulation = float(sets.circulation_h[i])
        line = (intercept, float(drawn.slope_k[at]))
        assumed = "" if fits.noted[i] else ", assumed"
        said = f"ln((tc + Δt) / Δt), tc = {circulation:.1f} h{assumed}"
        panels.append(_against_horner(drawn, at, scale, marks, band, line, circulation, said))
    return SetPlot(title, begin + _words(fits, i, intercept, formation, total_std_k, seen), panels)


def _against_time(
    drawn: Curves,
    at: int,
    scale: Scale,
    marks: tuple[Floats, Floats, Floats],
    band: tuple[float, float],
) -> Panel:
    hours = Scale(0.0, float(drawn.since_h[at, _STEPS - 1]), _LEFT, _RIGHT)
    curve = points(hours(drawn.since_h[at, :_STEPS]), scale(drawn.degc[at, :_STEPS]))
    said = [f"{t:.1f} °C after {h:g} h" for h, t in zip(marks[0][:6], marks[1][:6], strict=True)]
    return Panel(
        label="hours since circulation",
        description=f"Read {', '.join(said)}; tends to {band[0]:.1f} °C.",
        ticks=[Tick(px(hours(v)), f"{v:g}") for v in hours.ticks(6)],
        degrees=_degrees(scale),
        curve=curve,
        marks=_marks(hours(marks[0]), scale, marks),
        formation=px(scale(band[0])),
        band=(px(scale(band[0] + band[1])), px(scale(band[0] - band[1]))),
    )


def _against_horner(
    drawn: Curves,
    at: int,
    scale: Scale,
    marks: tuple[Floats, Floats, Floats],
    band: tuple[float, float],
    line: tuple[float, float],
    circulation_h: float,
    label: str,
) -> Panel:
    x = horner_time(circulation_h, marks[0])
    farthest = 1.12 * float(x.max())
    axis = Scale(0.0, farthest, _RIGHT - 8, _LEFT)
    way = horner_time(circulation_h, drawn.since_h[at])
    inside = way <= farthest
    straight = np.array([1.06 * float(x.max()), 0.0])
    ends = scale(line[0] + line[1] * straight)
    return Panel(
        label=label,
        description=f"The same against Horner time; the straight line ends at {line[0]:.1f} °C.",
        ticks=[Tick(px(axis(v)), f"{v:.3g}") for v in axis.ticks(5)],
        degrees=_degrees(scale),
        curve=points(axis(way[inside]), scale(drawn.degc[at][inside])),
        marks=_marks(axis(x), scale, marks),
        formation=px(scale(band[0])),
        band=(px(scale(band[0] + band[1])), px(scale(band[0] - band[1]))),
        line=points(axis(straight), ends),
        ends=(px(axis(0.0)), px(ends[1])),
    )


def _degrees(scale: Scale) -> list[Tick]:
    return [Tick(px(scale(v)), f"{v:g}".replace("-", "−")) for v in scale.ticks(6)]


def _marks(
    x: Floats, scale: Scale, marks: tuple[Floats, Floats, Floats]
) -> list[tuple[str, str, str, str]]:
    _, degc, std = marks
    y, low, high = scale(degc), scale(degc - std), scale(degc + std)
    return [tuple(map(px, each)) for each in zip(x, y, low, high, strict=True)]


def _words(fits: Fits, i: int, intercept: float, formation: float, std_k: float, seen: bool) -> str:
    """Say in words what the pictures show."""
    sets, cooled = fits.sets, fits.cooled
    noted = "noted" if fits.noted[i] else "assumed"
    text = f" to {formation:.1f} ± {std_k:.1f} °C. "
    text += f"Circulation {sets.circulation_h[i]:.1f} h ({noted}), hole radius "
    text += f"{sets.radius_m[i]:.3f} m; {cooled.cooling_k[i]:.1f} K cooler than the rock when it "
    text += "stopped."
    if np.isfinite(cooled.misfit[i]):
        text += f" Misfit {cooled.misfit[i]:.1f} σ of a reading."
    if np.isfinite(intercept):
        gap = formation - intercept
        word = "below" if gap >= 0 else "above"
        text += f" Horner's straight line ends at {intercept:.1f} °C, {abs(gap):.1f} K {word}"
        text += "." if seen else " (off the picture)."
    return text
