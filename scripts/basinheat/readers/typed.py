"""Columns that have types (Parquet, points) as text, the way a person would type them."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pandas as pd

from basinheat.errors import UserError

if TYPE_CHECKING:
    import pyarrow as pa

WHOLE = 1e15  # below it every whole number has digits of its own


def as_text(column: pa.ChunkedArray, decimal: str, what: str) -> pd.Series:
    """Return a column as text, blank where it holds nothing.

    Whole numbers have no point behind them, numbers have the decimal mark that the config states
    (so that they are read with it), dates and times are ISO 8601 without a midnight.

    Parameters
    ----------
    column : ChunkedArray, (n,)
        Of any plain type.
    decimal : str
        Decimal mark.
    what : str
        File and column, for messages.

    Raises
    ------
    UserError
        Where the column holds lists or other things that are no cells.
    """
    import pyarrow as pa
    import pyarrow.compute as pc

    kind = column.type
    if pa.types.is_dictionary(kind):
        column, kind = column.cast(kind.value_type), kind.value_type
    if pa.types.is_nested(kind) or pa.types.is_binary(kind) or pa.types.is_large_binary(kind):
        raise UserError(f"{what}: holds {kind} and no text, numbers or dates.")
    try:
        if pa.types.is_timestamp(kind):
            text = _moments(column)
        elif pa.types.is_floating(kind):
            text = _decimals(column, decimal)
        else:
            text = pc.cast(column, pa.string())
    except pa.ArrowException:
        raise UserError(f"{what}: holds {kind} and no text, numbers or dates.") from None
    return pd.Series(pd.array(pc.fill_null(text, ""), dtype="str"))


def cell_text(value: object, decimal: str) -> str:
    """Return one cell as text, by the same rules."""
    import datetime as dt

    if value is None:
        return ""
    if isinstance(value, bool):
        return str(value).upper()
    if isinstance(value, float):
        whole = value.is_integer() and abs(value) < WHOLE
        return str(int(value)) if whole else repr(value).replace(".", decimal)
    if isinstance(value, dt.datetime):
        midnight = value.time() == dt.time()
        return value.date().isoformat() if midnight else value.isoformat(" ", "seconds")
    if isinstance(value, dt.timedelta):
        minutes, seconds = divmod(round(value.total_seconds()), 60)
        end = f":{seconds:02d}" if seconds else ""
        return f"{minutes // 60}:{minutes % 60:02d}{end}"
    if isinstance(value, dt.time):
        return value.isoformat("seconds").removesuffix(":00")
    return str(value)


def _decimals(column: pa.ChunkedArray, decimal: str) -> pa.ChunkedArray:
    """Return floating numbers as the shortest text that gives them again; whole ones in digits."""
    import pyarrow as pa
    import pyarrow.compute as pc

    values = pc.cast(column, pa.float64())
    whole = pc.and_(pc.equal(pc.floor(values), values), pc.less(pc.abs(values), WHOLE))
    digits = pc.cast(pc.cast(pc.if_else(whole, values, None), pa.int64()), pa.string())
    text = pc.coalesce(digits, pc.cast(column, pa.string()))
    text = pc.if_else(pc.is_nan(values), "", text)
    return text if decimal == "." else pc.replace_substring(text, ".", decimal)


def _moments(column: pa.ChunkedArray) -> pa.Array:
    """Return timestamps as ISO 8601 in seconds, without a midnight."""
    import pyarrow as pa
    import pyarrow.compute as pc

    values = pd.to_datetime(pd.Series(column.to_pandas()), errors="coerce")
    text = values.dt.strftime("%Y-%m-%d %H:%M:%S").astype("str")
    plain = pc.replace_substring_regex(pa.array(text, pa.string()), " 00:00:00$", "")
    return pc.if_else(pa.array(values.isna()), "", plain)
