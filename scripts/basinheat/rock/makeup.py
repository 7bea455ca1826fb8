"""What the layers are made of: lithologies, their mixtures, the beds of all wells."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from basinheat.conductivity import conditions, mixing, porosity

Array = NDArray[np.float64]
Whole = NDArray[np.int64]


@dataclass(frozen=True)
class Lithologies:
    """Properties of the m lithologies in use; arrays (m,), as in the catalogue."""

    names: tuple[str, ...]
    conductivity_w_mk: Array
    std_ln: Array
    porosity_surface: Array
    compaction_per_m: Array
    heat_production_w_m3: Array
    law: Whole
    anisotropy: Array
    sedimentary: NDArray[np.bool_]


@dataclass(frozen=True)
class Mixtures:
    """The u mixtures of lithologies that beds are made of.

    ``start`` (u + 1,): first part of each; ``lithology`` and ``share`` (p,): its parts, by place,
    shares sum 1; ``main`` (u,): the lithology with the largest share.
    """

    start: Whole
    lithology: Whole
    share: Array
    main: Whole

    @classmethod
    def of(cls, shares: Array) -> Mixtures:
        """Make mixtures from shares of m lithologies, (u, m)."""
        row, lithology = np.nonzero(shares)
        start = np.searchsorted(row, np.arange(len(shares) + 1))
        main = shares.argmax(axis=1) if len(shares) else np.zeros(0, np.int64)
        return cls(start, lithology, shares[row, lithology], main)

    def parts(self, mixture: Whole) -> tuple[Whole, Whole]:
        """Return the parts of some mixtures, (r,): which of them, and the part's place; (q,)."""
        count = np.diff(self.start)[mixture]
        owner = np.repeat(np.arange(len(mixture)), count)
        into = np.arange(len(owner)) - np.repeat(np.cumsum(count) - count, count)
        return owner, self.start[mixture][owner] + into

    def resistive(
        self, rocks: Lithologies, beds: Beds, bed: Whole, part: Whole, rule: str
    ) -> Array | None:
        """Return the resistance of parts of beds over that in series, at 25 degC; None: in series.

        Parameters
        ----------
        rocks, beds
            What the places stand for.
        bed, part : ndarray, shape (q,)
            Of all beds, by :meth:`parts`.
        rule : str
            How the parts of a bed conduct together.
        """
        if rule == "harmonic":
            return None
        i, share = self.lithology[part], self.share[part]
        phi = porosity.athy_mean(
            beds.top_m[bed], beds.base_m[bed], rocks.porosity_surface[i], rocks.compaction_per_m[i]
        )
        phi = np.where(np.isfinite(beds.porosity[bed]), beds.porosity[bed], phi)
        water = conditions.water(np.full(len(part), conditions.REFERENCE_DEGC))
        k = mixing.with_fluid(rocks.conductivity_w_mk[i], water, phi, "geometric")
        count = len(beds.well)
        if rule == "geometric":
            return k / np.exp(np.bincount(bed, share * np.log(k), count))[bed]
        return (k / np.bincount(bed, share * k, count)[bed]) ** 2


@dataclass(frozen=True)
class Beds:
    """The l layers of all wells, by well and top, without overlaps; arrays (l,).

    ``well`` and ``mixture`` are places; ``conductivity_w_mk`` (whole rock at 25 degC),
    ``porosity`` and ``heat_production_w_m3`` are NaN where not measured; ``std_ln`` is the
    relative uncertainty of the measured conductivity; ``dip_deg`` of the bedding.
    """

    well: Whole
    top_m: Array
    base_m: Array
    mixture: Whole
    conductivity_w_mk: Array
    std_ln: Array
    porosity: Array
    heat_production_w_m3: Array
    dip_deg: Array
