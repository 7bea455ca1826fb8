"""Shared sources of error: what is uncertain for many wells at once."""

from basinheat.tables.contract import Table, number, text
from basinheat.tables.contract import count as whole

# Names that more than one stage knows: single sources, and how those of one kind begin.
SURFACE, PRODUCTION = "surface_temperature", "rock:heat_production"
LITHOLOGY, ROCK = "conductivity:", "rock:"
PUBLISHED = "heat_flow:published"


class Sources(Table):
    """One row per shared source; amplitudes count in prior standard deviations inside the model."""

    columns = {
        "source": text("name, kind:detail"),
        "prior_std": number("", "prior standard deviation, in the source's own unit"),
        "mean": number("", "posterior mean, in the source's own unit"),
        "std": number("", "posterior standard deviation, in the source's own unit"),
        "unit": text("the source's own unit"),
        "n_wells": whole("wells that carry it"),
    }


class SourceCovariance(Table):
    """Mean and covariance of the amplitudes (unit prior), one row per source."""

    columns = {"source": text("name, kind:detail"), "mean": number("", "mean amplitude")}
    open_columns = {"covariance_": number("", "covariance with another source")}
