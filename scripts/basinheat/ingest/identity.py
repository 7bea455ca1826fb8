"""Which names mean the same well, in files that spell them differently."""

from __future__ import annotations

import logging
import re
from dataclasses import dataclass, field

import numpy as np
import pandas as pd

from basinheat.flags import mark
from basinheat.readers import InputTable
from basinheat.settings.inputs import WellNames

_log = logging.getLogger(__name__)

WRITTEN = "as_written:well"
_MARKS = dict.fromkeys(map(ord, "-_/.,'\u2010\u2011\u2012\u2013\u2019"))
_DECIMAL = re.compile(r"(\d+)\.0+")
# Ten digits are state, county and well; two and four more are sidetrack and completion (the API
# bulletin D12A on US well numbers, from memory). A spreadsheet drops the zero in front.
_API_DIGITS = {9: 10, 10: 10, 11: 12, 12: 12, 13: 14, 14: 14}


@dataclass
class Identity:
    """The wells' final names: what each spelling of the wells' files became, and the keys.

    Parameters
    ----------
    rule : {"exact", "normalised", "us_api"}
        What makes two names one.
    names : dict
        Spelling in the files of wells: final name.
    by_key : dict
        Key: final name, for spellings that the files of wells do not hold; "" where wells were
        kept apart, so that the key does not tell which of them is meant.
    """

    rule: WellNames
    names: dict[str, str] = field(default_factory=dict)
    by_key: dict[str, str] = field(default_factory=dict)

    def apply(self, table: InputTable) -> InputTable:
        """Give rows of readings, layers or surveys the final name of their well."""
        codes, unique = _spellings(table)
        final = [self.names.get(name, "") for name in unique]
        strange = [place for place, name in enumerate(final) if not name]
        for place, name in zip(
            strange, self._by_key([unique[place] for place in strange]), strict=True
        ):
            final[place] = name or unique[place]
        return _renamed(table, codes, unique, final)

    def torn(self, name: str) -> str:
        """Return a remark where a name could be any of wells that were kept apart."""
        if self.rule == "exact" or not name:
            return ""
        apart = self.by_key.get(keys([name], self.rule)[0]) == ""
        return "; it may mean any of the wells flagged well_name_ambiguous" if apart else ""

    def _by_key(self, names: list[str]) -> list[str]:
        """Return the wells that names mean by their keys, "" for none."""
        if self.rule == "exact":
            return [""] * len(names)
        found = keys(names, self.rule)
        return [
            self.by_key.get(key, "") if name else "" for key, name in zip(found, names, strict=True)
        ]


def keys(names: list[str], rule: WellNames) -> list[str]:
    """Return what names have in common when they mean one well.

    Examples
    --------
    >>> keys(["0042", "42.0", "BW-07 a", "bw/07A"], "normalised")
    ['42', '42', 'bw07a', 'bw07a']
    >>> keys(["05-123-45678", "05123456780100", "0512345678.0", "BW-7"], "us_api")
    ['0512345678', '0512345678', '0512345678', 'BW-7']
    """
    if rule == "exact":
        return list(names)
    return [_normalised(name) if rule == "normalised" else _us_api(name) for name in names]


def joined_wells(table: InputTable, rule: WellNames, distance_m: float) -> InputTable:
    """Give rows of one well one name: the first spelling, in the order of the files.

    Spellings whose rows lie further apart than ``distance_m`` are different wells: they keep
    their names, flagged ``well_name_ambiguous``.

    Parameters
    ----------
    table : InputTable
        Wells in the order of the files, with ``easting_m, northing_m`` (NaN where not placed).
    rule : {"exact", "normalised", "us_api"}
        What makes two names one.
    distance_m : float
        Largest distance between rows of one well, m.
    """
    frame = table.frame
    codes, unique = _spellings(table)
    if rule == "exact" or not unique:
        return _renamed(table, codes, unique, unique)
    group, _ = pd.factorize(np.array([*keys(unique, rule), ""], object)[:-1])
    rows = group[codes]
    spellings = np.bincount(group)
    place = frame.groupby(rows)[["easting_m", "northing_m"]]
    width = place.max() - place.min()
    apart = np.hypot(width["easting_m"], width["northing_m"]).to_numpy() > distance_m
    ambiguous = (spellings > 1) & apart
    # factorize numbers names as they come, so the first of a group has its lowest number
    first = np.zeros(len(spellings), np.int64)
    first[group[::-1]] = np.arange(len(unique))[::-1]
    source = np.where(ambiguous[group], np.arange(len(unique)), first[group])
    table = _renamed(table, codes, unique, [unique[place] for place in source])
    mark(table.frame, ambiguous[rows], "well_name_ambiguous")
    return table


def identity_of(table: InputTable, rule: WellNames, spellings: list[str]) -> Identity:
    """Return the identity of wells that :func:`joined_wells` has named.

    Parameters
    ----------
    table : InputTable
        Wells with their names as written and their final ones.
    rule : {"exact", "normalised", "us_api"}
        What makes two names one.
    spellings : list of str
        All names in the files of wells, those of refused rows too, in their order.
    """
    # a spelling has one final name
    pairs = table.frame.loc[~table.frame[WRITTEN].duplicated(), [WRITTEN, "well"]]
    found = Identity(rule, dict(zip(pairs[WRITTEN], pairs["well"], strict=True)))
    if rule != "exact":
        for key, name in zip(keys(list(found.names), rule), found.names.values(), strict=True):
            if found.by_key.setdefault(key, name) != name:
                found.by_key[key] = ""
    others = [name for name in spellings if name and name not in found.names]
    for key, name in zip(keys(others, rule), others, strict=True):
        found.names[name] = (rule != "exact" and found.by_key.setdefault(key, name)) or name
    return found


def similar(names: list[str], wells: list[str]) -> list[str]:
    """Return per name the well that the rule ``normalised`` would take it for, "" for none."""
    near: dict[str, str] = {}
    for key, well in zip(keys(sorted(wells), "normalised"), sorted(wells), strict=True):
        near.setdefault(key, well)
    return [near.get(key, "") for key in keys(names, "normalised")]


def _spellings(table: InputTable) -> tuple[np.ndarray, list[str]]:
    """Return for each row the place of its name among those that occur, as they come."""
    codes, unique = pd.factorize(table.frame["well"])
    return codes, unique.tolist()


def _renamed(
    table: InputTable, codes: np.ndarray, unique: list[str], final: list[str]
) -> InputTable:
    """Return the table with other names; those as written stay beside them."""
    frame = table.frame
    if WRITTEN not in frame:
        frame[WRITTEN] = frame["well"]
    changed = np.array([old != new for old, new in zip(unique, final, strict=True)], bool)
    if changed.any():
        frame["well"] = pd.Series(final, dtype="str").take(codes).array
        mark(frame, changed[codes], "well_name_matched")
        _log.info("%s: %d spellings of well names matched", table.name, int(changed.sum()))
    return table


def _normalised(name: str) -> str:
    """Return the name in lower case, without blanks, marks, zeros in front and ``.0`` behind."""
    decimal = _DECIMAL.fullmatch(name)
    plain = "".join((decimal[1] if decimal else name).split()).translate(_MARKS).casefold()
    return plain.lstrip("0") or plain or name


def _us_api(name: str) -> str:
    """Return the first ten digits of a US well number; other names as they are."""
    decimal = _DECIMAL.fullmatch(name)
    digits = "".join((decimal[1] if decimal else name).split()).replace("-", "")
    if not (digits.isascii() and digits.isdigit()) or len(digits) not in _API_DIGITS:
        return name
    return digits.zfill(_API_DIGITS[len(digits)])[:10]
