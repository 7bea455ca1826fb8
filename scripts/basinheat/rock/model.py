"""The basin's rock: layers, catalogue and mean section, made into columns for any set of wells."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from basinheat.conductivity import conditions, porosity
from basinheat.conductivity.conditions import LAW_NAMES
from basinheat.rock.columns import USUAL, Columns, Parts, Rules
from basinheat.rock.makeup import Beds, Lithologies, Mixtures
from basinheat.rock.section import Section
from basinheat.rock.slabs import Slabs, cut

Array = NDArray[np.float64]
Whole = NDArray[np.int64]

LARGEST_STEP_M = 50.0
CATALOGUE, MEASURED, BASIN_MEAN, ASSUMED = range(4)
ORIGINS = ("catalogue", "measured", "basin_mean", "assumed")


@dataclass(frozen=True)
class Below:
    """Rock below the mean section."""

    conductivity_w_mk: float
    std_ln: float
    growth_ln_per_m: float
    heat_production_w_m3: float
    law: int = LAW_NAMES.index("vosteen2003_sed")


@dataclass(frozen=True)
class RockModel:
    """All that is known of the rock of n wells; ``deepest_m`` (n,): where the columns end.

    Groups of the columns are the m lithologies, then measured layers, then the rock below.
    ``law_strength``: power on k(T) / k(25 degC);
    ``rules``: how conductivities combine.
    """

    lithologies: Lithologies
    mixtures: Mixtures
    beds: Beds
    section: Section
    below: Below
    deepest_m: Array
    interval_m: float
    with_temperature: bool = True
    law_strength: float = 1.0
    rules: Rules = USUAL

    @property
    def step_m(self) -> float:
        """Thickness of the slabs: a whole number of them makes an interval."""
        return float(self.interval_m / np.ceil(self.interval_m / LARGEST_STEP_M))

    @property
    def rocks(self) -> int:
        """Number of lithologies: also the place of the group of measured layers."""
        return len(self.lithologies.names)

    def columns(self, wells: Whole) -> Columns:
        """Return the columns of some wells; places in them count within ``wells``."""
        place = np.full(len(self.deepest_m), -1)
        place[wells] = np.arange(len(wells))
        mine = np.flatnonzero(place[self.beds.well] >= 0)
        order = mine[np.lexsort((self.beds.top_m[mine], place[self.beds.well[mine]]))]
        slabs = cut(
            self.deepest_m[wells],
            self.step_m,
            place[self.beds.well[order]],
            self.beds.top_m[order],
            self.beds.base_m[order],
        )
        bed = np.where(slabs.layer >= 0, order[slabs.layer] if len(order) else -1, -1)
        slabs = Slabs(slabs.start, slabs.well, slabs.top_m, slabs.base_m, bed)
        return Columns(
            slabs,
            self._parts(slabs),
            self.rocks + 2,
            self.with_temperature,
            self.law_strength,
            self.rules,
        )

    def with_law_strength(self, factor: float) -> RockModel:
        """Return the model with conductivity falling more or less with temperature."""
        return replace(self, law_strength=factor)

    def with_porosity(self, factor: float) -> RockModel:
        """Return the model with the catalogue's porosities higher or lower by a factor."""
        porosity = np.minimum(self.lithologies.porosity_surface * factor, 0.95)
        return replace(self, lithologies=replace(self.lithologies, porosity_surface=porosity))

    def kind(self, slabs: Slabs) -> Whole:
        """Return what each slab rests on: place in ``ORIGINS``."""
        own = slabs.layer >= 0
        measured = own & np.isfinite(self.beds.conductivity_w_mk[slabs.layer]) if own.any() else own
        gap = np.where(
            self.in_section(slabs) & np.isfinite(self.section.known_m), BASIN_MEAN, ASSUMED
        )
        return np.where(measured, MEASURED, np.where(own, CATALOGUE, gap))

    def in_section(self, slabs: Slabs) -> NDArray[np.bool_]:
        """Mark the slabs above the depth to which the mean section is known."""
        return slabs.middle_m < self.section.known_m

    def _parts(self, slabs: Slabs) -> Parts:
        """Give each slab its parts: own layer, mean section or rock below."""
        own = np.flatnonzero(slabs.layer >= 0)
        gap = slabs.layer < 0
        mean = np.flatnonzero(gap & self.in_section(slabs))
        below = np.flatnonzero(gap & ~self.in_section(slabs))
        share = self.section.at(slabs.middle_m[mean])
        row, lithology = np.nonzero(share)
        pieces = [
            self._own(slabs, own),
            self._mean(slabs, mean[row], lithology, share[row, lithology]),
            self._below(below),
        ]
        joined = [np.concatenate(arrays) for arrays in zip(*pieces, strict=True)]
        order = np.argsort(joined[0], kind="stable")
        return Parts(*[array[order] for array in joined])

    def _mean(
        self, slabs: Slabs, slab: Whole, lithology: Whole, share: Array
    ) -> tuple[NDArray[Any], ...]:
        """Parts of the mean section; what mixing makes of k goes the way of the tilt."""
        *parts, _, sedimentary = self._catalogue(slabs, slab, lithology, share)
        blend = self.section.blend_at(slabs.middle_m[slab], lithology)
        return (*parts, blend, sedimentary)

    def _catalogue(
        self, slabs: Slabs, slab: Whole, lithology: Whole, share: Array
    ) -> tuple[NDArray[Any], ...]:
        rock = self.lithologies
        return (
            slab,
            share,
            rock.conductivity_w_mk[lithology],
            porosity.athy_mean(
                slabs.top_m[slab],
                slabs.base_m[slab],
                rock.porosity_surface[lithology],
                rock.compaction_per_m[lithology],
            ),
            rock.law[lithology],
            rock.heat_production_w_m3[lithology],
            lithology,
            np.ones(len(slab)),
            rock.sedimentary[lithology],
        )

    def _own(self, slabs: Slabs, slab: Whole) -> tuple[NDArray[Any], ...]:
        """Parts of the wells' own layers: what is measured goes before the catalogue."""
        beds, bed = self.beds, slabs.layer[slab]
        owner, part = self.mixtures.parts(beds.mixture[bed])
        rock = self.lithologies.heat_production_w_m3[self.mixtures.lithology[part]]
        heat: Array = np.bincount(owner, self.mixtures.share[part] * rock, len(slab)).astype(float)
        measured = np.isfinite(beds.conductivity_w_mk[bed])
        known = measured[owner]
        pieces = [
            self._mixed(slabs, slab[owner[~known]], part[~known]),
            self._measured(slab[measured], bed[measured], heat[measured]),
        ]
        return tuple(np.concatenate(arrays) for arrays in zip(*pieces, strict=True))

    def _mixed(self, slabs: Slabs, slab: Whole, part: Whole) -> tuple[NDArray[Any], ...]:
        """Parts of layers of known lithologies."""
        beds, bed = self.beds, slabs.layer[slab]
        lithology = self.mixtures.lithology[part]
        _, share, k, phi, law, heat, group, _, sedimentary = self._catalogue(
            slabs, slab, lithology, self.mixtures.share[part]
        )
        tilt = conditions.tilted(beds.dip_deg[bed], self.lithologies.anisotropy[lithology])
        own = beds.heat_production_w_m3[bed]
        phi = np.where(np.isfinite(beds.porosity[bed]), beds.porosity[bed], phi)
        heat = np.where(np.isfinite(own), own, heat)
        return slab, share, k, phi, law, heat, group, tilt, sedimentary

    def _measured(self, slab: Whole, bed: Whole, heat: Array) -> tuple[NDArray[Any], ...]:
        """Parts of layers whose conductivity was measured: each one rock."""
        beds, own = self.beds, self.beds.heat_production_w_m3[bed]
        main = self.mixtures.main[beds.mixture[bed]]
        return (
            slab,
            np.ones(len(slab)),
            beds.conductivity_w_mk[bed],
            np.zeros(len(slab)),
            self.lithologies.law[main],
            np.where(np.isfinite(own), own, heat),
            np.full(len(slab), self.rocks),
            np.ones(len(slab)),
            self.lithologies.sedimentary[main],
        )

    def _below(self, slab: Whole) -> tuple[NDArray[Any], ...]:
        one = np.ones(len(slab))
        return (
            slab,
            one,
            self.below.conductivity_w_mk * one,
            0.0 * one,
            np.full(len(slab), self.below.law),
            self.below.heat_production_w_m3 * one,
            np.full(len(slab), self.rocks + 1),
            one,
            np.zeros(len(slab), bool),
        )
