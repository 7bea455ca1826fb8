"""Settings of correction, gradient, conductivity and heat flow."""

from __future__ import annotations

from typing import Literal

from pydantic import Field, NonNegativeFloat, PositiveFloat, PositiveInt

from basinheat.settings.base import Section

Method = Literal[
    "equilibrium",
    "dst",
    "corrected",
    "horner",
    "generalised_horner",
    "cylinder_source",
    "instantaneous_line_source",
    "brennand1984",
    "bullard1947",
    "conductive_recovery",
    "harrison1983",
    "kehle_gregory",
    "forster1997",
    "waples2001",
    "waples2004",
    "uncorrected",
]
Region = Literal["oklahoma", "kansas_southeast", "united_states", "malay_basin", "campeche"]


class Correction(Section):
    """How formation temperatures are found."""

    order: list[Method] = Field(
        default=["equilibrium", "dst", "corrected", "conductive_recovery", "harrison1983"],
        min_length=1,
        description="methods; the first that applies counts, per well and depth",
    )
    region: Region | None = Field(
        default=None, description="region of the wells, to admit a regional formula"
    )
    same_depth_m: PositiveFloat = Field(
        default=15.0, description="readings of one well closer than this are one set"
    )
    diffusivity_m2_s: PositiveFloat = Field(default=1.0e-6, description="of the rock")
    hole_radius_m: PositiveFloat = Field(default=0.108, description="where none is noted")
    circulation_h: PositiveFloat = Field(default=4.0, description="where none is noted: median")
    circulation_factor: float = Field(
        default=1.8, gt=1.0, description="where none is noted: 1-sigma factor"
    )
    reading_std_k: PositiveFloat = Field(
        default=1.0, description="thermometer and rounding, where the reading states none"
    )
    well_share: float = Field(
        default=0.5, ge=0.0, lt=1.0, description="share of a method's variance common to a well"
    )


class Gradient(Section):
    """The gradient map."""

    reference_depth_m: PositiveFloat = Field(
        default=2000.0, description="gradient.tif is the mean down to this depth"
    )


class BelowLayers(Section):
    """The rock below the deepest layers that enough wells reach."""

    conductivity_w_mk: PositiveFloat = Field(default=3.0, description="at 25 degC")
    std_ln: PositiveFloat = Field(default=0.2, description="standard deviation of ln k")
    growth_ln_per_km: NonNegativeFloat = Field(default=0.05, description="its growth with depth")
    heat_production_uw_m3: NonNegativeFloat = Field(default=1.2, description="heat production")


class Conductivity(Section):
    """Rock properties."""

    catalogue: str | None = Field(
        default=None, description="CSV in place of the catalogue that comes with the program"
    )
    lithologies: dict[str, str] = Field(
        default_factory=dict, description="name in the layers: name in the catalogue"
    )
    std_ln: PositiveFloat | None = Field(
        default=None, description="shared sigma of ln k for every lithology; default: catalogue"
    )
    well_std_ln: NonNegativeFloat = Field(
        default=0.05, description="sigma of ln k of a lithology from well to well"
    )
    temperature_law: bool = Field(
        default=True, description="conductivity falls with temperature (law by rock class)"
    )
    interval_m: PositiveFloat = Field(default=250.0, description="depth intervals of the maps")
    wells_per_interval: PositiveInt = Field(
        default=5, description="wells an interval needs to be kriged"
    )
    default_lithology: str = Field(
        default="sediment", description="rock of the whole section where no well has layers"
    )
    below_layers: BelowLayers = Field(default_factory=BelowLayers, description="deeper rock")


class HeatFlow(Section):
    """Heat flow of the wells."""

    regional_mw_m2: PositiveFloat | None = Field(
        default=None, description="starting value; default: median of the wells"
    )
