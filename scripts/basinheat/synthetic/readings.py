"""Which temperatures were read, and what the thermometers felt."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.synthetic.mud import MudProperties, cooling_left
from basinheat.synthetic.truth import Truth
from basinheat.synthetic.wells import Paths, rig_to_ground_m

Array = NDArray[np.float64]

_STATIC_SHARE, _DST_SHARE, _TIMED_SHARE = 0.06, 0.10, 0.75
_BITS_IN = np.array([6.0, 8.5, 12.25])


def plan_sets(rng: np.random.Generator, wells: pd.DataFrame) -> pd.DataFrame:
    """Plan the sets of readings: which wells were measured at which depths, how, how often.

    Returns
    -------
    pandas.DataFrame
        A row per well and depth: well (index), kind, depth_m (below ground), section (of the
        hole, from 1), runs, timed (whether times were noted), bit_in.
    """
    rows = [_mud_sets(rng, wells), _test_sets(rng, wells), _static_sets(rng, wells)]
    out = pd.concat(rows, ignore_index=True)
    return out.sort_values(["well", "kind", "depth_m"], kind="stable").reset_index(drop=True)


def true_sets(sets: pd.DataFrame, wells: pd.DataFrame, paths: Paths, truth: Truth) -> pd.DataFrame:
    """Add what is true at each set: temperature_degc, surface_temperature_degc, measured_depth_m.

    A deviated well is taken as if its bottom lay below its head: heat flow changes over tens of
    kilometres, the offset is below two.
    """
    well = sets.well.to_numpy()
    east, north = wells.easting_m.to_numpy()[well], wells.northing_m.to_numpy()[well]
    depth = sets.depth_m.to_numpy()
    vertical = depth + rig_to_ground_m(wells)[well]
    return sets.assign(
        temperature_degc=truth.temperature_degc(east, north, depth[:, None])[:, 0],
        surface_temperature_degc=truth.surface_temperature_degc(east, north),
        measured_depth_m=paths.measured(vertical, well),
    )


def feel(
    rng: np.random.Generator, sets: pd.DataFrame, mud: MudProperties, hard: bool
) -> pd.DataFrame:
    """Simulate the readings of every set.

    The mud is cooler than the rock by offset + slope x (formation - surface), with a part common
    to the well (in hard basins) and one of the set; the reading is what radial conduction leaves
    of it. Untimed sets of hard basins are old wells with a stronger cooling.

    Returns
    -------
    pandas.DataFrame
        A row per reading: set, run, circulation_h, since_h, cooling_k, felt_degc,
        mud_temperature_degc.
    """
    n = len(sets)
    above = (sets.temperature_degc - sets.surface_temperature_degc).to_numpy()
    of_well = rng.normal(0.0, 0.10 if hard else 0.0, sets.well.max() + 1)[sets.well]
    of_set = rng.normal(0.0, 0.06 if hard else 0.09, n)
    old = np.where(hard & ~sets.timed.to_numpy(), 1.1, 1.0)
    cooling = (mud.offset_k + mud.slope * above) * old + (of_well + of_set) * above
    cooling = np.maximum(cooling, 1.0)
    circulation = np.clip(4.0 * np.exp(rng.normal(0.0, np.log(1.7), n)), 0.7, 24.0)
    first = 3.0 + rng.gamma(2.2, 2.2, n)
    gap = 1.8 + rng.gamma(2.0, 1.6, (n, 4))
    since = np.concatenate([first[:, None], first[:, None] + np.cumsum(gap, axis=1)], axis=1)

    index = np.repeat(np.arange(n), sets.runs)
    run = np.concatenate([np.arange(k) for k in sets.runs])
    muddy = (sets.kind == "LOG").to_numpy()[index]
    since_h = np.minimum(since[index, run], 30.0 + run)
    left = cooling_left(
        circulation[index],
        since_h,
        sets.bit_in.to_numpy()[index] * 0.0254 / 2,
        mud.diffusivity_m2_s,
        mud.capacity_ratio,
        mud.conductivity_ratio,
    )
    formation = sets.temperature_degc.to_numpy()[index]
    return pd.DataFrame(
        {
            "set": index,
            "run": run,
            "circulation_h": np.where(muddy, circulation[index], np.nan),
            "since_h": np.where(muddy, since_h, np.nan),
            "cooling_k": np.where(muddy, cooling[index], 0.0),
            "felt_degc": formation - np.where(muddy, cooling[index] * left, 0.0),
            "mud_temperature_degc": np.where(muddy, formation - cooling[index], np.nan),
        }
    )


def _mud_sets(rng: np.random.Generator, wells: pd.DataFrame) -> pd.DataFrame:
    """Plan one to three logged depths a well, each with one to four runs."""
    n = len(wells)
    total = wells.depth_m.to_numpy()
    sections = np.where(total > 1400.0, rng.choice([1, 2, 3], n, p=[0.48, 0.38, 0.14]), 1)
    well = np.repeat(np.arange(n), sections)
    section = np.concatenate([np.arange(1, k + 1) for k in sections])
    above = np.stack([np.ones(n), rng.uniform(0.45, 0.75, n), rng.uniform(0.25, 0.4, n)])
    depth = total[well] * above[sections[well] - section, well] - rng.uniform(0.0, 12.0, well.size)
    # The older the well, the rarer are noted times; some sections differ from their well.
    age_share = np.clip(_TIMED_SHARE + 0.7 * (wells.year.to_numpy() - 1978.0) / 50.0, 0.0, 1.0)
    timed = (rng.random(n) < age_share)[well] ^ (rng.random(well.size) < 0.05)
    runs = np.where(timed, rng.choice([1, 2, 3, 4], well.size, p=[0.44, 0.28, 0.22, 0.06]), 1)
    bit = np.where(depth < 1500.0, 2, np.where(depth < 3300.0, 1, 0))
    bit = np.clip(bit + rng.choice([-1, 0, 1], well.size, p=[0.1, 0.8, 0.1]), 0, 2)
    return pd.DataFrame(
        {
            "well": well,
            "kind": "LOG",
            "depth_m": depth,
            "section": section,
            "runs": runs,
            "timed": timed,
            "bit_in": _BITS_IN[bit],
        }
    )


def _test_sets(rng: np.random.Generator, wells: pd.DataFrame) -> pd.DataFrame:
    """Plan one drill-stem test in some wells, near the bottom."""
    well = _some(rng, len(wells), _DST_SHARE)
    depth = wells.depth_m.to_numpy()[well] - rng.uniform(10.0, 300.0, well.size)
    return _unmuddied(well, "DST", depth)


def _static_sets(rng: np.random.Generator, wells: pd.DataFrame) -> pd.DataFrame:
    """Plan equilibrium points down some wells that stood idle."""
    idle = _some(rng, len(wells), _STATIC_SHARE)
    points = rng.integers(4, 9, idle.size)
    well = np.repeat(idle, points)
    share = np.concatenate([np.linspace(0.2, 0.98, k) for k in points])
    return _unmuddied(well, "STATIC", wells.depth_m.to_numpy()[well] * share)


def _some(rng: np.random.Generator, n: int, share: float) -> NDArray[np.int64]:
    """Return a share of n wells, at least one, in order."""
    return np.sort(rng.permutation(n)[: max(1, round(share * n))])


def _unmuddied(well: NDArray[np.int64], kind: str, depth: Array) -> pd.DataFrame:
    return pd.DataFrame(
        {
            "well": well,
            "kind": kind,
            "depth_m": depth,
            "section": 1,
            "runs": 1,
            "timed": True,
            "bit_in": 8.5,
        }
    )
