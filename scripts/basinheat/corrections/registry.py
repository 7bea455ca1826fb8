"""All correction methods by name."""

from __future__ import annotations

from types import MappingProxyType

from basinheat.corrections import (
    conductive_recovery,
    corrected,
    dst,
    equilibrium,
    forster1997,
    harrison1983,
    horner,
    kehle_gregory,
    uncorrected,
)

METHODS = MappingProxyType(
    {
        module.METHOD.name: module.METHOD
        for module in (
            equilibrium,
            dst,
            corrected,
            horner,
            conductive_recovery,
            harrison1983,
            kehle_gregory,
            forster1997,
            uncorrected,
        )
    }
)
