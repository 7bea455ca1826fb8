"""Angles and dates as the headers of well logs write them."""

from __future__ import annotations

import re
from datetime import datetime

# A year of two digits is of the last century from here on: logs are older than LAS (1989).
OLDEST_SHORT_YEAR = 31
_DATES = ("%d-%b-%Y", "%d-%b-%y", "%d %b %Y", "%d %b %y", "%d-%B-%Y", "%d %B %Y", "%b %d, %Y")
_STATED = {"DD/MM/YYYY": "%d/%m/%Y", "MM/DD/YYYY": "%m/%d/%Y", "YYYY/MM/DD": "%Y/%m/%d"}


def degrees(text: str) -> str:
    """Return an angle as a decimal number; text that is none as it is.

    Examples
    --------
    >>> degrees("37 24 56 N"), degrees("Lat 37.4"), degrees("101 35 13.2 W"), degrees("0560160")
    ('37.4155555556', '37.4', '-101.587', '0560160')
    >>> degrees("37 83")
    '37 83'
    """
    parts = re.findall(r"[-+]?\d+(?:\.\d+)?", text)
    letters = re.sub(r"[^A-Z]", " ", text.upper()).split()
    if len(parts) == 1 and not letters:
        return parts[0] if re.fullmatch(r"\W*[-+]?[\d.]+\W*", text) else text
    whole = [float(part) for part in parts]
    apart = len(parts) in (1, 2, 3) and all(part == int(part) for part in whole[:-1])
    if not apart or any(not 0.0 <= part < 60.0 for part in whole[1:]):
        return text
    if not set(letters) <= {"N", "S", "E", "W", "LAT", "LONG", "LON", "DEG", "MIN", "SEC"} | {
        *("LATITUDE", "LONGITUDE", "NORTH", "SOUTH", "EAST", "WEST", "D", "M")
    }:
        return text
    angle = sum(abs(part) / 60.0**place for place, part in enumerate(whole))
    below = parts[0].startswith("-") or bool({"W", "WEST", "SOUTH"} & set(letters))
    below |= "S" in letters
    return f"{-angle if below else angle:.10f}".rstrip("0").rstrip(".")


def iso_date(text: str, description: str, pattern: str | None) -> str:
    """Return a date as ISO 8601; one in no form that is known as written.

    The form is the one of the config, or that in braces in the description, as LAS 3.0 has it;
    around slashes a number above 12 tells which is the day.
    """
    stated = re.search(r"{\s*([DMY/]+)", description.upper())
    form = pattern or (_STATED.get(stated[1]) if stated else None)
    forms = [form] if form else []
    slashes = re.fullmatch(r"\s*(\d{1,2})/(\d{1,2})/\d{4}\s*", text)
    if slashes and not forms and max(int(slashes[1]), int(slashes[2])) > 12:
        forms = ["%d/%m/%Y", "%m/%d/%Y"]
    for form in (*forms, *_DATES):
        try:
            day = datetime.strptime(text.strip(), form)
        except ValueError:
            continue
        if "%y" in form:
            year = day.year % 100
            day = day.replace(year=year + (1900 if year >= OLDEST_SHORT_YEAR else 2000))
        return day.strftime("%Y-%m-%d")
    return text
