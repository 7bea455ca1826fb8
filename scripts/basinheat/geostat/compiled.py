"""How loops are compiled: kept between runs, and with sums in the order they are written in.

Import this, and what is built on it, only where a large run needs it: loading the compiler takes
most of a second, and the first run of all compiles for some ten.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, TypeVar

import numba

Loop = TypeVar("Loop", bound=Callable[..., object])

# a product and a sum may become one instruction, and nothing else
_SUMS = {"contract", "nsz"}
_njit: Any = numba.njit


def compiled(function: Loop) -> Loop:
    """Compile a function; other threads may run while it does."""
    return _jit(function)


def inlined(function: Loop) -> Loop:
    """Compile a function that is copied into its callers' loops, so that these vectorise."""
    return _jit(function, inline="always")


def _jit(function: Loop, **further: str) -> Loop:
    decorate = _njit(cache=True, nogil=True, fastmath=_SUMS, error_model="numpy", **further)
    loop: Loop = decorate(function)
    return loop
