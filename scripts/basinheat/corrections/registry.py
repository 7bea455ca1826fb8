"""All correction methods by name."""

from __future__ import annotations

from types import MappingProxyType

from basinheat.corrections.methods import (
    brennand1984,
    bullard1947,
    conductive_recovery,
    corrected,
    cylinder_source,
    dst,
    equilibrium,
    forster1997,
    generalised_horner,
    harrison1983,
    horner,
    instantaneous_line_source,
    kehle_gregory,
    lachenbruch_brewer1959,
    local_calibration,
    uncorrected,
    waples2001,
    waples2004,
)

METHODS = MappingProxyType(
    {
        module.METHOD.name: module.METHOD
        for module in (
            equilibrium,
            dst,
            corrected,
            horner,
            generalised_horner,
            cylinder_source,
            instantaneous_line_source,
            brennand1984,
            bullard1947,
            lachenbruch_brewer1959,
            conductive_recovery,
            local_calibration,
            harrison1983,
            kehle_gregory,
            forster1997,
            waples2001,
            waples2004,
            uncorrected,
        )
    }
)
