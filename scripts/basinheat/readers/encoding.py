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
_SAMPLE = 200_000  # bytes of telling lines
_MARKS = {
    codecs.BOM_UTF16_LE: "utf-16",
    codecs.BOM_UTF16_BE: "utf-16",
    codecs.BOM_UTF8: "utf-8-sig",
}


def decode(data: bytes, encoding: str, name: str) -> str:
    """Return the text of a file's bytes.

    The stated encoding counts; where the bytes do not fit it, the byte-order mark tells, and
    where there is none, the likeliest western encoding, which is logged.

    Parameters
    ----------
    data : bytes
        The whole file.
    encoding : str
        As stated in the config.
    name : str
        Name of the file, for messages.

    Raises
    ------
    UserError
        If the stated encoding has no such name.
    """
    try:
        codecs.lookup(encoding)
    except LookupError:
        raise UserError(
            f'{name}: encoding "{encoding}" is not known; write utf-8, cp1252, latin-1 or utf-16.'
        ) from None
    marked = next((found for mark, found in _MARKS.items() if data.startswith(mark)), None)
    for choice in (marked, encoding):
        if choice is not None:
            try:
                return data.decode(choice)
            except UnicodeDecodeError:
                continue
    guess = _guess(data)
    _log.warning(
        "%s is not %s text and was read as %s: state `encoding` if names look wrong",
        name,
        encoding,
        guess,
    )
    return data.decode(guess, errors="replace")


def read_text(path: str | Path, encoding: str, size: int = -1) -> str:
    """Return the text of a file, or of its lines within the first bytes."""
    path = Path(path)
    try:
        with path.open("rb") as file:
            data = file.read(size)
    except OSError as error:
        raise UserError(f"{path}: cannot be read ({error.strerror}).") from error
    if len(data) == size:
        data = data[: data.rfind(b"\n") + 1] or data
    return decode(data, encoding, path.name)


def _guess(data: bytes) -> str:
    """Return the likeliest encoding of the lines that are not plain ASCII."""
    from charset_normalizer import from_bytes

    telling = b"\n".join(line for line in data.split(b"\n") if not line.isascii())[:_SAMPLE]
    best = from_bytes(telling, cp_isolation=_LIKELY).best()
    return best.encoding if best is not None else "cp1252"
