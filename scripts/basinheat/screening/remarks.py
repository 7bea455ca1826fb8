"""What the remarks of a reading say about it: gas, losses, air, ground that is out of the ordinary.

The words are common practice (METHODS K, Q09, Q18, Q19; A11), no source.
"""

from __future__ import annotations

import numpy as np
import pandas as pd

from basinheat.flags import mark
from basinheat.ledger import Ledger
from basinheat.readers import InputTable
from basinheat.settings.wells import Screening

# Words that say a temperature was not read.
_EST = r"(?:est|estd|estim|estimate|estimated|calc|calculated|nominal|assumed)"
ESTIMATED = rf"(?i)\b{_EST}\b"
# "no gas", "without losses": what did not happen, up to the next stop.
_DENIED = r"\b(?:no|not|nil|without|w/o)\b[^,;.:]*"
_GAS = r"\bgas\b(?!\s*oil)|\bgts\b|\bgcm\b|\bco2\b"
_LIQUID = r"(?:oil|water|wtr|sw|brine|condensate)"
_OF_LOGS = {
    "lost_circulation": r"\blos(?:t|s|ses)\s+(?:of\s+)?(?:circ|return|mud)|\blcm\b|\bmud\s+loss",
    "gas_cooled": r"\b(?:air|gas|mist|foam)[- ]?drill|\bdrill\w*\s+(?:with|on)\s+(?:air|gas|foam)"
    r"|\bgas\s+(?:kick|influx|flow)",
    "injected": r"\b(?:steam|co2|water)[- ]?(?:injection|inject|flood)",
}
_OF_TESTS = {
    "gas_cooled": _GAS,
    "only_mud_recovered": rf"\bmis-?run\b|\bmud\s+only\b|^(?!.*\b{_LIQUID}\b).*\brec\w*\b.*\bmud\b",
}
_OF_PLACES = {
    "permafrost": r"\bpermafrost\b|\bhydrates?\b|\bfrozen\s+ground\b",
    "salt_nearby": r"\bsalt\s+(?:flank|dome|diapir|body|wall|canopy)|\b(?:near|beside)\s+salt\b",
    "moving_water": r"\brecharge\b|\bkarst\b|\b(?:water|ground\s?water)\s+flow|\bhot\s+spring",
}
_ESTIMATED_TEMPERATURE = rf"(?i)\b(?:bht|temp\w*)\b\W*(?:\w+\W+)?{_EST}\b"


def screen_remarks(table: InputTable, ledger: Ledger, rules: Screening, std_k: float) -> InputTable:
    """Raise the flags that the remarks speak of; widen tests that gas may have cooled.

    Expanding gas cools the gauge of a test by up to some ten kelvin, so that the rock is warmer
    than read by an amount of which only the size is known: the mean square about the value as read
    is that of a one-sided error, ``gas_std_k``.

    Parameters
    ----------
    table : InputTable
        Readings with ``remarks, kind``.
    ledger : Ledger
        Takes readings that were estimated.
    rules : Screening
        ``gas_std_k``.
    std_k : float
        Standard uncertainty of a reading that states none, K.
    """
    frame = table.frame
    codes, texts = pd.factorize(frame["remarks"])
    if not any(texts):
        return table
    text = pd.Series(texts, dtype="str").str.lower().str.replace(_DENIED, " ", regex=True)
    test = (frame["kind"] == "dst").to_numpy()
    for words, rows in (
        (_OF_LOGS, (frame["kind"] == "bht").to_numpy()),
        (_OF_TESTS, test),
        (_OF_PLACES, np.ones(len(frame), bool)),
    ):
        for code, pattern in words.items():
            mark(frame, rows & text.str.contains(pattern).to_numpy(bool)[codes], code)
    gas = np.asarray(frame.get("flag:gas_cooled", False)) & test
    stated = frame["temperature_std"].to_numpy(float)
    base = np.where(np.isfinite(stated), stated, std_k)
    frame["temperature_std"] = np.where(gas, np.maximum(base, rules.gas_std_k), stated)
    alone = text.str.strip(" .()").str.fullmatch(ESTIMATED)
    estimated = (alone | text.str.contains(_ESTIMATED_TEMPERATURE)).to_numpy(bool)[codes]
    return ledger.screen(
        table,
        estimated,
        "remarks",
        "estimated_value",
        'the remarks say "{remarks}": the temperature was estimated or calculated, not read.',
    )
