"""Input files to clean tables: read, convert, place, merge and screen; nothing vanishes."""

from basinheat.ingest.stage import Prepared, prepare

__all__ = ["Prepared", "prepare"]
