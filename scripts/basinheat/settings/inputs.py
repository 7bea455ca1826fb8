"""Settings of the inputs: files, columns, units, kinds."""

from __future__ import annotations

import re
from collections.abc import Mapping
from datetime import UTC, datetime
from typing import Annotated, Any, Literal

from pydantic import ConfigDict, Field, field_validator, model_validator

from basinheat.settings.base import Section

Kind = Literal["bht", "dst", "equilibrium", "corrected"]
WellNames = Literal["exact", "normalised", "us_api"]
Schema = Literal["ngds_borehole_temperature", "ihfc_heat_flow"]
Columns = dict[str, str]


def _a_form_of_dates(form: str | None) -> str | None:
    """Refuse a form in which no year can be written and read back."""
    if form is None:
        return form
    date = datetime(1984, 6, 14, 22, 35, tzinfo=UTC)
    try:
        fault = "" if datetime.strptime(date.strftime(form), form).year == date.year else "no year"
    except (ValueError, re.error) as error:
        fault = str(error)
    if fault:
        raise ValueError(f"no date can be read in this form ({fault}); write it like %m/%d/%Y")
    return form


class TableFile(Section):
    """One input table: a file or a glob, and how to read it."""

    # pydantic has a method of the name `schema`: in configs it is so called, in code not.
    model_config = ConfigDict(serialize_by_alias=True)

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
    delimiter: str = Field(
        default="auto",
        min_length=1,
        description="separator of the columns, auto: comma, semicolon, tab or bar; "
        '" ": any run of blanks',
    )
    encoding: str = Field(
        default="utf-8-sig",
        description="text encoding; another is looked for where it does not fit",
    )
    decimal: Literal[".", ","] = Field(default=".", description="decimal mark of numbers")
    thousands: Literal["", ",", ".", " ", "'"] = Field(
        default="", description="separator of thousands in numbers"
    )
    skip_lines: Annotated[int, Field(ge=0)] | Literal["auto"] = Field(
        default="auto", description="lines before the header; auto: the headers are looked for"
    )
    sheet: int | str | None = Field(
        default=None, description="sheet of a workbook: its name, or its number from 1"
    )
    layer: str | None = Field(default=None, description="layer of a file of points")
    unit_columns: dict[str, str] = Field(
        default_factory=dict, description="canonical name: header of the column of its units"
    )
    zero_is_missing: list[str] | None = Field(
        default=None, description="canonical names of columns where 0 means not noted"
    )
    known_columns: Schema | None = Field(
        default=None,
        alias="schema",
        description="open standard whose columns, units and missing words are taken",
    )

    @property
    def given(self) -> frozenset[str]:
        """Columns that need no header."""
        return frozenset()

    @property
    def more_headers(self) -> tuple[str, ...]:
        """Headers that are read beside the columns."""
        return ()


class PlacesFile(TableFile):
    """Rows that lie somewhere."""

    crs: str | None = Field(default=None, description="CRS of x and y; default: the map's crs")
    crs_column: str | None = Field(
        default=None, description="header of the column of each row's CRS or datum"
    )


class WellsFile(PlacesFile):
    """Wells: one row a well."""


class HeatFlowFile(PlacesFile):
    """Heat flow that others found: one row a place."""


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
    _dates = field_validator("date_format")(_a_form_of_dates)


class LayersFile(TableFile):
    """Rock layers: one row a layer or a top, or one row a well."""

    shape: Literal["intervals", "tops", "wide"] = Field(
        default="intervals",
        description="top and base; tops alone; or one row a well, a column per formation",
    )
    tops: dict[str, str] = Field(
        default_factory=dict, description="header of a formation's top: lithology (shape wide)"
    )
    depth_reference: Literal["measured", "subsea_depth", "subsea_elevation"] = Field(
        default="measured",
        description="of top and base: along the hole below the datum; or vertical from sea level, "
        "positive down or up",
    )

    @property
    def given(self) -> frozenset[str]:
        """Columns that the shape supplies, so that no header needs to."""
        return {
            "intervals": frozenset[str](),
            "tops": frozenset({"base"}),
            "wide": frozenset({"top", "base", "lithology"}),
        }[self.shape]

    @property
    def more_headers(self) -> tuple[str, ...]:
        """Headers that are read beside the columns."""
        return tuple(self.tops)

    @model_validator(mode="after")
    def _formations_of_wide_files(self) -> LayersFile:
        if (self.shape == "wide") != bool(self.tops):
            raise ValueError(
                "shape wide needs the columns of the formations under tops: {HEADER: lithology}"
                if self.shape == "wide"
                else "tops names the columns of a wide file: state shape: wide"
            )
        return self


