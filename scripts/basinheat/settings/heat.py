"""Settings of correction, gradient, conductivity and heat flow."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Discriminator, Field, NonNegativeFloat, PositiveFloat, PositiveInt, Tag

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
    "lachenbruch_brewer1959",
    "conductive_recovery",
    "local_calibration",
    "harrison1983",
    "kehle_gregory",
    "forster1997",
    "waples2001",
    "waples2004",
    "uncorrected",
]
Region = Literal["oklahoma", "kansas_southeast", "united_states", "malay_basin", "campeche"]


class Calibration(Section):
    """How the basin's own correction is learned."""

    model: Literal[
        "auto", "constant", "linear", "quadratic", "quadratic_with_time", "scaled_with_time"
    ] = Field(default="auto", description="form of the correction; auto: by predictions left out")
    anchors: list[Literal["equilibrium", "dst"]] = Field(
        default=["equilibrium", "dst"], description="direct temperatures that readings are held to"
    )
    depth_m: PositiveFloat = Field(
        default=50.0, description="largest way up or down from a reading to its anchor"
    )
    log_step_m: NonNegativeFloat = Field(
        default=500.0, description="largest step of an equilibrium log that is read between points"
    )
    distance_km: PositiveFloat = Field(
        default=5.0, description="largest distance from a reading to its anchor's well"
    )
    neighbour_share: NonNegativeFloat = Field(
        default=0.05,
        description="assumed sigma between wells that far apart, as a share of the rise above the "
        "surface; what anchored wells tell of it counts too",
    )


class Correction(Section):
    """How formation temperatures are found."""

    order: list[Method] = Field(
        default=[
            "equilibrium",
            "dst",
            "corrected",
            "conductive_recovery",
            "local_calibration",
            "harrison1983",
        ],
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
    calibration: Calibration = Field(
        default_factory=Calibration, description="the basin's own correction"
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


class Mixing(Section):
    """How rocks of one layer conduct together."""

    beds: Literal["harmonic", "geometric", "arithmetic"] = Field(
        default="harmonic",
        description="lithologies of one layer: thin flat beds, without order, or side by side",
    )


# Told apart before they are judged, so that a fault of one is not told as one of the other too.
Formations = Annotated[
    Annotated[dict[str, dict[str, NonNegativeFloat]], Tag("mapping")] | Annotated[str, Tag("file")],
    Discriminator(lambda value: "file" if isinstance(value, str) else "mapping"),
]
Law = Literal[
    "none",
    "vosteen2003_sed",
    "vosteen2003_cryst",
    "halite",
    "sekiguchi_waples",
    "sekiguchi1984",
    "chapman1984",
    "sass1992",
    "kola2008",
]


class Laws(Section):
    """How conductivity changes with temperature, by class of rock."""

    sedimentary: Law = Field(default="vosteen2003_sed", description="rock with pores")
    crystalline: Law = Field(default="vosteen2003_cryst", description="basement, lava")
    salt: Law = Field(default="halite", description="rock salt")


class Override(Section):
    """What is known better of one rock than the catalogue knows."""

    conductivity_w_mk: Annotated[float, Field(ge=0.02, le=20.0)] | None = Field(
        default=None,
        description="of the matrix at 25 degC, of the whole rock where porosity_surface is 0",
    )
    std_ln: PositiveFloat | None = Field(default=None, description="shared sigma of ln k")
    porosity_surface: Annotated[float, Field(ge=0.0, le=0.95)] | None = Field(
        default=None, description="porosity at the surface"
    )
    compaction_per_km: NonNegativeFloat | None = Field(
        default=None, description="its fall with depth"
    )
    heat_production_uw_m3: NonNegativeFloat | None = Field(
        default=None, description="heat production"
    )
    law: Law | None = Field(default=None, description="change of k with temperature")
    anisotropy: PositiveFloat | None = Field(
        default=None, description="k along over k across the bedding; counts where layers have dip"
    )


class Conductivity(Section):
    """Rock properties."""

    catalogue: str = Field(
        default="beardsmore2001",
        description="set of values: beardsmore2001, midcontinent_lowshale (shale, claystone and "
        "siltstone as low as field measurements have them), or a CSV of one's own",
    )
    overrides: dict[str, Override] = Field(
        default_factory=dict,
        description="lithology or formation: what counts before the catalogue (conductivity_w_mk, "
        "std_ln, porosity_surface, compaction_per_km, heat_production_uw_m3, law, anisotropy)",
    )
    lithologies: dict[str, str] = Field(
        default_factory=dict,
        description='name in the layers: name in the catalogue, or "sandstone 60 shale 40"',
    )
    formations: Formations = Field(
        default_factory=dict,
        description="formation: {lithology: percent}; or a CSV of formation, lithology, percent",
    )
    non_net_lithology: str = Field(
        default="shale", description="rock of what net_to_gross of a layer leaves over"
    )
    mixing: Mixing = Field(default_factory=Mixing, description="rocks of one layer")
    fluid_mixing: Literal[
        "geometric",
        "arithmetic",
        "harmonic",
        "square_root",
        "hashin_shtrikman_upper",
        "hashin_shtrikman_lower",
    ] = Field(default="geometric", description="rock matrix and the water in its pores")
    laws: Laws = Field(default_factory=Laws, description="change of k with temperature")
    pressure: Literal["none", "fuchs_foerster2014"] = Field(
        default="none", description="rise of k of sediments with depth (coefficients from memory)"
    )
    pressure_mpa_per_km: PositiveFloat = Field(
        default=13.0, description="rise of the pressure between grains with depth, for pressure"
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
    published_std_share: PositiveFloat = Field(
        default=0.2,
        description="inputs.heat_flow: standard uncertainty over value, where none is stated",
    )
    published_shared_share: NonNegativeFloat = Field(
        default=0.05, description="inputs.heat_flow: share of it that all may be off by alike"
    )
    published_within_km: PositiveFloat = Field(
        default=100.0, description="inputs.heat_flow: leave out places farther from every well"
    )
    published_low_mw_m2: float = Field(
        default=10.0, description="inputs.heat_flow: refuse values below"
    )
    published_high_mw_m2: PositiveFloat = Field(
        default=250.0, description="inputs.heat_flow: refuse values above"
    )
