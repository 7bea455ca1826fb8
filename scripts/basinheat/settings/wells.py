"""Settings of screening and surface temperature."""

from __future__ import annotations

from typing import Annotated, Literal, get_args

from pydantic import Field, NonNegativeFloat, PositiveFloat, PositiveInt, TypeAdapter

from basinheat.settings.base import Section


class Screening(Section):
    """Thresholds of the screening rules."""

    hottest_degc: PositiveFloat = Field(default=400.0, description="refuse readings above")
    above_surface_k: float = Field(
        default=2.0, description="refuse readings less than this above the surface temperature"
    )
    gradient_low_k_km: NonNegativeFloat = Field(default=10.0, description="warn below")
    gradient_high_k_km: PositiveFloat = Field(default=80.0, description="warn above")
    unit_suspect_degc: PositiveFloat = Field(
        default=180.0, description="suspect degF in a degC column above, shallower than 3 km"
    )
    deeper_than_total_m: NonNegativeFloat = Field(
        default=10.0, description="flag readings deeper than total depth by more"
    )
    longest_since_circulation_h: PositiveFloat = Field(
        default=200.0, description="drop longer noted times"
    )
    longest_circulation_h: PositiveFloat = Field(default=48.0, description="warn above")
    same_well_distance_m: PositiveFloat = Field(
        default=500.0, description="rows of one well further apart are in conflict"
    )
    elevation_difference_m: PositiveFloat = Field(
        default=30.0,
        description="flag wells whose ground differs from the elevation raster by more",
    )
    neighbours: PositiveInt = Field(default=12, description="wells a reading is compared with")
    outlier_score: PositiveFloat = Field(
        default=3.5, description="robust score of a reading among its neighbours that flags it"
    )
    inconsistent_gap_m: PositiveFloat = Field(
        default=300.0, description="depth difference from which two readings' gradient is judged"
    )
    vintage_year: PositiveInt = Field(default=1950, description="readings before are less certain")
    vintage_std_k: NonNegativeFloat = Field(default=2.0, description="by this much, in quadrature")
    time_disagreement_h: PositiveFloat = Field(
        default=1.0, description="flag a noted duration and times of day that differ by more"
    )
    heaping_score: PositiveFloat = Field(
        default=3.0, description="score of values ending in 0 or 5 from which a file was rounded"
    )
    same_temperature_score: PositiveFloat = Field(
        default=2.0,
        description="runs whose expected rise is within so many of its errors may read the same",
    )
    hottest_air_degc: PositiveFloat = Field(
        default=45.0, description="flag logs below it that the air of a hot season may have warmed"
    )
    gas_std_k: PositiveFloat = Field(
        default=8.0, description="standard uncertainty of a test that gas may have cooled"
    )


class _Surface(Section):
    std_k: PositiveFloat = Field(
        default=1.5, description="standard uncertainty at one place, all parts"
    )
    shared_std_k: NonNegativeFloat = Field(
        default=0.7, description="its part common to the whole basin"
    )
    sea_floor_degc: float = Field(default=5.0, description="sea-floor temperature, shallow water")
    deep_sea_floor_degc: float = Field(
        default=-0.5, description="sea-floor temperature, deep water"
    )
    deep_water_m: PositiveFloat = Field(default=600.0, description="water deeper than this is deep")
    sea_floor_std_k: PositiveFloat = Field(default=2.0, description="standard uncertainty offshore")


class ConstantSurface(_Surface):
    """The same temperature everywhere onshore."""

    model: Literal["constant"]
    temperature_degc: float = Field(description="mean annual ground temperature")


class LinearSurface(_Surface):
    """Linear in elevation."""

    model: Literal["linear"]
    at_sea_level_degc: float = Field(description="mean annual ground temperature at sea level")
    lapse_k_per_km: float = Field(default=6.0, description="decrease with elevation")


class RasterSurface(_Surface):
    """Sampled from inputs.rasters.surface_temperature."""

    model: Literal["raster"]


class ColumnSurface(_Surface):
    """From the column surface_temperature of the wells."""

    model: Literal["column"]


SurfaceTemperature = Annotated[
    ConstantSurface | LinearSurface | RasterSurface | ColumnSurface, Field(discriminator="model")
]


def surface_keys(model: object) -> set[str]:
    """Return the keys that a model of the surface temperature knows."""
    for section in (ConstantSurface, LinearSurface, RasterSurface, ColumnSurface):
        if model in get_args(section.model_fields["model"].annotation):
            return set(section.model_fields)
    return set()


def surface_temperature(raw: object) -> SurfaceTemperature:
    """Return the section as its own model."""
    return TypeAdapter(SurfaceTemperature).validate_python(raw)
