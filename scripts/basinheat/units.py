"""Units of the input columns: from the spelling in a config to one linear conversion."""

from __future__ import annotations

import re
from collections.abc import Sequence
from fractions import Fraction
from functools import cache
from typing import Any

from basinheat.errors import UserError

# Spellings of the trade that the units library does not know, or takes for something else
# (C is its coulomb, F its farad).
_ALIASES = {
    "C": "degC",
    "F": "degF",
    "degK": "K",
    "deg C": "degC",
    "deg F": "degF",
    "Celsius": "degC",
    "Fahrenheit": "degF",
    "Kelvin": "K",
    "ftUS": "survey_foot",
    "US survey foot": "survey_foot",
    "W/m-K": "W/(m K)",
    "mW/m-K": "mW/(m K)",
    "API": "",
    "gAPI": "",
    "GAPI": "",
    "fraction": "",
    "v/v": "",
    "V/V": "",
    "pu": "percent",
}
# How people and programs spell the usual ones, capitals aside.
_SPELLINGS = {
    **dict.fromkeys(("f", "degf", "deg f", "deg.f", "deg. f", "fahrenheit"), "degF"),
    **dict.fromkeys(("degrees f", "degrees fahrenheit", "deg fahrenheit"), "degF"),
    **dict.fromkeys(("c", "degc", "deg c", "deg.c", "deg. c", "celsius", "centigrade"), "degC"),
    **dict.fromkeys(("degrees c", "degrees celsius", "deg celsius"), "degC"),
    **dict.fromkeys(("k", "degk", "deg k", "kelvin"), "K"),
    **dict.fromkeys(("ft", "ft.", "feet", "foot", "f.", "'"), "ft"),
    **dict.fromkeys(("ftus", "usft", "us ft", "us survey foot", "us survey feet"), "survey_foot"),
    **dict.fromkeys(("m", "m.", "mtr", "mtrs", "meter", "meters", "metre", "metres"), "m"),
    **dict.fromkeys(("in", "in.", "inch", "inches", '"', "''"), "in"),
    **dict.fromkeys(("h", "h.", "hr", "hr.", "hrs", "hrs.", "hour", "hours"), "h"),
    **dict.fromkeys(("min", "min.", "mins", "minute", "minutes"), "min"),
    **dict.fromkeys(("d", "day", "days"), "d"),
    **dict.fromkeys(("%", "percent", "pct"), "percent"),
    **{word: word for word in ("km", "cm", "mm")},
}
_MOST_UNUSUAL = 200
_MARKS = str.maketrans({"º": "°", "˚": "°", "″": '"', "”": '"', "“": '"', "′": "'", "’": "'"})
# What a unit in a cell may look like; anything else never reaches the library's parser.
_UNIT = re.compile(r"[A-Za-zµμ°%\"'](?:[A-Za-zµμ°%\"' ./()*²³-]|(?<=[A-Za-z^-])[1-3])*")
_EXAMPLES = {
    "m": "m, ft, km",
    "degC": "degC, degF, K",
    "K": "K, degF",
    "h": "h, min, d",
    "deg": "deg, rad",
    "W/(m K)": "W/(m K), mW/(m K)",
    "uW/m3": "uW/m3, nW/m3",
    "": "percent, or no unit",
}

# The usual ones, exact by definition: a job of a small run need not load the library of units.
_USUAL = {
    ("ft", "m"): (0.3048, 0.0),
    ("km", "m"): (1000.0, 0.0),
    ("in", "m"): (0.0254, 0.0),
    ("mm", "m"): (0.001, 0.0),
    ("cm", "m"): (0.01, 0.0),
    ("degF", "degC"): (1.0 / 1.8, -32.0 / 1.8),
    ("K", "degC"): (1.0, -273.15),
    ("min", "h"): (1.0 / 60.0, 0.0),
    ("d", "h"): (24.0, 0.0),
    ("percent", ""): (0.01, 0.0),
}


