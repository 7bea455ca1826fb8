"""Settings of the inputs: files, columns, units, kinds."""

from __future__ import annotations

from typing import Literal

from pydantic import Field

from basinheat.settings.base import Section

Kind = Literal["bht", "dst", "equilibrium", "corrected"]
Columns = dict[str, str]


class TableFile(Section):
    """One input table: a file or a glob, and how to read it."""

    file: str = Field(description="path or glob, relative to the config file")
    columns: Columns = Field(
        default_factory=dict, description="canonical name: header in the file; empty: same names"
    )
    units: dict[str, str] = Field(
        default_factory=dict, description="canonical name: unit; default m, degC, h"
    )
    missing: list[str] = Field(
        default_factory=list, description="words that mean missing, beside the blank"
    )
    delimiter: str = Field(default=",", min_length=1, description="separator of the columns")
    encoding: str = Field(
        default="utf-8-sig",
        description="text encoding; another is looked for where it does not fit",
    )
    decimal: Literal[".", ","] = Field(default=".", description="decimal mark of numbers")
    thousands: Literal["", ",", ".", " ", "'"] = Field(
        default="", description="separator of thousands in numbers"
    )
    skip_lines: int = Field(default=0, ge=0, description="lines before the header")


class WellsFile(TableFile):
    """Wells: one row a well."""

    crs: str | None = Field(default=None, description="CRS of x and y; default: the map's crs")


class ReadingsFile(TableFile):
    """Temperature readings: one row a reading."""

    kinds: dict[str, Kind] = Field(
        default_factory=dict,
        description="word in the kind column: bht, dst, equilibrium, corrected",
    )
    kind: Kind = Field(default="bht", description="kind of rows that state none")
    date_format: str | None = Field(
        default=None, description="of the dates, as in strptime (%m/%d/%Y); default ISO 8601, d.m.y"
    )


class Rasters(Section):
    """Rasters in any CRS and resolution."""

    elevation: str | None = Field(default=None, description="ground above sea level, m")
    bathymetry: str | None = Field(
        default=None, description="sea floor above sea level, m (negative)"
    )
    surface_temperature: str | None = Field(
        default=None, description="temperature at ground or sea floor, degC"
    )


class Inputs(Section):
    """All inputs."""

    wells: list[WellsFile] = Field(min_length=1, description="well tables")
    readings: list[ReadingsFile] = Field(min_length=1, description="reading tables")
    layers: list[TableFile] = Field(default_factory=list, description="layer tables")
    surveys: list[TableFile] = Field(default_factory=list, description="deviation surveys")
    rasters: Rasters = Field(default_factory=Rasters, description="rasters")
    decisions: str | None = Field(
        default=None, description="CSV of a reviewer's decisions, applied last"
    )
