"""What a header of a table probably means: column, unit; by the abbreviations of the trade."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from difflib import SequenceMatcher

from basinheat.settings.columns import INPUT_COLUMNS, InputColumn

# What well tables call these things (common practice, no source). An abbreviation in capitals
# speaks for itself inside a longer header too ("BHT_1", "KB ELEV").
NAMES = {
    "well": "API, UWI, api no, api number, well name, wellbore name, well id, wellbore, "
    "well no, borehole, hole id",
    "x": "LONG, LON, longitude, long dec, easting, east, utm x, utm e, x coord, ew des deg, "
    "surf lon",
    "y": "LAT, latitude, lat dec, northing, north, utm y, utm n, y coord, ns dec deg, surf lat",
    "ground_elevation": "GL, GLE, ground level, ground elev, ground elevation, surface elevation, "
    "elev ground, elevation, elev",
    "datum_elevation": "KB, KBE, DF, RKB, KBELEV, RT, rotary table, kelly bushing, "
    "kelly bush elevation, derrick floor, rig floor, datum elevation, datum elev, elev datum",
    "water_depth": "WD, water depth, sea depth",
    "total_depth": "TD, total depth, depth total, depth driller, drillers depth, tdmd, max depth",
    "surface_temperature": "surface temperature, surf temp, ground temperature, mean annual "
    "temperature, MAGST, MAST, sea floor temperature, seabed temperature",
    "depth": "MD, DEPT, measured depth, bht depth, depth md, log depth, depth logger, "
    "reading depth, depth of reading, depth of measurement, test depth, temperature depth",
    "vertical_depth": "TVD, true vertical depth, final vertical depth, vertical depth, depth tvd",
    "temperature": "BHT, MRT, temp, bottom hole temperature, bottom hole temp, max recorded "
    "temperature, maximum temperature, maximum recorded temperature, temperature measured, "
    "measured temperature, log temperature",
    "kind": "kind of reading, type, source, data type, method, temp type, temperature type, "
    "test type, measurement type, reading type, BHT type, data source, temperature source",
    "temperature_std": "temperature error, temp error, temp uncertainty, temperature uncertainty, "
    "temp std, temperature sigma",
    "since_circulation": "TSC, TSCS, TLC, time since circulation, hours since circulation, "
    "time since circ, hrs since circ, shut in time, shutin time, time since, TSLC, "
    "time since last circulation, elapsed time, hours since circ stopped",
    "circulation": "circ time, circulation time, circulation duration, circ hours, "
    "hours circulated, circulation hours, duration of circulation, circ duration",
    "drilling": "drilling time, time since drilled, hours since drilled, open hole time",
    "hole_diameter": "BIT, BS, bit size, hole size, diameter, hole diam, hole diameter, CALI, "
    "bit diameter, borehole diameter",
    "mud_temperature": "mud temp, mud temperature, BHMT, flowline temperature",
    "date": "log date, logged, logging date, date logged, run date, date of log, date of reading, "
    "completion date, year, test date, measurement date, "
    "measurement date time",
    "log_run": "run, run no, run number, log run, run id",
    "circulation_stopped": "time circ stopped, time circulation stopped, circ stopped, "
    "pumps off, time pumps off, mud circulation stopped",
    "logger_on_bottom": "time logger on bottom, logger on bottom, time on bottom, log time",
    "casing_shoe": "casing depth, shoe depth, casing shoe, casing driller, casing shoe depth",
    "heat_flow": "q, HF, HFD, surface heat flow, heat flow density",
    "remarks": "remark, comment, comments, notes, note, measurement notes",
    "top": "top depth, depth top, from, top md, depth from, formation top, from depth, start depth",
    "base": "base depth, depth base, to, bottom depth, depth to, base md, bottom, to depth, "
    "end depth",
    "lithology": "LITH, lith, rock, rock type, lithology main, litho, lithologic unit, facies",
    "formation": "FM, formation name, formation, stratigraphic unit, unit name, strat unit",
    "net_to_gross": "NTG, N/G, net gross, net to gross ratio",
    "conductivity": "TC, thermal conductivity, therm cond, cond, k thermal, thermal cond",
    "conductivity_std": "thermal conductivity error, thermal conductivity std, cond std, tc std, "
    "tc error, conductivity error, conductivity uncertainty",
    "porosity": "PHI, PHIT, PHIE, POR, poro, total porosity, effective porosity",
    "heat_production": "HP, heat production, radiogenic heat, rhp, heat generation",
    "gamma_ray": "GR, gamma, gamma ray, SGR, GRC",
    "uranium": "URAN, uranium ppm",
    "thorium": "THOR, thorium ppm",
    "potassium": "POTA, potassium percent",
    "density": "RHOB, RHOZ, bulk density",
    "dip": "bedding dip, true dip, dip angle",
    "inclination": "INC, INCL, DEV, incl, deviation, inclination angle, drift",
    "azimuth": "AZ, AZI, AZIM, azimuth, hole azimuth, direction",
}
UNIT_WORDS = {
    "m": {"ft": "ft", "feet": "ft", "m": "m", "metres": "m", "meters": "m", "metre": "m",
          "meter": "m", "km": "km", "in": "in", "inch": "in", "inches": "in", "mm": "mm",
          "cm": "cm", "ftkb": "ft", "mkb": "m", "mrkb": "m"},
    "degC": {"f": "degF", "degf": "degF", "fahrenheit": "degF", "c": "degC", "degc": "degC",
             "celsius": "degC", "k": "K", "kelvin": "K"},
    "K": {"k": "K", "c": "K", "degc": "K", "f": "degF", "degf": "degF"},
    "h": {"h": "h", "hr": "h", "hrs": "h", "hours": "h", "min": "min", "mins": "min",
          "minutes": "min", "days": "d", "d": "d"},
    "W/(m K)": {"wmk": "W/(m K)", "mwmk": "mW/(m K)"},
    "uW/m3": {"uwm3": "uW/m3", "nwm3": "nW/m3"},
    "": {"pct": "percent", "percent": "percent", "pu": "percent"},
}  # fmt: skip
_ALL_UNITS = {word for words in UNIT_WORDS.values() for word in words}
LIKELY = 0.75  # scores below are chance resemblances
SURE = 0.9


@dataclass(frozen=True)
class Suggestion:
    """What a header may mean.

    Parameters
    ----------
    table : str
        Input table of the column.
    name : str
        Canonical column.
    unit : str
        Unit the header names, "" where it names none.
    score : float
        0 to 1; 1 is a usual name of the column.
    """

    table: str
    name: str
    unit: str
    score: float


def unit_in(header: str, unit: str) -> str:
    """Return the unit that a header names for a column of a canonical unit, "" for none.

    Examples
    --------
    >>> unit_in("DEPTH_FT", "m"), unit_in("Temp (°F)", "degC"), unit_in("DEPTH", "m")
    ('ft', 'degF', '')
    """
    if "%" in header and unit == "":
        return "percent"
    words = tokens(header)
    if len(words) < 2:
        return ""
    known = UNIT_WORDS.get(unit, {})
    # "W/m K" is split like any other text.
    tail = {"".join(words[-length:]) for length in (1, 2, 3) if length < len(words)}
    return next((known[word] for word in sorted(tail, key=len, reverse=True) if word in known), "")


def tokens(header: str) -> list[str]:
    """Return the words of a header, in lower case.

    Examples
    --------
    >>> tokens("wlbBottomHoleTemperature"), tokens("TD_FT")
    (['wlb', 'bottom', 'hole', 'temperature'], ['td', 'ft'])
    """
    text = re.sub(r"(?<=[a-z0-9])(?=[A-Z])|(?<=[A-Z])(?=[A-Z][a-z]{2})", " ", header[:200])
    return re.findall(r"[^\W_]+", text.lower())


def likeness(header: str, name: str) -> float:
    """Return how much a header resembles the usual names of a column, 0 to 1."""
    words = tokens(header)
    while len(words) > 1 and (words[-1] in _ALL_UNITS or words[-1] == "deg"):
        words = words[:-1]
    found = [_alike(words, alias.split(), strong) for alias, strong in _aliases(name)]
    return max(found)


def suggest(
    header: str, table: str, taken: Iterable[str] = (), elsewhere: Iterable[str] = ()
) -> Suggestion | None:
    """Return the column that a header most probably holds, None where nothing resembles it.

    Parameters
    ----------
    header : str
        As in the file.
    table : str
        Input table that the file is read as.
    taken : iterable of str
        Columns of that table that have their header already.
    elsewhere : iterable of str
        Other input tables that do not read the file yet: suggested for a usual name only.

    Examples
    --------
    >>> suggest("KB_FT", "wells").name, suggest("KB_FT", "wells").unit
    ('datum_elevation', 'ft')
    >>> suggest("OPERATOR", "wells") is None
    True
    """
    own = set(INPUT_COLUMNS[table]) - set(taken)
    best = _best(header, table, own, LIKELY)
    if best is not None:
        return best
    others = (
        _best(header, other, set(INPUT_COLUMNS[other]) - set(INPUT_COLUMNS[table]), SURE)
        for other in elsewhere
    )
    return max((each for each in others if each), key=lambda each: each.score, default=None)


def likely_header(name: str, present: Iterable[str]) -> str | None:
    """Return the header that most probably holds a column, None where none resembles it."""
    scored = [(likeness(header, name), header) for header in present if header]
    score, header = max(scored, key=lambda each: each[0], default=(0.0, ""))
    return header if score >= LIKELY else None


def _best(header: str, table: str, names: set[str], least: float) -> Suggestion | None:
    """Return the most similar of the columns of a table."""
    contract: Mapping[str, InputColumn] = INPUT_COLUMNS[table]
    scored = [(likeness(header, name), name) for name in contract if name in names]
    score, name = max(scored, key=lambda each: each[0], default=(0.0, ""))
    if score < least:
        return None
    column = contract[name]
    unit = "" if column.text else unit_in(header, column.unit)
    return Suggestion(table, name, unit, score)


def _aliases(name: str) -> list[tuple[str, bool]]:
    """Return the usual names of a column in lower case, and which speak for themselves."""
    listed = [alias.strip() for alias in NAMES.get(name, name).split(",")]
    return [(name.replace("_", " "), False), *((a.lower(), a.isupper()) for a in listed)]


def _alike(words: list[str], alias: list[str], strong: bool) -> float:
    """Return the likeness of a header's words with one usual name."""
    joined, wanted = "".join(words), "".join(alias)
    if joined == wanted:
        return 1.0
    length = len(alias)
    places = [i for i in range(len(words) - length + 1) if words[i : i + length] == alias]
    if places and (length > 1 or strong):
        # A prefix of the data base in front does not matter, words behind may.
        return 0.92 if places[-1] + length == len(words) else 0.8
    if len(wanted) < 4 or len(joined) < 4:
        return 0.0
    ratio = SequenceMatcher(None, joined, wanted, autojunk=False).ratio()
    return 0.9 * ratio if ratio >= 0.84 else 0.0