def conversion(spelling: str, unit: str) -> tuple[float, float]:
    """Return what turns numbers in one unit into another: ``number * scale + offset``.

    A column whose own unit is K holds a temperature *difference* (a standard uncertainty), so
    degF and degC are taken as differences there: no 32, no 273.15.

    Parameters
    ----------
    spelling : str
        Unit as the config states it, in any spelling that pint knows.
    unit : str
        Unit of the column in the tables.

    Returns
    -------
    tuple of float
        Scale and offset.

    Raises
    ------
    UserError
        If the spelling is no unit, or one of another quantity.

    Examples
    --------
    >>> conversion("ft", "m")
    (0.3048, 0.0)
    >>> scale, offset = conversion("degF", "degC")
    >>> round(212 * scale + offset, 9)
    100.0
    """
    if spelling == unit:
        return 1.0, 0.0
    if (spelling, unit) in _USUAL:
        return _USUAL[spelling, unit]
    try:
        same = same_dimension(spelling, unit)
    except ValueError:
        same = False
    if not same:
        examples = _EXAMPLES.get(unit, unit)
        raise UserError(f'"{spelling}" is not a unit that can stand here; choose one of {examples}')
    registry = _registry()
    source, target = registry.parse_units(_plain(spelling)), registry.parse_units(_plain(unit))
    if unit == "K":
        source = _difference(source, registry)
    zero, one = (registry.Quantity(Fraction(n), source).to(target).magnitude for n in (0, 1))
    return float(one - zero), float(zero)


def named(word: str, unit: str) -> str | None:
    """Return the unit that a word of a table names, None where it is none of a column's kind.

    Parameters
    ----------
    word : str
        As a cell has it, in any case.
    unit : str
        Unit of the column in the tables.

    Examples
    --------
    >>> named("FEET", "m"), named("Deg F", "degC"), named("°F", "degC"), named("ft", "degC")
    ('ft', 'degF', 'degF', None)
    """
    plain = " ".join(word.translate(_MARKS).split())
    if plain == unit:
        return unit
    if len(plain) > 30 or not _UNIT.fullmatch(plain):
        return None
    without = plain.replace("°", "deg ").replace("deg  ", "deg ").strip()
    spelling = _SPELLINGS.get(without.casefold(), plain)
    try:
        conversion(spelling, unit)
    except UserError:
        return None
    return spelling


def named_all(words: Sequence[str], unit: str) -> list[str | None]:
    """Return the unit that each of many words names, None for none.

    No column of units has more than some unusual words; further ones are not looked up. A column
    of remarks would keep the library busy for hours.
    """
    found: list[str | None] = []
    unusual = 0
    for word in words:
        plain = " ".join(word.translate(_MARKS).split()).replace("°", "deg ").strip()
        usual = plain == unit or plain.casefold() in _SPELLINGS
        unusual += not usual
        found.append(named(word, unit) if usual or unusual <= _MOST_UNUSUAL else None)
    return found


def same_dimension(spelling: str, unit: str) -> bool:
    """Tell whether a spelling is a unit of the same quantity as another.

    Raises
    ------
    ValueError
        If the spelling is no unit at all.

    Examples
    --------
    >>> same_dimension("feet", "m"), same_dimension("degF", "m")
    (True, False)
    """
    if spelling == unit:
        return True
    if len(spelling) > 60 or re.search(r"\d{4}|(?:\*\*|\^).*(?:\*\*|\^).*(?:\*\*|\^)", spelling):
        raise ValueError(f"{spelling} is not a unit")  # towers of powers never come to an end
    registry = _registry()
    try:
        source = registry.parse_units(_plain(spelling))
    except Exception as error:  # pint raises a dozen kinds, some of them of the parser below it
        raise ValueError(f"{spelling} is not a unit") from error
    return bool(source.dimensionality == registry.parse_units(_plain(unit)).dimensionality)


def _plain(spelling: str) -> str:
    """Return a spelling that pint reads: powers as ``m^2``, known aliases replaced."""
    spelling = " ".join(spelling.split())
    spelling = _ALIASES.get(spelling, spelling)
    return re.sub(r"(?<=[A-Za-z])(?=-?\d)", "^", spelling)


def _difference(unit: Any, registry: Any) -> Any:
    """Return the unit of a temperature difference for the unit of a temperature."""
    offsets = {"degree_Fahrenheit": "delta_degF", "degree_Celsius": "delta_degC"}
    return registry.parse_units(offsets.get(str(unit), str(unit)))


@cache
def _registry() -> Any:
    """Return a registry that reckons in fractions, so that a foot is 0.3048 m to the last bit.

    Loading it takes a third of a second: only where units differ.
    """
    import pint

    return pint.UnitRegistry(cache_folder=None, non_int_type=Fraction)
