"""Threads, and the same bytes on any number of them.

BLAS gets one, whatever the machine: so its sums keep their order. Compiled loops run as tasks:
each task owns what it writes, and how the work is cut does not depend on the threads.
"""

import os
from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from functools import cache, wraps
from typing import ParamSpec, TypeVar

import numpy.linalg  # noqa: F401  both BLAS copies must be loaded before the controller looks
import scipy.linalg  # noqa: F401
from threadpoolctl import ThreadpoolController

P = ParamSpec("P")
R = TypeVar("R")

TASKS = 48  # of a run of compiled loops: some per thread, so that none waits long for the last


def threads_granted() -> int:
    """Return how many threads this process may run: what the workflow grants its job, or cores."""
    granted = os.environ.get("OMP_NUM_THREADS", "")
    if granted.isdecimal() and int(granted) > 0:
        return int(granted)
    affinity = getattr(os, "sched_getaffinity", None)  # not on every system
    return len(affinity(0)) if affinity else os.cpu_count() or 1


def run_tasks(task: Callable[[int, int], None], pieces: int) -> None:
    """Run ``task(first, step)``, which takes the pieces first, first + step, ... of some work."""
    step = min(pieces, TASKS)
    with ThreadPoolExecutor(min(threads_granted(), max(step, 1))) as pool:
        for done in [pool.submit(task, first, step) for first in range(step)]:
            done.result()


@cache
def _controller() -> ThreadpoolController:
    return ThreadpoolController()


def one_blas_thread(function: Callable[P, R]) -> Callable[P, R]:
    """Run a function with BLAS held to one thread."""

    @wraps(function)
    def held(*args: P.args, **kwargs: P.kwargs) -> R:
        with _controller().limit(limits=1):
            return function(*args, **kwargs)

    return held
