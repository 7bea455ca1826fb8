"""What every correction method promises, and what it is given."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from basinheat.corrections.sets import ReadingSets
from basinheat.corrections.trend import RegionalTrend

if TYPE_CHECKING:
    from basinheat.corrections.calibration.learned import Calibration

Floats = NDArray[np.float64]
Flags = NDArray[np.bool_]


@dataclass(frozen=True)
class Reference:
    """Where a method was published, and how its coefficients came to be here."""

    author: str
    year: int
    title: str
    equation: str
    status: str


@dataclass(frozen=True)
class Uncertainty:
    """Total standard uncertainty of a method and the part of it that all its results share.

    Parameters
    ----------
    total_k, shared_k : float, K
        Total, and what is common to all results of the method. ``nan``: worked out set by set.
    source : str
        Where the numbers come from.
    known_bias : str
        What is known of the method's bias and taken out.
    """

    total_k: float
    shared_k: float
    source: str
    known_bias: str = "none known"

    def split(self, total_k: Floats, shared_k: Floats, well_share: float) -> tuple[Floats, Floats]:
        """Return the independent and the well-common part left of a total, K."""
        rest = np.maximum(total_k**2 - shared_k**2, (0.1 * total_k) ** 2)
        return np.sqrt(rest * (1.0 - well_share)), np.sqrt(rest * well_share)


@dataclass(frozen=True)
class Loading:
    """What one shared source does to every set.

    Parameters
    ----------
    values : (sets,) array, K
        ``T_estimate = T_true + values x amplitude`` with a unit-normal amplitude.
    prior_std : float
        One amplitude in the source's own unit.
    unit : str
        The source's own unit.
    """

    values: Floats
    prior_std: float
    unit: str


@dataclass(frozen=True)
class Context:
    """What a method may know beyond the sets: settings as plain numbers, and the region's trend.

    Parameters
    ----------
    trend : RegionalTrend
        Rise of temperature above the surface with depth, over the whole basin.
    region : str or None
        Region of the wells, as the user stated it.
    diffusivity_m2_s : float, m2/s
        Of the rock.
    circulation_h, circulation_factor : float, h and 1
        Circulation time where none is noted: median and one-sigma factor.
    well_share : float
        Share of a method's own scatter that is common to a well.
    surface_shared_std_k : float, K
        Standard uncertainty of the surface temperature that the whole basin shares.
    calibration : Calibration or None
        What pairs of mud-cooled readings and direct temperatures teach.
    """

    trend: RegionalTrend
    region: str | None
    diffusivity_m2_s: float
    circulation_h: float
    circulation_factor: float
    well_share: float
    surface_shared_std_k: float
    calibration: Calibration | None = None


@dataclass(frozen=True)
class Outcome:
    """What a method says of every set.

    Parameters
    ----------
    temperature_degc : (sets,) array, degC
        Formation temperature; meaningless where the method does not apply.
    reason : (sets,) array of int
        0 where the method applies, else 1 + the place in the method's ``reasons``.
    independent_std_k, well_std_k : (sets,) array, K
        Parts of the standard uncertainty.
    variance_class : (sets,) array of text
        Readings whose stated variance is scaled together.
    loadings : dict of str to Loading
        Shared sources.
    flags : dict of str to (sets,) array of bool
        What was assumed or doubted.
    learned : dict
        What was learned from the basin, plain numbers only.
    """

    temperature_degc: Floats
    reason: NDArray[np.int64]
    independent_std_k: Floats
    well_std_k: Floats
    variance_class: NDArray[np.str_]
    loadings: dict[str, Loading] = field(default_factory=dict)
    flags: dict[str, Flags] = field(default_factory=dict)
    learned: dict[str, object] = field(default_factory=dict)


@dataclass(frozen=True)
class Method:
    """A published way from readings to formation temperatures.

    Parameters
    ----------
    name, title : str
        Name in the config, and in words.
    kind : str
        Kind of reading it treats.
    reference : Reference
        Publication and status of the coefficients.
    needs, helps : tuple of str
        Columns of the tables ``readings`` and ``wells`` that must, or may, hold a value.
    validity : str
        Where it holds.
    regions : tuple of str
        Regions it was made for; empty: anywhere.
    depth_range_m : (float, float), m
        Depths it was made for.
    uncertainty : Uncertainty
        Size and source of its errors.
    reasons : tuple of str
        Why it may not apply.
    estimate : callable
        ``estimate(sets, context) -> Outcome``.
    """

    name: str
    title: str
    kind: str
    reference: Reference
    needs: tuple[str, ...]
    validity: str
    uncertainty: Uncertainty
    reasons: tuple[str, ...]
    estimate: Callable[[ReadingSets, Context], Outcome]
    helps: tuple[str, ...] = ()
    regions: tuple[str, ...] = ()
    depth_range_m: tuple[float, float] = (0.0, np.inf)
