"""From the table of layers to the beds of the rock model; what can't be used is told, not used."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.conductivity.catalogue import Catalogue
from basinheat.errors import UserError
from basinheat.rock.model import Beds, Lithologies
from basinheat.rock.slabs import overlapping
from basinheat.settings.heat import Conductivity
from basinheat.tables import Rejected

MEASURED_STD_LN = 0.10  # of a measured conductivity without stated uncertainty; common practice
MOST_UNKNOWN = 0.2  # share of layers of unknown rock from which names are at fault, not rows
DEEPEST_M = 15_000.0  # deeper than any hole


def prepare_beds(
    layers: pd.DataFrame, wells: pd.DataFrame, catalogue: Catalogue, settings: Conductivity
) -> tuple[Beds, Lithologies, int, pd.DataFrame]:
    """Sort and check the layers and find their lithologies in the catalogue.

    Parameters
    ----------
    layers, wells : DataFrame
        The tables of these names; layers of wells that are not there are left out.
    catalogue : Catalogue
    settings : Conductivity

    Returns
    -------
    beds : Beds
        Wells as places in ``wells``.
    lithologies : Lithologies
        Those that occur, and the default one, in the catalogue's order.
    default : int
        Place of the default lithology among them.
    rejected : DataFrame
        Table ``Rejected``: layers without thickness, above the surface, or over another.

    Raises
    ------
    UserError
        When so many layers have a lithology that the catalogue does not know that it must be a
        matter of names; a few such layers are refused and their depths filled from other wells.
    """
    frame, refused = _sound(layers[layers["well"].isin(wells["well"])])
    frame, strange = _known(frame, catalogue, settings)
    refused = pd.concat([refused, strange], ignore_index=True)
    names = frame["lithology"].fillna("").str.strip()
    default = settings.default_lithology
    places = catalogue.places([*names[names != ""], default], settings.lithologies)
    used = sorted({*places.values()})
    lithologies = Lithologies(
        names=tuple(catalogue.names[i] for i in used),
        conductivity_w_mk=catalogue.conductivity_w_mk[used],
        std_ln=np.full(len(used), settings.std_ln) if settings.std_ln else catalogue.std_ln[used],
        porosity_surface=catalogue.porosity_surface[used],
        compaction_per_m=catalogue.compaction_per_m[used],
        heat_production_w_m3=catalogue.heat_production_w_m3[used],
        law=catalogue.law[used],
    )
    place = {name: used.index(i) for name, i in places.items()}
    measured = frame["conductivity_w_mk"].where(frame["conductivity_w_mk"] > 0.0)
    std_ln = (frame["conductivity_std_w_mk"] / measured).fillna(MEASURED_STD_LN)
    beds = Beds(
        well=pd.Index(wells["well"]).get_indexer(frame["well"]),
        top_m=frame["top_m"].to_numpy(float),
        base_m=frame["base_m"].to_numpy(float),
        lithology=names.map(lambda name: place[name or default]).to_numpy(np.int64),
        conductivity_w_mk=measured.to_numpy(float),
        std_ln=std_ln.to_numpy(float),
        porosity=frame["porosity"].where(frame["porosity"].between(0.0, 1.0)).to_numpy(float),
        heat_production_w_m3=frame["heat_production_uw_m3"].to_numpy(float) * 1e-6,
    )
    return _by_place(beds), lithologies, place[default], refused


def _known(
    frame: pd.DataFrame, catalogue: Catalogue, settings: Conductivity
) -> tuple[pd.DataFrame, pd.DataFrame]:
    """Split off layers of unknown rock; measured conductivity needs no known rock."""
    names = frame["lithology"].fillna("").str.strip()
    unknown = catalogue.unknown(names[names != ""], settings.lithologies)
    strange = names.isin(unknown)
    measured = frame["conductivity_w_mk"] > 0.0
    lost = strange & ~measured
    if lost.mean() > MOST_UNKNOWN:
        raise UserError(
            [
                f'lithology "{name}" is not in the catalogue; {near}'
                for name, near in unknown.items()
            ],
            f"{lost.sum()} of {len(frame)} layers have a lithology that the conductivity catalogue "
            "does not know. Name its rock under conductivity.lithologies (name in the layers: "
            "name in the catalogue):",
        )
    frame = frame.assign(lithology=frame["lithology"].mask(strange, ""))
    why = names[lost].map(unknown)
    refused = _refuse(
        frame[lost].assign(lithology=names[lost]),
        "lithology_unknown",
        [
            f"not in the conductivity catalogue ({near}); map it in conductivity.lithologies"
            for near in why
        ],
    )
    return frame[~lost].reset_index(drop=True), refused


def _sound(layers: pd.DataFrame) -> tuple[pd.DataFrame, pd.DataFrame]:
    """Split off layers that can't be used: without thickness, above the surface, overlapping."""
    order = ["well", "top_m", "base_m", "lithology"]
    frame = layers.sort_values(order, kind="stable", ignore_index=True)
    top, base = frame["top_m"].to_numpy(float), frame["base_m"].to_numpy(float)
    with np.errstate(invalid="ignore"):
        thick = (base > top) & (base <= DEEPEST_M)
        buried = top >= 0.0
    known = frame["lithology"].fillna("").str.strip().ne("") | (frame["conductivity_w_mk"] > 0.0)
    refused = [
        _refuse(
            frame[~thick], "layer_depths", f"base must be below top, not below {DEEPEST_M:.0f} m"
        ),
        _refuse(frame[thick & ~buried], "layer_above_surface", "top must not be above depth 0"),
        _refuse(
            frame[thick & buried & ~known],
            "layer_without_rock",
            "neither lithology nor conductivity is given",
        ),
    ]
    frame = frame[thick & buried & known].reset_index(drop=True)
    codes = pd.factorize(frame["well"])[0]
    over = overlapping(codes, frame["top_m"].to_numpy(float), frame["base_m"].to_numpy(float))
    refused.append(_refuse(frame[over], "layer_overlap", "lies over the layer above it"))
    return frame[~over].reset_index(drop=True), pd.concat(refused, ignore_index=True)


def _refuse(frame: pd.DataFrame, code: str, why: str | list[str]) -> pd.DataFrame:
    """Return the ledger's rows for layers."""
    reasons = [why] * len(frame) if isinstance(why, str) else why
    value = [f"{t:g} to {b:g}" for t, b in zip(frame["top_m"], frame["base_m"], strict=True)]
    sentence = [
        f'layer "{name}" from {span} m: {reason}. Check the layers of well {well}.'
        for name, span, well, reason in zip(
            frame["lithology"], value, frame["well"], reasons, strict=True
        )
    ]
    return Rejected.conform(
        pd.DataFrame(
            {
                "table": "layers",
                "well": frame["well"].to_numpy(object),
                "column": "top, base",
                "value": value,
                "code": code,
                "sentence": sentence,
            },
            index=range(len(frame)),
        )
    )


def _by_place(beds: Beds) -> Beds:
    """Sort the beds by the place of their well and top."""
    order: NDArray[np.int64] = np.lexsort((beds.top_m, beds.well))
    return Beds(**{name: array[order] for name, array in vars(beds).items()})
