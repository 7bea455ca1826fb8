"""Every delivered quantity by name, in one place: its unit, title, meaning and classes."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Any

from basinheat.tables.maps import STATUS

PROGRAM = "basinheat"
VERSION = "0.1.0"
DEPTH_REFERENCE = (
    "true vertical depth below ground (onshore) or sea floor (offshore), positive down"
)
SIGMA = (
    "standard uncertainty (1 sigma), all parts: reading, correction, rock, interpolation, shared"
)

STATUS_NODATA = 255


@dataclass(frozen=True)
class StatusClass:
    """One class of the status rasters: its code, name, meaning and colour."""

    code: int
    name: str
    meaning: str
    colour: tuple[int, int, int, int]


STATUS_CLASSES = (
    StatusClass(
        STATUS["no_basis"],
        "no basis",
        "outside the mask or too far from every well: all maps are blank",
        (230, 230, 230, 255),
    ),
    StatusClass(
        STATUS["interpolated"],
        "interpolated",
        "between wells, and no deeper than the deepest reading nearby",
        (86, 180, 233, 255),
    ),
    StatusClass(
        STATUS["below_readings"],
        "below the deepest reading nearby",
        "a mapped depth lies below every reading of the nearest wells: carried down by the model",
        (230, 159, 0, 255),
    ),
    StatusClass(
        STATUS["isotherm_too_deep"],
        "isotherm deeper than the limit",
        "an isotherm lies below the deepest depth of the model: its depth is blank",
        (204, 121, 167, 255),
    ),
)  # colours of Okabe and Ito (2008), told apart by colour-blind readers (from memory)


@dataclass(frozen=True)
class About:
    """What every file of a delivery says of itself.

    Parameters
    ----------
    run, scenario : str
        Names from the config.
    methods : tuple of str
        Correction methods in the order they were tried.
    reference_depth_m, deepest_m : float
        Depth of the gradient map; depth down to which columns are rebuilt; m.
    credits : str
        Owners and licences of the data, as the config words them.
    """

    run: str
    scenario: str = "base"
    methods: tuple[str, ...] = ()
    reference_depth_m: float = 2000.0
    deepest_m: float = 6000.0
    credits: str = ""

    @classmethod
    def of(cls, settings: Any, scenario: str = "base") -> About:
        """Gather it from the scenario's settings (``basinheat.settings.Settings``)."""
        return cls(
            settings.run,
            scenario,
            tuple(settings.correction.order),
            settings.gradient.reference_depth_m,
            settings.maps.deepest_m,
            settings.credits or "",
        )


@dataclass(frozen=True)
class Quantity:
    """One delivered quantity.

    Parameters
    ----------
    name : str
        Column of ``tables.Maps`` and stem of the raster's file name.
    family : str
        What it shares colours and contour steps with: ``temperature`` for every depth.
    unit : str
        As printed; "" for none.
    title : str
        A few words, without the unit.
    description : str
        A sentence.
    """

    name: str
    family: str
    unit: str
    title: str
    description: str

    @property
    def label(self) -> str:
        """Return the title with the unit."""
        return f"{self.title} ({self.unit})" if self.unit else self.title

    @property
    def is_status(self) -> bool:
        """Return whether the values are classes of ``STATUS_CLASSES``."""
        return self.family == "status"

    @property
    def is_value(self) -> bool:
        """Return whether it is a best estimate (of which there are contours)."""
        return self.family in ("heat_flow", "gradient", "temperature", "isotherm")


_NUMBER = r"(-?\d+(?:\.\d+)?)"
# stem pattern, family, unit, title, meaning; {0} is the number in the name
_STEMS = (
    ("heat_flow", "heat_flow", "mW/m²", "Surface heat flow", "conductive heat flow, positive up"),
    (
        "gradient",
        "gradient",
        "K/km",
        "Mean geothermal gradient down to {reference:g} m",
        "temperature at {reference:g} m less that at the surface, over the depth",
    ),
    (
        f"temperature_{_NUMBER}m",
        "temperature",
        "°C",
        "Temperature at {0} m",
        "rock temperature at {0} m below ground or sea floor",
    ),
    (
        f"isotherm_{_NUMBER}c",
        "isotherm",
        "m",
        "Depth of {0} °C",
        "depth below ground or sea floor at which the rock reaches {0} °C; blank where deeper than "
        "{deepest:g} m",
    ),
)
_SINGLE = {
    "well_distance": (
        "m",
        "Distance to the nearest well",
        "distance from the cell's centre to the nearest well with a reading",
    ),
    "deepest_reading": (
        "m",
        "Deepest reading nearby",
        "depth of the deepest reading among the nearest wells",
    ),
    "status": (
        "",
        "What the maps rest on",
        "classes; where several hold in a cell, the highest code",
    ),
}
_STD_UNITS = {"temperature": "K"}


def quantity(name: str, about: About) -> Quantity:
    """Describe a quantity by the name of its column and raster.

    Parameters
    ----------
    name : str
        ``heat_flow``, ``temperature_2000m_std``, ``isotherm_100c_q90``, ...
    about : About
        Of the delivery.

    Raises
    ------
    KeyError
        A name of no known form.

    Examples
    --------
    >>> quantity("temperature_2000m_std", About("demo")).label
    'Temperature at 2000 m, standard uncertainty (K)'
    """
    if name in _SINGLE:
        return Quantity(name, name, *_SINGLE[name])
    for pattern, family, unit, title, meaning in _STEMS:
        match = re.match(rf"{pattern}(?:_|$)", name)
        if match:
            words = {"reference": about.reference_depth_m, "deepest": about.deepest_m}
            title, meaning = (text.format(*match.groups(), **words) for text in (title, meaning))
            base = Quantity(name, family, unit, title, meaning)
            return _variant(base, name[match.end() :] if match.group().endswith("_") else "")
    raise KeyError(f"no delivered quantity is named {name}")


def _variant(base: Quantity, suffix: str) -> Quantity:
    """Describe what a suffix makes of a quantity: its uncertainty, a quantile, a probability."""
    name, family, unit, title = base.name, base.family, base.unit, base.title
    if not suffix:
        return base
    if suffix == "std":
        unit, words = _STD_UNITS.get(family, unit), "standard uncertainty"
        return Quantity(name, f"{family}_std", unit, f"{title}, {words}", f"{SIGMA}; of: {title}")
    if suffix == "status":
        return Quantity(name, "status", "", f"{title}: what it rests on", base.description)
    if match := re.fullmatch(r"q(\d\d)", suffix):
        share = int(match.group(1))
        text = f"{share} % quantile: {share} % chance of being lower, {100 - share} % of higher"
        return Quantity(name, family, unit, f"{title}, {share} % quantile", text)
    if match := re.fullmatch(rf"prob_gt_{_NUMBER}(c|m)", suffix):
        limit = f"{match.group(1)} {'°C' if match.group(2) == 'c' else 'm'}"
        text = f"probability of more than {limit}, 0 to 1; of: {title}"
        return Quantity(name, "probability", "", f"{title}: chance of more than {limit}", text)
    raise KeyError(f"no delivered quantity is named {name}")
