"""Units of the input columns: from the spelling in a config to one linear conversion."""

from __future__ import annotations

import re
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
