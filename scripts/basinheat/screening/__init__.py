"""Screening rules: what one record, one well, or the neighbours say against a reading.

Every rule has a code in words. A rule that warns raises the code as a flag; a rule that refuses
writes a line to the ledger. Hot readings are warned about and never clipped; what is refused is
impossible, or explained by a slip that its sentence names. A reviewer's decision `keep` overrides
every rule here. Rules and thresholds without another source are common practice (METHODS K).
"""

from basinheat.screening.findings import gather_findings
from basinheat.screening.locations import screen_locations
from basinheat.screening.neighbours import screen_against_neighbours
from basinheat.screening.one_record import screen_records
from basinheat.screening.one_well import screen_wells

__all__ = [
    "gather_findings",
    "screen_against_neighbours",
    "screen_locations",
    "screen_records",
    "screen_wells",
]
