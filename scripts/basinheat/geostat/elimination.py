"""One elimination that factors a small system and solves it for many right-hand sides at once."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from basinheat.geostat.compiled import compiled

Array = NDArray[np.float64]


@compiled
def eliminate(table: Array, pivots: int, rows: int, width: int, smallest: float) -> int:
    """Eliminate in place the first ``pivots`` rows of a symmetric table from all its rows.

    The table is [[K, A, B], [A^T, E, D]], K of ``pivots`` rows, and only what lies on and right
    of the diagonal is read. With K = U^T U it becomes [[U, U^-T A, U^-T B], [., E - A^T K^-1 A,
    D - A^T K^-1 B]], the diagonal of U holding 1 / U_ii. So the lower rows come out as
    differences from kriging estimates, and the squares of U^-T B are the variance explained.

    Parameters
    ----------
    table : array, shape (>= rows, >= width)
    pivots, rows, width : int
    smallest : float
        A pivot, the variance of a datum given those before it, must be above this.

    Returns
    -------
    int
        -1, or the first row that those before it determine: the result is then void.

    Notes
    -----
    Four rows take up four earlier rows at a time, along the row: each number that is loaded from
    memory is used four times, and every number is owned by one place, so the order of the sums is
    fixed.
    """
    a = 0
    while a < rows:
        tall = min(4, rows - a)
        done = 0
        if tall == 4:
            r0 = table[a, a:width]
            r1 = table[a + 1, a:width]
            r2 = table[a + 2, a:width]
            r3 = table[a + 3, a:width]
            n = width - a
            while done + 4 <= min(a, pivots):
                s0 = table[done, a:width]
                s1 = table[done + 1, a:width]
                s2 = table[done + 2, a:width]
                s3 = table[done + 3, a:width]
                a0, a1, a2, a3 = s0[0], s1[0], s2[0], s3[0]
                b0, b1, b2, b3 = s0[1], s1[1], s2[1], s3[1]
                c0, c1, c2, c3 = s0[2], s1[2], s2[2], s3[2]
                d0, d1, d2, d3 = s0[3], s1[3], s2[3], s3[3]
                for w in range(n):
                    v0, v1, v2, v3 = s0[w], s1[w], s2[w], s3[w]
                    r0[w] -= a0 * v0 + a1 * v1 + a2 * v2 + a3 * v3
                    r1[w] -= b0 * v0 + b1 * v1 + b2 * v2 + b3 * v3
                    r2[w] -= c0 * v0 + c1 * v1 + c2 * v2 + c3 * v3
                    r3[w] -= d0 * v0 + d1 * v1 + d2 * v2 + d3 * v3
                done += 4
        for k in range(a, a + tall):
            row = table[k, k:width]
            n = width - k
            for c in range(done, min(k, pivots)):
                earlier = table[c, k:width]
                g = earlier[0]
                for w in range(n):
                    row[w] -= g * earlier[w]
            if k >= pivots:
                continue
            if not row[0] > smallest:
                return k
            g = 1.0 / math.sqrt(row[0])
            for w in range(n):
                row[w] *= g
            row[0] = g
        a += tall
    return -1
