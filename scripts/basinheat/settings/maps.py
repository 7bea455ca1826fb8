"""Settings of maps, kriging and validation."""

from __future__ import annotations

from typing import Literal

from pydantic import Field, PositiveFloat, PositiveInt, ValidationInfo, field_validator

from basinheat.settings.base import Section

Model = Literal["auto", "exponential", "spherical", "gaussian", "matern15", "matern25"]


class Mask(Section):
    """Where there is a basis for a map."""

    polygon: str | None = Field(default=None, description="polygon file; outside is blank")
    max_distance_km: PositiveFloat = Field(
        default=40.0, description="cells further from every well are blank"
    )


class Maps(Section):
    """What is mapped."""

    cell_size_m: PositiveFloat = Field(default=1000.0, description="square cells")
    extent: Literal["wells"] | list[float] | str = Field(
        default="wells",
        description="wells, [west, south, east, north] in the map CRS, or a polygon file",
    )
    mask: Mask = Field(default_factory=Mask, description="where there is a basis")
    depths_m: list[PositiveFloat] = Field(
        default=[1000.0, 2000.0, 3000.0], min_length=1, description="temperature at these depths"
    )
    isotherms_degc: list[float] = Field(
        default=[100.0, 150.0], description="depth to these temperatures"
    )
    deepest_m: PositiveFloat = Field(
        default=6000.0, validate_default=True, description="columns are rebuilt down to here"
    )

    @field_validator("extent", mode="before")
    @classmethod
    def _check_extent(cls, extent: object) -> object:
        if isinstance(extent, str):
            return extent
        if not (isinstance(extent, list) and len(extent) == 4):
            raise ValueError("give wells, [west, south, east, north] or a polygon file")
        try:
            west, south, east, north = map(float, extent)
        except (TypeError, ValueError):
            raise ValueError("west, south, east and north must be numbers, in metres") from None
        if west >= east or south >= north:
            raise ValueError("west must be below east, and south below north")
        return extent

    @field_validator("depths_m", "isotherms_degc")
    @classmethod
    def _check_twice(cls, values: list[float]) -> list[float]:
        if len({f"{value:g}" for value in values}) < len(values):
            raise ValueError("each value once, please: every one names a raster")
        return values

    @field_validator("deepest_m")
    @classmethod
    def _check_deepest(cls, deepest_m: float, others: ValidationInfo) -> float:
        deepest_map = max(others.data.get("depths_m", [0.0]))
        if deepest_map > deepest_m:
            raise ValueError(f"must reach the deepest of depths_m ({deepest_map:g} m)")
        return deepest_m


class Variogram(Section):
    """The covariance model."""

    model: Model = Field(default="auto", description="auto: the likelier one")
    pinned: str | None = Field(
        default=None, description="JSON of a reviewed model (as in results/.../variograms)"
    )

    @property
    def candidates(self) -> tuple[str, ...]:
        """The models to choose the likelier one from."""
        # No gaussian: without a nugget its matrix is close to singular (common practice).
        automatic = ("exponential", "spherical", "matern15")
        return automatic if self.model == "auto" else (self.model,)


class Kriging(Section):
    """Interpolation."""

    engine: Literal["auto", "global", "tiles", "pykrige"] = Field(
        default="auto",
        description="global: all wells at once; tiles: the wells around each tile of the map; "
        "auto: tiles beyond 5,000 wells; pykrige: a check on small runs",
    )
    variogram: Variogram = Field(default_factory=Variogram, description="covariance model")
    drift: Literal["none", "linear"] = Field(default="none", description="trend in x and y")


class Validation(Section):
    """What is kept out to judge the maps."""

    holdout: list[str] = Field(
        default_factory=list, description="wells kept out of calibration and kriging"
    )
    block_range_share: PositiveFloat = Field(
        default=0.5, description="spatial blocks, as a share of the practical range"
    )
    neighbours: PositiveInt = Field(default=8, description="of the inverse-distance baseline")
