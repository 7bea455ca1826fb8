"""What corrections have in common that multiply the rise above the surface by a factor of time."""

from __future__ import annotations

import numpy as np

from basinheat.corrections.method import Context, Floats, Loading, Method, Outcome
from basinheat.corrections.sets import ReadingSets


def multiply_rise(
    method: Method,
    sets: ReadingSets,
    context: Context,
    factor: Floats,
    total_k: Floats | float,
    added_k: Floats | float = 0.0,
) -> Outcome:
    """Multiply the latest timed reading's rise above the surface, in region and depths only.

    The method's reasons are, in this order: region, depth, no timed reading, no surface
    temperature, cooler than the warmest reading.

    Parameters
    ----------
    method : Method
        Whose region, depths and shared share of the variance count.
    sets : ReadingSets
        Mud-cooled sets.
    context : Context
        Settings.
    factor : (sets,) array
        What to multiply by; NaN without a time.
    total_k : (sets,) array or float, K
        Total standard uncertainty.
    added_k : (sets,) array or float, K
        What to add after.
    """
    surface = sets.surface_temperature_degc
    reading = sets.at(sets.temperature_degc, sets.latest)
    temperature = surface + factor * (reading - surface) + added_k
    low, high = method.depth_range_m
    tests = [
        np.full(len(sets), context.region not in method.regions),
        ~((sets.depth_m >= low) & (sets.depth_m <= high)),
        sets.timed == 0,
        ~np.isfinite(surface),
        ~(temperature >= sets.warmest_degc),
    ]
    stated = method.uncertainty
    total = np.nan_to_num(np.broadcast_to(total_k, len(sets)), nan=stated.total_k)
    shared = total * (stated.shared_k / stated.total_k)
    independent, well = stated.split(total, shared, context.well_share)
    return Outcome(
        temperature_degc=temperature,
        reason=np.select(tests, range(1, len(tests) + 1), 0).astype(np.int64),
        independent_std_k=independent,
        well_std_k=well,
        variance_class=np.full(len(sets), f"method:{method.name}"),
        loadings={f"method:{method.name}": Loading(shared, stated.shared_k, "K")},
        flags={
            "untimed_left_out": (sets.timed > 0) & (sets.timed < sets.count),
            "factor_held_at_one": factor <= 1.0,
        },
    )
