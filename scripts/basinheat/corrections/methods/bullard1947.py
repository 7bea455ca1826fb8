"""Bullard (1947): one timed reading and the temperature of the circulating mud."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.special import exp1

from basinheat.corrections.method import (
    Context,
    Flags,
    Floats,
    Loading,
    Method,
    Outcome,
    Reference,
    Uncertainty,
)
from basinheat.corrections.methods.time_plot import (
    COOLER,
    SHARED_K,
    SHARED_OF_BIAS,
    circulation_of,
    rest,
)
from basinheat.corrections.recovery.response import Mud, response
from basinheat.corrections.recovery.sources import MUD
from basinheat.corrections.recovery.times import NODES, WEIGHTS
from basinheat.corrections.sets import ReadingSets

# METHODS A12 has none for this method: as for Horner's plot of two points (common practice).
_FLOOR_K = 8.0
# METHODS A4: noted mud is uncertain by 10 K at least; guessed, it is 0.4 to 0.6 of the way from
# the surface to the formation. Its error in one well: twice that range (no source).
_MUD_STD_K, _MUD_SHARE, _MUD_SHARE_STD, _MUD_WELL_STD = 10.0, 0.5, 0.1, 0.2
# Half of the cooling left or more: the mud's temperature rules the result (no source).
_LARGEST_RATIO = 0.5
_EARLIEST = 1.0
# Keeps what is refused anyway from dividing by nothing.
_MOST_LEFT = 0.99
_ROUNDS = 20

# METHODS A4, A6.
UNCERTAINTY = Uncertainty(
    _FLOOR_K,
    SHARED_K,
    "mud 10 K or more, reading, circulation time; not below 8 K (common practice, no source)",
    known_bias="low by 0.3 to 4 % of the cooling, as simulated: the share simulated for the "
    "reading's own times is added; mud that warms more slowly than rock is shared error",
)


def cooling_ratio(
    circulation_h: Floats, since_h: Floats, radius_m: Floats, diffusivity_m2_s: float
) -> Floats:
    """Return the share F of the cooling that is left.

    ``F = (T∞ − T)/(T∞ − T_m) = ln(1 + t_c/Δt) / E₁(a²/4κt_c)``.

    References
    ----------
    Bullard (1947), The time necessary for a bore hole to attain temperature equilibrium, Monthly
    Notices R. astr. Soc., Geophys. Suppl. 5, 127-130.

    Examples
    --------
    >>> import numpy as np
    >>> one = np.ones(1)
    >>> cooling_ratio(4 * one, 12 * one, 0.108 * one, 1e-6).round(6)
    array([0.237265])
    """
    ended = exp1(0.25 / rest(circulation_h, radius_m, diffusivity_m2_s))
    return np.asarray(np.log1p(circulation_h / since_h) / ended)


def formation_degc(reading_degc: Floats, mud_degc: Floats, ratio: Floats) -> Floats:
    """Return ``T∞ = (T − F T_m)/(1 − F)``.

    Examples
    --------
    >>> import numpy as np
    >>> formation_degc(np.array([80.0]), np.array([45.0]), np.array([0.23726503])).round(3)
    array([90.887])
    """
    return (reading_degc - ratio * mud_degc) / (1.0 - ratio)


def estimate(sets: ReadingSets, context: Context) -> Outcome:
    """Estimate formation temperatures from the latest timed reading of every set.

    See :func:`from_mud`; the mud cooled the hole while it circulated.
    """
    return from_mud(sets, context, "bullard1947")


def from_mud(sets: ReadingSets, context: Context, method: str) -> Outcome:
    """Estimate formation temperatures from one reading and what is known of the mud.

    Mud whose temperature is not noted is taken half of the way from the surface to the region's
    formation temperature at that depth, which is found anew until it stays. An unknown t_c is
    integrated over its prior.
    """
    reading = sets.at(sets.temperature_degc, sets.latest)
    nodes = [
        _ratio_and_short(sets, context, circulation_of(sets, context.circulation_h * factor))
        for factor in context.circulation_factor**NODES
    ]
    middle = nodes[len(nodes) // 2][0]
    rise = _regional_rise_k(sets, context, reading, middle)
    guessed = ~np.isfinite(sets.mud_temperature_degc)
    mud = np.where(
        guessed, sets.surface_temperature_degc + _MUD_SHARE * rise, sets.mud_temperature_degc
    )
    found = np.stack([_mended_degc(reading, mud, *node) for node in nodes])
    temperature = WEIGHTS @ found
    plain = WEIGHTS @ np.stack([formation_degc(reading, mud, ratio) for ratio, _ in nodes])
    slow_mud = _slow_mud_k(sets, context, temperature - mud)
    shared = _shared_k(temperature - plain, np.where(guessed, rise, 0.0), middle, slow_mud)
    mud_std = np.where(guessed, np.fmax(_MUD_STD_K, _MUD_WELL_STD * rise), _MUD_STD_K)
    time_std = _time_std(sets, context, reading, mud, found)
    total = _total_k(sets, middle, mud_std, np.hypot(time_std, slow_mud))
    independent, well = UNCERTAINTY.split(total, shared, context.well_share)
    return Outcome(
        temperature_degc=temperature,
        reason=_reason(sets, context, temperature, middle, mud < reading),
        independent_std_k=independent,
        well_std_k=well,
        variance_class=np.full(len(sets), f"method:{method}"),
        loadings={f"method:{method}": Loading(shared, SHARED_K, "K")},
        flags={
            "mud_assumed": guessed,
            "circulation_assumed": ~np.isfinite(sets.circulation_h),
            "one_reading_used": sets.count > 1,
        },
    )


def _ratio_and_short(
    sets: ReadingSets, context: Context, circulation_h: Floats
) -> tuple[Floats, Floats]:
    """Return F, and what a simulated hole with the same times has more per kelvin of cooling."""
    times = _times(sets, context, circulation_h)
    ratio = cooling_ratio(*times)
    left = response(Mud(1.0, 1.0))(*times)
    return ratio, (1.0 - ratio) / (1.0 - np.minimum(left, _MOST_LEFT)) - 1.0


def _times(
    sets: ReadingSets, context: Context, circulation_h: Floats
) -> tuple[Floats, Floats, Floats, float]:
    since = sets.at(sets.since_circulation_h, sets.latest)
    return circulation_h, since, sets.hole_radius_m, context.diffusivity_m2_s


def _slow_mud_k(sets: ReadingSets, context: Context, cooling: Floats) -> Floats:
    """Return what mud that warms more slowly than rock leaves to be added, K; no size published."""
    times = _times(sets, context, circulation_of(sets, context.circulation_h))
    like_rock, slow = (response(mud)(*times) for mud in (Mud(1.0, 1.0), MUD))
    return np.nan_to_num(np.abs(slow - like_rock) * cooling)


def _mended_degc(reading: Floats, mud: Floats, ratio: Floats, short: Floats) -> Floats:
    """Return the result, and what it is known to fall short by added."""
    plain = formation_degc(reading, mud, ratio)
    return plain + short * (plain - mud)


def _regional_rise_k(sets: ReadingSets, context: Context, reading: Floats, ratio: Floats) -> Floats:
    """Return the region's formation temperature above the surface at every set's depth, K.

    The trend of raw readings is raised by one factor: the median, over the sets that may teach,
    of what the method gives with mud from the raised trend.
    """
    surface, raw = sets.surface_temperature_degc, context.trend.rise_k(sets.depth_m)
    with np.errstate(invalid="ignore"):
        teach = sets.learn & np.isfinite(ratio * surface) & (ratio < _LARGEST_RATIO) & (raw > 0)
    raised = 1.0
    for _ in range(_ROUNDS if teach.any() else 0):
        found = formation_degc(reading, surface + _MUD_SHARE * raised * raw, ratio) - surface
        raised = max(1.0, float(np.median((found / raw)[teach])))
    return raised * raw


def _shared_k(bias: Floats, guessed_rise: Floats, ratio: Floats, slow_mud: Floats) -> Floats:
    """Return the shared error, K: times, half the bias, mud's kind and mud's guess."""
    guess = np.nan_to_num(ratio / (1.0 - ratio) * _MUD_SHARE_STD * guessed_rise)
    left = SHARED_OF_BIAS * np.nan_to_num(bias)
    return np.sqrt(SHARED_K**2 + left**2 + guess**2 + slow_mud**2)


def _time_std(
    sets: ReadingSets, context: Context, reading: Floats, mud: Floats, found: Floats
) -> Floats:
    """Return what circulation does to the result, K: from half to twice a noted time, or nodes."""
    half, twice = (
        _mended_degc(reading, mud, *_ratio_and_short(sets, context, f * sets.circulation_h))
        for f in (0.5, 2.0)
    )
    unknown = np.sqrt(WEIGHTS @ (found - WEIGHTS @ found) ** 2)
    return np.where(np.isfinite(sets.circulation_h), np.abs(twice - half) / 2.0, unknown)


def _total_k(sets: ReadingSets, ratio: Floats, mud_std: Floats, time_std: Floats) -> Floats:
    """Return the total standard uncertainty, K: F/(1−F) σ(T_m) ⊕ σ_T/(1−F) ⊕ circulation."""
    reading_std = sets.at(sets.temperature_std_k, sets.latest)
    parts = np.stack([ratio * mud_std / (1.0 - ratio), reading_std / (1.0 - ratio), time_std])
    return np.maximum(_FLOOR_K, np.sqrt((np.nan_to_num(parts) ** 2).sum(0)))


def _reason(
    sets: ReadingSets, context: Context, temperature: Floats, ratio: Floats, mud_cooler: Flags
) -> NDArray[np.int64]:
    """Return 1 + the place of the first test that fails, else 0."""
    since = sets.at(sets.since_circulation_h, sets.latest)
    early = rest(since, sets.hole_radius_m, context.diffusivity_m2_s)
    tests = [
        sets.timed == 0,
        ~np.isfinite(temperature),
        ~(early >= _EARLIEST),
        ~(ratio < _LARGEST_RATIO),
        ~mud_cooler,
        temperature < sets.warmest_degc,
    ]
    return np.select(tests, range(1, len(tests) + 1), 0).astype(np.int64)


METHOD = Method(
    name="bullard1947",
    title="One reading and the mud's temperature",
    kind="bht",
    reference=Reference(
        "Bullard",
        1947,
        "The time necessary for a bore hole to attain temperature equilibrium, Monthly Notices R. "
        "astr. Soc., Geophys. Suppl. 5, 127-130",
        "T∞ = (T − F T_m)/(1 − F), F = ln(1 + t_c/Δt) / E₁(a²/4κt_c)",
        "no coefficient; equation derived; citation from memory; mud's guess is common practice",
    ),
    needs=("depth_m", "temperature_degc", "since_circulation_h"),
    helps=(
        "mud_temperature_degc",
        "circulation_h",
        "hole_radius_m",
        "temperature_std_k",
        "surface_temperature_degc",
    ),
    validity="one timed reading, κ Δt / a² ≥ 1, less than half of the cooling left",
    uncertainty=UNCERTAINTY,
    reasons=(
        "no timed reading",
        "neither the mud's temperature is noted nor the surface's known",
        "reading too early for a line source",
        "more than half of the cooling is left",
        "the mud is not cooler than the reading",
        COOLER,
    ),
    estimate=estimate,
)
