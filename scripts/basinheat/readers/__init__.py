"""Input files of any format, to text cells with their lines, to numbers in canonical units."""

from basinheat.readers.inputs import InputTable, read_inputs
from basinheat.readers.raw import Head, RawTable, headers, look, read_raw

__all__ = [
    "Head",
    "InputTable",
    "RawTable",
    "headers",
    "look",
    "read_inputs",
    "read_raw",
]
