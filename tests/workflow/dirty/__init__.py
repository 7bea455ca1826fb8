"""Dirty inputs: files as they come in practice, and what basinheat should make of them.

The expectations were written from the manual (config/README.md), not from the code: where the two
differ, one of them is wrong. All data are invented. `CASES` holds all cases; `config_of(case)` is
the config of one, `write_files(case, folder)` writes its input files. What a case expects, and how
that is to be read, stands in `model.py`; the good data that dirt is grafted onto, in `base.py`.
"""

from . import (
    decisions,
    geodata,
    headers_and_lines,
    hostile_text,
    layers_and_surveys,
    missing_values,
    numbers_and_units,
    parquet_files,
    places_and_depths,
    readings_and_times,
    ready_made_schema,
    spreadsheets,
    text_files,
    well_logs,
    wells_and_identity,
)
from .model import BASE_CONFIG, Case, Ledger, Refused, config_of, write_files

TOPICS = (
    text_files,
    headers_and_lines,
    spreadsheets,
    parquet_files,
    geodata,
    missing_values,
    numbers_and_units,
    places_and_depths,
    wells_and_identity,
    ready_made_schema,
    readings_and_times,
    layers_and_surveys,
    well_logs,
    decisions,
    hostile_text,
)
CASES: tuple[Case, ...] = tuple(case for topic in TOPICS for case in topic.CASES)

__all__ = ["BASE_CONFIG", "CASES", "Case", "Ledger", "Refused", "config_of", "write_files"]