class Mnemonics(Section):
    """Names in the headers of well logs, per column, in the order in which they count."""

    well: list[str] = Field(default=["UWI", "API", "WELL", "WN"], description="name of the well")
    x: list[str] = Field(
        default=["LONG", "LON", "LONGITUDE", "X", "XCOORD", "EASTING", "EAST"],
        description="longitude or easting",
    )
    y: list[str] = Field(
        default=["LATI", "LAT", "LATITUDE", "Y", "YCOORD", "NORTHING", "NORTH"],
        description="latitude or northing",
    )
    crs: list[str] = Field(
        default=["GDAT", "HZCS", "DATUM"], description="datum or CRS of the coordinates"
    )
    ground_elevation: list[str] = Field(
        default=["EGL", "GL", "ELEV_GL", "GELV"], description="ground above sea level"
    )
    datum_elevation: list[str] = Field(
        default=["EREF", "EKB", "KB", "ELEV_KB", "EDF", "DF"],
        description="depth datum above sea level",
    )
    water_depth: list[str] = Field(default=["WDEP", "WD", "WATD"], description="water depth")
    total_depth: list[str] = Field(
        default=["TD", "TDL", "TDD"], description="total depth of the well"
    )
    temperature: list[str] = Field(
        default=["BHT", "TMAX", "MRT", "MAXT", "MXT", "BHTMP", "BTMP"],
        description="bottom-hole or highest temperature of the run",
    )
    depth: list[str] = Field(
        default=["BHTDEP", "BHTD", "GDEPT", "TDL", "TDD", "TD", "RUN_DEPTH"],
        description="depth of the temperature; of two depths in a cell the deeper",
    )
    since_circulation: list[str] = Field(
        default=["TSC", "TSCS", "HSC", "TIMC"],
        description="time since circulation stopped; TIMC only where its unit is a time",
    )
    circulation: list[str] = Field(default=["CIRC", "TCIRC", "CIRT"], description="circulation")
    circulation_stopped: list[str] = Field(
        default=["TIMC", "TCS", "DTCS"], description="time of day circulation stopped"
    )
    logger_on_bottom: list[str] = Field(
        default=["TIML", "TLAB", "TLOB", "DTLB"], description="time of day of the logger on bottom"
    )
    hole_diameter: list[str] = Field(default=["BS", "BIT", "BITSIZE"], description="bit size")
    mud_temperature: list[str] = Field(
        default=["MTBH", "BHMT"], description="mud temperature at the bottom of the hole"
    )
    date: list[str] = Field(
        default=["RUN_DATE", "DATE", "LDATE", "DLOG"], description="date of the run"
    )
    log_run: list[str] = Field(default=["RUN", "RUNN"], description="number of the run")


class LasFile(Section):
    """Well logs whose headers hold temperatures."""

    file: str = Field(description="path or glob, relative to the config file")
    mnemonics: Mnemonics = Field(default_factory=Mnemonics, description="names to look for")
    units: dict[str, str] = Field(
        default_factory=dict, description="canonical name: unit; where the file states none"
    )
    crs: str | None = Field(
        default=None,
        description="CRS of x and y where the file states none; default: EPSG:4326 for degrees, "
        "else the map's crs",
    )
    kind: Kind = Field(default="bht", description="kind of the temperatures")
    date_format: str | None = Field(
        default=None, description="of the dates, as in strptime; default ISO 8601, d.m.y, 13-DEC-86"
    )
    _dates = field_validator("date_format")(_a_form_of_dates)


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

    wells: list[WellsFile] = Field(description="well tables")
    readings: list[ReadingsFile] = Field(description="reading tables")
    layers: list[LayersFile] = Field(default_factory=list, description="layer tables")
    surveys: list[TableFile] = Field(default_factory=list, description="deviation surveys")
    heat_flow: list[HeatFlowFile] = Field(
        default_factory=list, description="tables of heat flow that others found"
    )
    las: list[LasFile] = Field(default_factory=list, description="well logs")
    well_names: WellNames = Field(
        default="exact", description="which names of wells are one: exact, normalised, us_api"
    )
    rasters: Rasters = Field(default_factory=Rasters, description="rasters")
    decisions: str | None = Field(
        default=None, description="CSV of a reviewer's decisions, applied last"
    )

    @model_validator(mode="before")
    @classmethod
    def _logs_alone_will_do(cls, raw: Any) -> Any:
        """Let wells and readings come from the headers of logs alone."""
        if isinstance(raw, Mapping) and raw.get("las"):
            return {"wells": [], "readings": [], **raw}
        return raw

    @model_validator(mode="after")
    def _something_to_map(self) -> Inputs:
        for name in ("wells", "readings"):
            if not (getattr(self, name) or self.las):
                raise ValueError(f"{name} needs at least 1 entry")
        return self
