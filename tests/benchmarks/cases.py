"""The case that all kriging benchmarks share, and how a measurement runs in its own process."""

import json
import os
import resource
import subprocess
import sys
import time
from pathlib import Path

import numpy as np

SIDE_M = 4e5
SILL, NUGGET, NATURAL_M = 25.0, 4.0, 3e4  # exponential, practical range 90 km

sys.path.insert(0, str(Path(__file__).resolve().parents[2] / "scripts"))


def wells(n, seed=1):
    """Return places, values and error variances: four wells of five in fields of 6 km."""
    rng = np.random.default_rng(seed)
    centres = rng.uniform(0, SIDE_M, (max(4, n // 60), 2))
    held = int(0.8 * n)
    fields = centres[rng.integers(0, len(centres), held)] + rng.normal(0, 6e3, (held, 2))
    xy = np.mod(np.vstack([fields, rng.uniform(0, SIDE_M, (n - held, 2))]), SIDE_M)
    values = 30.0 + _field(xy, rng)
    errors = np.exp(rng.normal(np.log(4.0), 0.7, n))
    return xy, values + rng.normal(size=n) * np.sqrt(NUGGET + errors), errors


def _field(xy, rng, waves=400):
    """Return a field of the exponential covariance as a sum of waves (spectral method)."""
    wavenumber = np.sqrt(rng.uniform(0, 1, waves) ** -2.0 - 1.0) / NATURAL_M
    angle, phase = rng.uniform(0, 2 * np.pi, (2, waves))
    field = np.zeros(len(xy))
    for k, a, p in zip(wavenumber, angle, phase, strict=True):
        field += np.cos(k * (xy[:, 0] * np.cos(a) + xy[:, 1] * np.sin(a)) + p)
    return field * np.sqrt(2 * SILL / waves)


def centres(cells):
    """Return eastings and northings of the centres of a square grid of about so many cells."""
    side = round(cells**0.5)
    along = (np.arange(side) + 0.5) * SIDE_M / side
    return along, along[::-1].copy()


def places(cells):
    """Return the centres, row by row."""
    return np.dstack(np.meshgrid(*centres(cells))).reshape(-1, 2)


def covariance():
    """Return the covariance model of the case."""
    from basinheat.geostat.models import Covariance

    return Covariance.from_natural("exponential", SILL, NATURAL_M, NUGGET)


def peak_mb():
    """Return the largest memory this process has held."""
    return round(resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024)


def dgemm_gflops(threads):
    """Return what BLAS reaches on matrices of 1,500 rows with so many threads."""
    from threadpoolctl import threadpool_limits

    a = np.random.default_rng(0).normal(size=(1500, 1500))
    with threadpool_limits(threads):
        a @ a
        start = time.perf_counter()
        for _ in range(4):
            a @ a
    return 4 * 2 * 1500**3 / (time.perf_counter() - start) / 1e9


def child(script, arguments, timeout_s=1800):
    """Run a script in a process of its own, print its JSON line, and return what it says."""
    command = [sys.executable, script, *map(str, arguments)]
    try:
        run = subprocess.run(
            command, capture_output=True, text=True, timeout=timeout_s, env=os.environ, check=False
        )
        lines = [line for line in run.stdout.splitlines() if line.startswith("{")]
        told = run.stderr.strip().splitlines()[-1:] or [f"ended with {run.returncode}"]
        line = json.loads(lines[-1]) if lines and not run.returncode else {"failed": told[0]}
    except subprocess.TimeoutExpired:
        line = {"failed": f"not done after {timeout_s} s"}
    if "failed" in line:
        line = {"case": " ".join(map(str, arguments)), **line}
    print(json.dumps(line), flush=True)
    return line
