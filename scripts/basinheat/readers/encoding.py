"""The text of a file, whatever wrote it."""

from __future__ import annotations

import codecs
import logging
from pathlib import Path

from basinheat.errors import UserError

_log = logging.getLogger(__name__)

# A detector that may choose among all encodings takes a short list of western names for
# central European or Cyrillic; well tables without UTF-8 come from these systems (common practice).
_LIKELY = ["cp1252", "latin_1", "cp850", "mac_roman"]
NUL = "\u2400"  # the picture of the character, which is safe in every file
_SAMPLE = 200_000  # bytes of telling lines
_MARKS = {
    codecs.BOM_UTF32_LE: "utf-32",  # before that of UTF-16, with which it begins
    codecs.BOM_UTF32_BE: "utf-32",
    codecs.BOM_UTF16_LE: "utf-16",
    codecs.BOM_UTF16_BE: "utf-16",
    codecs.BOM_UTF8: "utf-8-sig",
}
# First bytes of what is saved under the name of a text table now and then (the formats' own).
_OTHER = {
    b"PK\x03\x04": "a zip archive or an Excel workbook; a workbook is read as .xlsx",
    b"\xd0\xcf\x11\xe0": "an old or an encrypted Office file; save the table as .xlsx or CSV",
    b"%PDF": "a PDF; save the table as CSV",
    b"\x1f\x8b": "compressed (gzip); unpack it",
    b"PAR1": "a Parquet file; name it .parquet",
    b"SQLite format 3": "a database; a GeoPackage is named .gpkg",
}
_PAGES = ("<!doctype", "<html", "<head", "<body", "<?xml", "<table")


def decode(data: bytes, encoding: str, name: str, whole: bool = True) -> tuple[str, str]:
    """Return the text of a file's bytes, and the encoding it was read in.

    A byte-order mark tells, or the blank bytes of UTF-16; then the stated encoding counts; where
    the bytes do not fit it, the likeliest western encoding, which is logged.

    Parameters
    ----------
    data : bytes
        The file, or its beginning.
    encoding : str
        As stated in the config.
    name : str
        Name of the file, for messages.
    whole : bool, optional
        Whether the bytes are the whole file; else a character cut off at the end is left out.

    Raises
    ------
    UserError
        If the stated encoding has no such name, or the bytes are no text.
    """
    _known(encoding, name)
    other = next((what for start, what in _OTHER.items() if data.startswith(start)), None)
    if other is not None:
        raise UserError(f"{name}: is no text table but {other}.")
    mark = next((mark for mark in _MARKS if data.startswith(mark)), b"")
    for choice in (_MARKS.get(mark) or _wide(data), encoding):
        if choice is not None:
            try:
                return _text(data, choice, whole, name), choice
            except UnicodeError:
                continue
    data = data[len(mark) :]
    guess = _guess(data)
    _log.warning(
        "%s is not %s text and was read as %s: state `encoding` if names look wrong",
        name,
        encoding,
        guess,
    )
    return _text(data, guess, whole, name, "replace"), guess


def read_text(path: str | Path, encoding: str, size: int = -1) -> tuple[str, str]:
    """Return the text of a file, or of its lines within the first bytes, and its encoding."""
    path = Path(path)
    try:
        with path.open("rb") as file:
            data = file.read(size)
    except OSError as error:
        raise UserError(f"{path}: cannot be read ({error.strerror}).") from error
    cut = len(data) == size
    text, found = decode(data, encoding, str(path), whole=not cut)
    if cut:
        text = text[: max(text.rfind("\n"), text.rfind("\r")) + 1] or text
    return text, found


def _known(encoding: str, name: str) -> None:
    """Refuse an encoding that is none, or none of text."""
    try:
        codec = codecs.lookup(encoding)
        "".encode(encoding)  # codecs that turn bytes into bytes are refused here
    except (LookupError, ValueError):
        codec = None
    if codec is None:
        raise UserError(
            f'{name}: encoding "{encoding}" is not known; write utf-8, cp1252, latin-1 or utf-16.'
        )


def _text(data: bytes, encoding: str, whole: bool, name: str, errors: str = "strict") -> str:
    """Return the bytes as text; refuse what is no text or no table."""
    text = codecs.getincrementaldecoder(encoding)(errors).decode(data, whole)
    try:
        text.encode()
    except UnicodeEncodeError:  # halves of characters, as escapes may hold them
        raise UserError(f"{name}: is not {encoding} text; state another `encoding`.") from None
    if "\0" in text:
        # In the line of headers they tell a binary file, further down a damaged row or padding.
        if "\0" in next(iter(text.splitlines()), ""):
            raise UserError(
                f"{name}: begins with NUL characters: it is no text table but binary or damaged. "
                "Save the table anew."
            )
        text = text.replace("\0", NUL)
    if text[:1000].lstrip().lower().startswith(_PAGES):
        raise UserError(f"{name}: is a web page (HTML) or XML and no table. Save the table as CSV.")
    return text.rstrip("\x1a") if whole else text  # the end of a file in DOS


def _wide(data: bytes) -> str | None:
    """Return which UTF-16 the bytes are, told by the zeros beside the letters of plain English."""
    sample = data[:4000]
    if len(sample) < 4 or b"\0" not in sample:
        return None
    even, odd = (sample[i::2].count(0) / len(sample[i::2]) for i in (0, 1))
    if max(even, odd) < 0.4 or min(even, odd) > 0.05:
        return None
    return "utf-16-le" if odd > even else "utf-16-be"


def _guess(data: bytes) -> str:
    """Return the likeliest encoding of the lines that are not plain ASCII."""
    from charset_normalizer import from_bytes

    telling = b"\n".join(line for line in data.split(b"\n") if not line.isascii())[:_SAMPLE]
    best = from_bytes(telling, cp_isolation=_LIKELY).best()
    return best.encoding if best is not None else "cp1252"
