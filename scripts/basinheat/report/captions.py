"""How to read each map, and plain words for the names inside the program."""

from __future__ import annotations

from basinheat.corrections.registry import METHODS
from basinheat.delivery.metadata import About, Quantity
from basinheat.report.sheet import words

_MAPS = {
    "heat_flow": "Heat that rises through the ground, with the rock's own heat production. It "
    "varies slowly: a spot of one well's size is more likely an error of that well. No depth, so "
    "nothing is hatched.",
    "gradient": "From the rebuilt column, so wells of different depth compare. It holds down to "
    "{reference:g} m only: deeper, follow the temperature maps. Hatched where no reading nearby "
    "goes as deep.",
    "temperature": "The same colours mean the same temperature at every depth, and the same for "
    "the uncertainty. About two of three places lie within one σ of the map, nineteen of twenty "
    "within two.",
    "isotherm": "Depth at which the rock reaches this temperature: shallow is hot. Blank and not "
    "crossed where it lies deeper than {deepest:g} m. For a well that must reach it, plan deeper "
    "by the uncertainty (see the cautions).",
}

_SOURCES = {
    "surface_temperature": "surface temperature, basin-wide offset",
    "recovery:diffusivity": "thermal diffusivity of the rock",
    "recovery:mud_capacity": "heat capacity of the mud",
    "recovery:mud_conductivity": "conductivity of the mud",
    "recovery:cooling": "cooling of the hole while mud circulates",
    "method:untimed": "readings without a time since circulation",
    "method:dst": "drill-stem tests",
    "rock:compaction": "loss of porosity with depth",
    "rock:temperature_law": "change of conductivity with temperature",
    "rock:heat_production": "heat production of the rock",
}

_FLAGS = {
    "outside_calibration_depths": "above or below every pair of the calibration: its correction is "
    "held as it is there, its σ grows",
    "correction_above_half_of_rise": "more was added than half of the rise above the surface "
    "temperature: look at the reading and its time first",
}

_CLASSES = {
    "direct": "measured formation temperatures (tests, equilibrium logs)",
    "recovery:repeated": "mud-cooled, several timed readings",
    "recovery:single": "mud-cooled, one timed reading",
    "recovery:untimed": "mud-cooled, no time noted",
}

SCORES = {
    "heat_flow_left_out": ("heat flow, well left out", "mW/m²", "prediction − well"),
    "heat_flow_block_left_out": ("heat flow, block left out", "mW/m²", "prediction − well"),
    "temperature_closure": ("temperature, well in the maps", "K", "map − well"),
    "temperature_left_out": ("temperature, well left out", "K", "prediction − well"),
    "temperature_holdout": ("temperature, wells held out", "K", "prediction − well"),
}


def of_map(what: Quantity, about: About) -> str:
    """Return how to read the map of a quantity."""
    text = _MAPS[what.family]
    return text.format(reference=about.reference_depth_m, deepest=about.deepest_m)


def of_source(name: str) -> str:
    """Return a shared source of error in words.

    Examples
    --------
    >>> of_source("conductivity:shaly_sandstone"), of_source("method:harrison1983")
    ('conductivity of shaly sandstone', "Harrison's parabola of depth")
    """
    if name in _SOURCES:
        return _SOURCES[name]
    kind, _, detail = name.partition(":")
    if kind == "conductivity":
        return f"conductivity of {words(detail)}"
    return _of_bias(detail) if kind == "method" else words(name.replace(":", ", "))


def _of_bias(detail: str) -> str:
    """Return in words what is left unsure of a method: of its level, its slope, or its fit."""
    method, _, part = detail.rpartition("_")
    if method == "local_calibration":
        left = f"what its pairs leave open, part {part}"
        missed = "slope with depth that its pairs do not tell"
        return f"the basin's own correction: {missed if part == 'slope' else left}"
    if method in METHODS and part == "slope":
        return f"{of_method(method)}: slope with depth"
    return of_method(detail)


def of_flag(code: str) -> str:
    """Return a flag in words, and what it means where the words alone do not say it.

    Examples
    --------
    >>> of_flag("assumed_vertical")
    'assumed vertical'
    """
    meaning = _FLAGS.get(code)
    return f"{words(code)}: {meaning}" if meaning else words(code)


def of_method(name: str) -> str:
    """Return the title of a correction method."""
    return METHODS[name].title if name in METHODS else words(name)


def of_class(name: str) -> str:
    """Return in words which readings have their stated variance scaled together."""
    if name in _CLASSES:
        return _CLASSES[name]
    kind, _, detail = name.partition(":")
    return of_method(detail) if kind == "method" else words(name.replace(":", ", "))
