"""Questions about coordinates: their CRS, its datum, exchanged columns."""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import Any

from basinheat.firstlook.inputfile import InputFile
from basinheat.firstlook.places import judge_places
from basinheat.firstlook.proposals import setting
from basinheat.firstlook.questions import LIKELY, PLACES, PRESSING, Question, ask, listed
from basinheat.settings import schemas

# Datums that headers name: name in the EPSG registry, its geographic CRS, and what its UTM zones
# north are numbered from (EPSG registry, from memory; the tests look them up).
DATUMS = {
    "NAD27": ("North American Datum 1927", 4267, 26700),
    "NAD83": ("North American Datum 1983", 4269, 26900),
    "ED50": ("European Datum 1950", 4230, 23000),
    "WGS84": ("World Geodetic System 1984", 4326, 32600),
}
_NAMED = re.compile(
    r"(?<![a-z0-9])(nad[ _-]?27|nad[ _-]?83|ed[ _-]?50|wgs[ _-]?84)(?![0-9])", re.IGNORECASE
)


def about_places(file: InputFile, map_crs: str) -> Iterator[Question]:
    """Ask where coordinates of a whole file do not fit their CRS."""
    found = judge_places(file, map_crs)
    if found is None:
        return
    share = f"{100.0 * found['share']:.0f} %"
    crs = found["crs"]
    lines: dict[str, Any] = {}
    if found["kind"] == "degrees":
        lines = {"crs": "EPSG:4326"}
        seen = f"x and y look like degrees, and {crs} counts in metres."
        question = f"Add {setting(crs='EPSG:4326')} (or their own datum) to {file.place}?"
    elif found["kind"] == "metres":
        seen = f"x and y are no degrees in {share} of the rows, and {crs} counts in degrees."
        question = f"Is `crs` of {file.place} a projected system, such as a UTM zone?"
    else:
        west, south, east, north = found["area"]
        seen = (
            f"{share} of the wells lie outside the area where the crs of the maps, {map_crs}, is "
            f"used (longitude {west:g} to {east:g}, latitude {south:g} to {north:g})."
        )
        question = f"Is `crs` of the maps, or of {file.place} ({crs}), another one?"
        if "exchanged" in found["slip"]:
            turned = {"x": file.columns["y"], "y": file.columns["x"]}
            lines = {"columns": file.with_columns(turned)}
            question = (
                f"With {found['slip']} they lie inside: set {setting(**lines)} in {file.place}?"
            )
        elif found["slip"]:
            question = f"With {found['slip']} they lie inside: mend the column?"
    yield ask(file, PRESSING, seen, question, lines, cause=PLACES)


def about_datum(file: InputFile, map_crs: str) -> Iterator[Question]:
    """Ask where the headers of the coordinates name another datum than the CRS has."""
    ready, column = schemas.crs_of(file.spec, file.table, file.headers)
    crs = getattr(file.spec, "crs", None) or ready or map_crs
    headers = [file.columns[name] for name in ("x", "y") if name in file.columns]
    named = {datum_in(header) for header in headers} - {""}
    if column or len(named) != 1:
        return
    (name,) = named
    other = crs_on(crs, name)
    if other is None:
        return
    lines = {"crs": other} if other else {}
    verb = "names" if len(headers) == 1 else "name"
    yield ask(
        file,
        LIKELY,
        f"The headers {listed(headers)} {verb} {name}, and {crs} is on another datum.",
        f"Add {setting(**lines)} to {file.place}?"
        if lines
        else f"State the `crs` of {file.place} on {name}?",
        lines,
        cause="datum",
    )


def datum_in(header: str) -> str:
    """Return the datum that a header names, "" for none.

    Examples
    --------
    >>> datum_in("LAT_NAD27"), datum_in("Longitude (ED 50)"), datum_in("LAT")
    ('NAD27', 'ED50', '')
    """
    found = _NAMED.search(header[:200])
    return re.sub(r"[ _-]", "", found[1]).upper() if found else ""


def crs_on(crs: str, datum: str) -> str | None:
    """Return the same kind of CRS on a datum: geographic, or the UTM zone.

    Returns
    -------
    str or None
        "" where there is none of that kind; None where the CRS is on the datum already.
    """
    from pyproj import CRS
    from pyproj.exceptions import CRSError

    own = CRS.from_user_input(crs)
    name, geographic, zones = DATUMS[datum]
    known = own.geodetic_crs.name.replace(" ", "") if own.geodetic_crs else ""
    base = own.geodetic_crs.datum.name if own.geodetic_crs and own.geodetic_crs.datum else ""
    # NAD83(2011) and the like are realisations of the datum that a header means.
    if base.startswith(name) or known.startswith(datum):
        return None
    if own.is_geographic:
        return f"EPSG:{geographic}"
    zone = re.fullmatch(r"(\d+)N", own.utm_zone or "")
    if zone is None:
        return ""
    try:
        same = CRS.from_epsg(zones + int(zone[1]))
    except CRSError:
        return ""
    return f"EPSG:{zones + int(zone[1])}" if same.utm_zone == own.utm_zone else ""
