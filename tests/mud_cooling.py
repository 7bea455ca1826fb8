"""A basin of invented wells, their mud cooling simulated by small steps of time.

Written apart from the library's own simulation: other cells (equal in ln r), other scheme (steps
of time, two-stage singly diagonal implicit), and mud and rock of the caller's choice.
"""

from dataclasses import dataclass

import numpy as np
import pandas as pd
from scipy.linalg import solve_banded

from basinheat import tables

RADII_M = (0.108, 0.1556)  # 8 1/2 and 12 1/4 inch bits
CIRCULATION_H = (2.0, 3.0, 4.0, 6.0, 9.0)


def left_on_axis(circulation_h, since_h, radius_m, diffusivity, capacity, conductivity):
    """Share of the cooling left on the axis at the times since_h (ascending), by small steps."""
    edge = radius_m * np.concatenate(
        [[0.0], np.geomspace(0.02, 1.0, 60), np.geomspace(1.0, 250, 260)[1:]]
    )
    middle = np.sqrt(np.maximum(edge[1:] * edge[:-1], (0.4 * edge[1]) ** 2))
    mud = edge[1:] <= radius_m * (1 + 1e-9)
    k = np.where(
        mud, conductivity, 1.0
    )  # of rock: 1 W/(m K), so that rho c of rock is 1/diffusivity
    heat = np.where(mud, capacity, 1.0) / diffusivity * 0.5 * np.diff(edge**2)
    link = 1.0 / (
        np.log(edge[1:-1] / middle[:-1]) / k[:-1] + np.log(middle[1:] / edge[1:-1]) / k[1:]
    )
    # while mud flows the wall itself has its temperature: no mud lies between
    wall, stirred = mud.sum() - 1, link.copy()
    stirred[wall] = 1.0 / (np.log(middle[wall + 1] / edge[wall + 1]) / k[wall + 1])

    def advance(T, duration, held):
        between, rate = stirred if held else link, np.zeros((3, heat.size))
        rate[1, :-1] -= between
        rate[1, 1:] -= between
        rate[0, 1:] = rate[2, :-1] = between
        # column layout: entry [i, j] belongs to row j + i - 1, so divide by that row's heat
        rate /= np.array([np.roll(heat, 1), heat, np.roll(heat, -1)])
        if held:
            for i, shift in ((0, 1), (1, 0), (2, -1)):
                rate[i, np.roll(mud, shift)] = 0.0
        gamma = 1.0 - 1.0 / np.sqrt(2.0)
        start, now, n = 0.0, T, 160
        for stop in duration * (np.arange(1, n + 1) / n) ** 3:
            dt = stop - start
            matrix = -gamma * dt * rate
            matrix[1] += 1.0
            first = solve_banded((1, 1), matrix, _times(rate, now))
            second = solve_banded((1, 1), matrix, _times(rate, now + (1 - gamma) * dt * first))
            now, start = now + dt * ((1 - gamma) * first + gamma * second), stop
        return now

    T = advance(np.where(mud, -1.0, 0.0), 3600.0 * circulation_h, True)
    left, before = [], 0.0
    for hours in since_h:
        T, before = advance(T, 3600.0 * (hours - before), False), hours
        left.append(-T[0])
    return np.array(left)


def _times(band, x):
    out = band[1] * x
    out[:-1] += band[0, 1:] * x[1:]
    out[1:] += band[2, :-1] * x[:-1]
    return out


@dataclass(frozen=True)
class Basin:
    """Tables and the truth of each reading."""

    wells: pd.DataFrame
    readings: pd.DataFrame
    truth: pd.DataFrame  # reading_id, formation temperature


def make_basin(
    seed, n_wells=200, diffusivity=1.25e-6, capacity=1.5, conductivity=0.35, offset_k=4.0, slope=0.38,
    scatter=0.10, noise_k=0.8, surface_error_k=0.6, rounding_k=1 / 1.8, sizes=(1, 1, 2, 3),
    untimed=0.35, no_circulation=0.3, time_error=0.0, well_share=0.0,
):  # fmt: skip
    """Invent wells; mud, rock and cooling law are not those that the correction assumes."""
    rng = np.random.default_rng(seed)
    hours = np.array([5.0, 7.0, 9.0, 12.0, 15.0, 18.0, 22.0, 26.0, 32.0, 40.0])
    table = {
        (r, c): left_on_axis(
            CIRCULATION_H[c], hours, RADII_M[r], diffusivity, capacity, conductivity
        )
        for r in range(len(RADII_M))
        for c in range(len(CIRCULATION_H))
    }
    rows, surface = [], 11.0 + rng.normal(0.0, 1.0, n_wells)
    gradient = 32.0 * np.exp(rng.normal(0.0, 0.12, n_wells))
    for well in range(n_wells):
        own = rng.normal()
        for depth in np.sort(rng.uniform(700.0, 4200.0, rng.integers(1, 4))):
            rise = (gradient[well] * depth - 1.0e-3 * depth**2) / 1000.0
            z = np.sqrt(well_share) * own + np.sqrt(1 - well_share) * rng.normal()
            cooling = offset_k + slope * rise + scatter * rise * z
            r, c = rng.integers(len(RADII_M)), rng.integers(len(CIRCULATION_H))
            n = rng.choice(sizes)
            first = rng.integers(0, 5)
            runs = np.unique(np.minimum(first + np.arange(n) * rng.integers(1, 3), hours.size - 1))
            timed, circulated = rng.random() >= untimed, rng.random() >= no_circulation
            wrong = np.exp(time_error * rng.normal())
            for run in runs:
                true = surface[well] + rise
                read = true - cooling * table[r, c][run] + rng.normal(0.0, noise_k)
                rows.append(
                    (
                        f"W{well:04d}",
                        depth,
                        np.round(read / rounding_k) * rounding_k,
                        hours[run] * wrong if timed else np.nan,
                        CIRCULATION_H[c] if circulated else np.nan,
                        RADII_M[r],
                        true,
                    )
                )
    frame = pd.DataFrame(
        rows,
        columns=[
            "well",
            "depth_m",
            "temperature_degc",
            "since_circulation_h",
            "circulation_h",
            "hole_radius_m",
            "truth",
        ],
    )
    frame["reading_id"] = [f"r{i:06d}" for i in range(len(frame))]
    frame = frame.assign(kind="bht", temperature_std_k=1.0, source_line=np.arange(len(frame)))
    wells = pd.DataFrame({
        "well": [f"W{i:04d}" for i in range(n_wells)],
        "surface_temperature_degc": surface - surface_error_k,
        "surface_temperature_std_k": 0.3,
    })  # fmt: skip
    return Basin(
        tables.Wells.conform(wells),
        tables.Readings.conform(frame.drop(columns="truth")),
        frame[["reading_id", "truth"]],
    )


def judged(estimates, basin):
    """Estimates with the true formation temperature and total standard uncertainty beside them."""
    first = estimates["reading_ids"].str.split(";").str[0]
    truth = first.map(basin.truth.set_index("reading_id")["truth"])
    parts = ["temperature_std_k", "well_std_k", "shared_std_k"]
    return estimates.assign(truth=truth, std=np.sqrt((estimates[parts] ** 2).sum(axis=1)))
