"""Which readings stand at one depth of one well."""

from __future__ import annotations

import numpy as np
import pandas as pd


def depth_sets(frame: pd.DataFrame, same_depth_m: float) -> np.ndarray:
    """Return the number of the set of each reading: same well and kind, depths without a gap.

    Parameters
    ----------
    frame : DataFrame, (n,)
        Columns ``row`` (of the well), ``kind, depth_m``.
    same_depth_m : float
        Gap that parts sets, m.

    Returns
    -------
    ndarray of int, (n,)
    """
    depth, row = frame["depth_m"].to_numpy(), frame["row"].to_numpy()
    kind = pd.factorize(frame["kind"], sort=True)[0]
    order = np.lexsort((depth, kind, row))
    step = [np.diff(values[order], prepend=np.nan) for values in (row, kind, depth)]
    new = (step[0] != 0) | (step[1] != 0) | (step[2] > same_depth_m)
    number = np.empty(len(order), np.int64)
    number[order] = np.cumsum(new)
    return number
