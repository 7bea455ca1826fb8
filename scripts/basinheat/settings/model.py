"""The whole config."""

from __future__ import annotations

from typing import Annotated, Any

from pydantic import Field, StringConstraints

from basinheat.settings.base import Section
from basinheat.settings.faults import NAME
from basinheat.settings.heat import Conductivity, Correction, Gradient, HeatFlow
from basinheat.settings.inputs import Inputs
from basinheat.settings.maps import Kriging, Maps, Validation
from basinheat.settings.report import Report
from basinheat.settings.wells import LinearSurface, Screening, SurfaceTemperature

Name = Annotated[str, StringConstraints(pattern=NAME)]


class Settings(Section):
    """One scenario's settings, complete: what the user wrote and the defaults."""

    run: Name = Field(description="name of the run; results go to results/<run>")
    crs: str = Field(description="CRS of the maps, projected, in metres")
    inputs: Inputs = Field(description="input files")
    screening: Screening = Field(default_factory=Screening, description="screening rules")
    surface_temperature: SurfaceTemperature = Field(
        default_factory=lambda: LinearSurface(model="linear", at_sea_level_degc=12.0, std_k=3.0),
        description="temperature at ground or sea floor",
    )
    correction: Correction = Field(default_factory=Correction, description="formation temperatures")
    gradient: Gradient = Field(default_factory=Gradient, description="gradient map")
    conductivity: Conductivity = Field(default_factory=Conductivity, description="rock properties")
    heat_flow: HeatFlow = Field(default_factory=HeatFlow, description="heat flow of the wells")
    maps: Maps = Field(default_factory=Maps, description="what is mapped")
    kriging: Kriging = Field(default_factory=Kriging, description="interpolation")
    validation: Validation = Field(default_factory=Validation, description="how maps are judged")
    report: Report = Field(default_factory=Report, description="pages of the delivery")
    scenarios: dict[Name, dict[str, Any]] = Field(
        default_factory=dict, description="overlays, side by side; base is always there"
    )
    credits: str | None = Field(
        default=None,
        description="owners and licences of the data, as README, report and rasters print them",
    )
    seed: int = Field(default=1, ge=0, description="seed of everything random")
