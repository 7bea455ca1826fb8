"""A basin of invented wells, their mud cooling simulated by small steps of time.

Written apart from the library's own simulation: other cells (equal in ln r), another scheme
(two-stage implicit steps of time), and mud and rock of the caller's choice.
"""

from dataclasses import dataclass
from functools import cache

import numpy as np
import pandas as pd
from scipy.linalg import solve_banded

from basinheat import tables

RADII_M = (0.108, 0.1556)  # 8 1/2 and 12 1/4 inch bits
CIRCULATION_H = (2.0, 3.0, 4.0, 6.0, 9.0)
SINCE_H = np.array([5.0, 7.0, 9.0, 12.0, 15.0, 18.0, 22.0, 26.0, 32.0, 40.0])
STEPS = 60


def left_on_axis(circulation_h, since_h, radius_m, diffusivity, capacity, conductivity):
    """Share of the cooling left on the axis at ascending times; mud over rock properties."""
    inside, outside = np.geomspace(0.02, 1.0, 60), np.geomspace(1.0, 250.0, 260)[1:]
    edge = radius_m * np.concatenate([[0.0], inside, outside])
    middle = np.sqrt(np.maximum(edge[1:] * edge[:-1], (0.4 * edge[1]) ** 2))
    mud = edge[1:] <= radius_m * (1 + 1e-9)
    k = np.where(mud, conductivity, 1.0)  # of rock 1 W/(m K), so its heat capacity is 1/diffusivity
    heat = np.where(mud, capacity, 1.0) / diffusivity * 0.5 * np.diff(edge**2)
    inner, outer = (
        np.log(edge[1:-1] / middle[:-1]) / k[:-1],
        np.log(middle[1:] / edge[1:-1]) / k[1:],
    )
    resting, flowing, wall = 1.0 / (inner + outer), 1.0 / (inner + outer), mud.sum() - 1
    flowing[wall] = 1.0 / outer[wall]  # flowing mud has its temperature at the wall itself

    T = _advance(np.where(mud, -1.0, 0.0), 3600.0 * circulation_h, flowing, heat, mud)
    left, before = [], 0.0
    for hours in since_h:
        T, before = _advance(T, 3600.0 * (hours - before), resting, heat, mud & False), hours
        left.append(-T[0])
    return np.array(left)


def _advance(T, duration, link, heat, held):
    rate = np.zeros((3, heat.size))
    rate[1, :-1] -= link
    rate[1, 1:] -= link
    rate[0, 1:] = rate[2, :-1] = link
    # entry [i, j] belongs to row j + i - 1, whose heat it is divided by
    rate /= np.array([np.roll(heat, 1), heat, np.roll(heat, -1)])
    for i, shift in ((0, 1), (1, 0), (2, -1)):
        rate[i, np.roll(held, shift)] = 0.0
    gamma, start = 1.0 - 1.0 / np.sqrt(2.0), 0.0
    for stop in duration * (np.arange(1, STEPS + 1) / STEPS) ** 3:
        dt = stop - start
        matrix = -gamma * dt * rate
        matrix[1] += 1.0
        first = solve_banded((1, 1), matrix, _times(rate, T))
        second = solve_banded((1, 1), matrix, _times(rate, T + (1 - gamma) * dt * first))
        T, start = T + dt * ((1 - gamma) * first + gamma * second), stop
    return T


def _times(band, x):
    out = band[1] * x
    out[:-1] += band[0, 1:] * x[1:]
    out[1:] += band[2, :-1] * x[:-1]
    return out


@dataclass(frozen=True)
class Basin:
    """Tables, and the true formation temperature of each reading."""

    wells: pd.DataFrame
    readings: pd.DataFrame
    truth: pd.Series


@cache
def _table(diffusivity, capacity, conductivity):
    return {
        (r, c): left_on_axis(c, SINCE_H, r, diffusivity, capacity, conductivity)
        for r in RADII_M
        for c in CIRCULATION_H
    }


def make_basin(
    seed,
    n_wells=120,
    diffusivity=1.25e-6,
    capacity=1.5,
    conductivity=0.35,
    offset_k=4.0,
    slope=0.38,
    scatter=0.10,
    noise_k=0.8,
    surface_error_k=0.0,
    runs=(1, 1, 2, 3),
    untimed=0.35,
    no_circulation=0.3,
):
    """Invent wells with one to three depths and some runs each, readings in whole °F."""
    rng = np.random.default_rng(seed)
    left = _table(diffusivity, capacity, conductivity)
    surface, gradient = rng.normal(11.0, 1.0, n_wells), 32e-3 * np.exp(rng.normal(0, 0.12, n_wells))
    rows = []
    for well in range(n_wells):
        for depth in np.sort(rng.uniform(700.0, 4200.0, rng.integers(1, 4))):
            rise = gradient[well] * depth - 1.0e-6 * depth**2
            cooling = offset_k + slope * rise + scatter * rise * rng.normal()
            radius, circulation = rng.choice(RADII_M), rng.choice(CIRCULATION_H)
            step = rng.integers(1, 3)
            run = np.unique(rng.integers(0, 5) + step * np.arange(rng.choice(runs)))
            run = run[run < SINCE_H.size]
            felt = surface[well] + rise - cooling * left[radius, circulation][run]
            timed, noted = rng.random() >= untimed, rng.random() >= no_circulation
            for i, degc in zip(run, felt + rng.normal(0.0, noise_k, run.size), strict=True):
                rows.append(
                    {
                        "well": f"W{well:04d}",
                        "depth_m": depth,
                        "temperature_degc": np.round(degc * 1.8) / 1.8,
                        "since_circulation_h": SINCE_H[i] if timed else np.nan,
                        "circulation_h": circulation if timed and noted else np.nan,
                        "hole_radius_m": radius,
                        "truth": surface[well] + rise,
                    }
                )
    frame = pd.DataFrame(rows)
    frame["reading_id"] = [f"r{i:06d}" for i in range(len(frame))]
    frame = frame.assign(kind="bht", temperature_std_k=1.0, source_line=np.arange(len(frame)))
    wells = pd.DataFrame(
        {
            "well": [f"W{i:04d}" for i in range(n_wells)],
            "surface_temperature_degc": surface - surface_error_k,
            "surface_temperature_std_k": 0.3,
        }
    )
    readings = tables.Readings.conform(frame.drop(columns="truth"))
    return Basin(tables.Wells.conform(wells), readings, frame.set_index("reading_id")["truth"])


def judged(estimates, basin):
    """Estimates with their error, and independent plus well-common standard uncertainty."""
    truth = estimates["reading_ids"].str.split(";").str[0].map(basin.truth)
    own = np.hypot(estimates["temperature_std_k"], estimates["well_std_k"])
    return estimates.assign(error=estimates["temperature_degc"] - truth, own_std=own)


def table_of(rows):
    """Readings from a list of dicts, the rest filled with plain values."""
    frame = pd.DataFrame(rows)
    for name, value in (("well", "A"), ("kind", "bht"), ("depth_m", 2000.0), ("flags", "")):
        frame[name] = frame[name].fillna(value) if name in frame else value
    frame["reading_id"] = [f"id{i:04d}" for i in range(len(frame))]
    frame["source_line"] = np.arange(len(frame)) + 2
    return tables.Readings.conform(frame)


def wells_of(*names, surface_degc=10.0):
    """Wells of those names."""
    return tables.Wells.conform(
        pd.DataFrame(
            {
                "well": list(names),
                "surface_temperature_degc": surface_degc,
                "surface_temperature_std_k": 0.5,
            }
        )
    )
