"""Rows whose required numbers cannot be read: why, in the order in which it is told."""

from __future__ import annotations

import numpy as np

from basinheat.ledger import Ledger
from basinheat.readers import InputTable


def refuse_unreadable(
    table: InputTable, ledger: Ledger, name: str, bounds: bool = False
) -> InputTable:
    """Refuse rows whose required cell is a bound, has a unit that is none, or is no number.

    Parameters
    ----------
    table : InputTable
        As read.
    ledger : Ledger
        Takes the refused rows.
    name : str
        Canonical name of a column of numbers.
    bounds : bool, optional
        Whether a bound has a code of its own (depths and temperatures).
    """
    if bounds:
        table = ledger.refuse(
            table,
            _told(table, f"bound:{name}", name),
            name,
            "bound_only",
            '"{written}" in column "{header}" states a bound and no value.',
        )
    table = ledger.refuse(
        table,
        _told(table, f"unit_unknown:{name}", name),
        name,
        "unit_unknown",
        f'the row gives "{{row_unit_{name}}}" as the unit of column "{{header}}", which is no unit '
        "of its kind. Mend it, or leave it blank where the unit under `units` is meant.",
    )
    return ledger.refuse(
        table,
        table.frame[f"wrong:{name}"].to_numpy(bool),
        name,
        "not_a_number",
        '"{written}" in column "{header}" is not a number. A decimal comma or separators of '
        "thousands are stated under `decimal` and `thousands`.",
    )


def drop_unit_unknown(table: InputTable, ledger: Ledger, name: str) -> None:
    """Use rows without an optional value whose unit is none, and say so."""
    unknown = _told(table, f"unit_unknown:{name}", name)
    ledger.drop(
        table,
        unknown,
        name,
        f"{name}_dropped",
        f'"{{written}}" in column "{{header}}" has the unit "{{row_unit_{name}}}", which is no '
        "unit of its kind; the row is used without it.",
    )
    table.frame.loc[unknown, f"wrong:{name}"] = False


def _told(table: InputTable, column: str, name: str) -> np.ndarray:
    """Return a mark of the reader, without the cells that a reviewer has set since."""
    if column not in table.frame:
        return np.zeros(len(table), bool)
    wrong = table.frame[f"wrong:{name}"].to_numpy(bool)
    return np.asarray(table.frame[column].to_numpy(bool) & wrong)
