"""README.txt of a delivery: what each file is, how to read it, and what not to do with it."""

from __future__ import annotations

import textwrap

from basinheat.delivery import cautions
from basinheat.delivery.metadata import (
    DEPTH_REFERENCE,
    PROGRAM,
    SIGMA,
    STATUS_CLASSES,
    STATUS_NODATA,
    VERSION,
    About,
    quantity,
)
from basinheat.grid import Grid

_WIDTH = 88


def text(rasters: list[str], grid: Grid, about: About) -> str:
    """Return the text of README.txt.

    Parameters
    ----------
    rasters : list of str
        Names of the rasters, without ``.tif``.
    grid : Grid
        Of the maps.
    about : About
        Of the delivery.
    """
    title = f"Maps of geothermal heat: run {about.run}, scenario {about.scenario}"
    parts = [
        f"{title}\n{'=' * len(title)}",
        _fill(f"Made by {PROGRAM} {VERSION}; manifest.json names the exact code, settings, inputs.")
        + (f"\n{_fill(f'Data: {about.credits}')}" if about.credits else ""),
        _section("Before you use them", _numbered(cautions.CAUTIONS)),
        _section("Files", _files(rasters, about)),
        _section("How to read them", _reading(grid, about)),
        _section("status.tif", _classes()),
    ]
    return "\n\n".join(parts) + "\n"


def _section(title: str, body: str) -> str:
    return f"{title}\n{'-' * len(title)}\n{body}"


def _fill(line: str, first: str = "", rest: str = "") -> str:
    return textwrap.fill(
        line, _WIDTH, initial_indent=first, subsequent_indent=rest, break_long_words=False
    )


def _numbered(lines: tuple[str, ...]) -> str:
    return "\n".join(_fill(line, f"{at}. ", "   ") for at, line in enumerate(lines, start=1))


def _files(rasters: list[str], about: About) -> str:
    entries = [
        ("report.html", "what was done, how far the maps can be trusted, pictures"),
        (
            "wells.html",
            "the wells, the worst fits first: readings, corrections and recovery, drawn and listed",
        ),
    ]
    for name in rasters:
        what = quantity(name, about)
        entries.append((f"rasters/{name}.tif", f"{what.label}: {what.description}"))
    entries += [
        (
            f"{about.run}.gpkg",
            "layers wells, temperatures, rejected (rows whose well has no known place come without "
            "geometry) and contours_<quantity>",
        ),
        (
            "rejected.csv",
            "every input row that was refused or merged, and why; text that a spreadsheet would "
            "take for a formula (it starts with = + - @) has an apostrophe in front",
        ),
        ("manifest.json", "SHA-256 of every file and input, settings, versions, code"),
    ]
    return "\n".join(f"{name}\n{_fill(what, '    ', '    ')}" for name, what in entries)


def _reading(grid: Grid, about: About) -> str:
    west, south, east, north = grid.bounds
    lines = (
        f"CRS: {grid.crs}. {grid.rows} rows by {grid.cols} columns of {grid.cell_size:g} m, west "
        f"{west:.12g}, south {south:.12g}, east {east:.12g}, north {north:.12g}. A value "
        "holds for the cell's centre.",
        f"Depth: {DEPTH_REFERENCE}. Elevations are above sea level, as given in the inputs.",
        "Units: temperature °C, its uncertainty and differences K, gradient K/km, heat flow mW/m² "
        "(positive up), conductivity W/(m K), depth and distance m. Names of columns end in their "
        "unit.",
        f"*_std.tif and columns with _std: {SIGMA.split(',')[0]}. In rasters it is the total "
        "of all parts; in the tables the parts stand in columns of their own (independent, common "
        "to the well, shared by many wells).",
        "*_q10.tif, *_q90.tif (if there): quantiles. q90 has a 10 % chance of being exceeded. P10 "
        "and P90 are avoided, since drillers and resource people mean opposite things by them.",
        "Blank cells are NaN, declared as nodata. Overviews of rasters are averages.",
        "Temperatures were corrected by the first of these that applied, well by well and depth "
        f"by depth: {', '.join(about.methods) or 'see the report'}.",
        "The GeoPackage carries a fixed date of last change (2000-01-01), so that equal results "
        "are equal files.",
    )
    return "\n".join(_fill(line, "- ", "  ") for line in lines)


def _classes() -> str:
    lines = [_fill(f"{one.code}  {one.name}: {one.meaning}", "", "   ") for one in STATUS_CLASSES]
    beside = "GIS programs take the names of the classes from status.tif.aux.xml: keep it beside."
    return "\n".join([*lines, f"{STATUS_NODATA}  nodata (not used inside the grid)", beside])
