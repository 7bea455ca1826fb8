"""Codes of what was assumed or doubted, as columns of yes and no until a table is finished."""

from __future__ import annotations

import numpy as np
import pandas as pd

PREFIX = "flag:"


def mark(frame: pd.DataFrame, mask: np.ndarray, code: str) -> None:
    """Raise a flag on the rows of a mask; flags that stand stay."""
    name = f"{PREFIX}{code}"
    mask = np.asarray(mask, bool)
    if name in frame:
        frame[name] = frame[name].to_numpy(bool) | mask
    elif mask.any():
        frame[name] = mask


def joined(frame: pd.DataFrame) -> np.ndarray:
    """Return the flags of each row as sorted ``;``-joined text.

    Examples
    --------
    >>> frame = pd.DataFrame({"well": ["a", "b"]})
    >>> mark(frame, np.array([True, False]), "warm")
    >>> mark(frame, np.array([True, True]), "deep")
    >>> joined(frame).tolist()
    ['deep;warm', 'deep']
    """
    names = sorted(name for name in frame.columns if str(name).startswith(PREFIX))
    if not names:
        return np.full(len(frame), "", object)
    raised = np.column_stack([frame[name].to_numpy(bool) for name in names])
    # Rows share few combinations: text is built once for each.
    packed = np.packbits(raised, axis=1)
    combinations, place = np.unique(packed, axis=0, return_inverse=True)
    bits = np.unpackbits(combinations, axis=1)[:, : len(names)].astype(bool)
    texts = [
        ";".join(name.removeprefix(PREFIX) for name, on in zip(names, row, strict=True) if on)
        for row in bits
    ]
    return np.array([*texts, ""], object)[:-1][place.ravel()]
