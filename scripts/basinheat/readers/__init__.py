"""Input files of any format, to text cells with their lines, to numbers in canonical units."""

from basinheat.readers.inputs import InputTable, read_inputs
from basinheat.readers.raw import RawTable, headers, read_raw

__all__ = ["InputTable", "RawTable", "headers", "read_inputs", "read_raw"]
