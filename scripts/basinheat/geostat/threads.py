"""One BLAS thread, whatever the machine: sums keep their order, so results keep their bytes."""

from collections.abc import Callable
from functools import cache, wraps
from typing import ParamSpec, TypeVar

import numpy.linalg  # noqa: F401  both BLAS copies must be loaded before the controller looks
import scipy.linalg  # noqa: F401
from threadpoolctl import ThreadpoolController

P = ParamSpec("P")
R = TypeVar("R")


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
