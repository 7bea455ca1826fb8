"""From the table of layers to the beds of the rock model; what can't be used is told, not used."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from basinheat.conductivity.catalogue import Catalogue
from basinheat.conductivity.mixtures import UNKNOWN, Meaning, Vocabulary, load_formations
from basinheat.errors import UserError
from basinheat.rock.makeup import Beds, Lithologies, Mixtures
from basinheat.rock.slabs import overlapping
from basinheat.settings.heat import Conductivity
from basinheat.tables import Rejected

MEASURED_STD_LN = 0.10  # of a measured conductivity without stated uncertainty; common practice
MOST_UNKNOWN = 0.2  # share of layers of unknown rock from which names are at fault, not rows


def prepare_beds(
    layers: pd.DataFrame, wells: pd.DataFrame, catalogue: Catalogue, settings: Conductivity
) -> tuple[Beds, Mixtures, Lithologies, int, pd.DataFrame]:
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
    mixtures : Mixtures
        What the beds are made of.
    lithologies : Lithologies
        Those that occur, and the default one, in the catalogue's order.
    default : int
        Place of the default lithology among them.
    rejected : DataFrame
        Table ``Rejected``: layers of unknown rock.

    Raises
    ------
    RuntimeError
        When the layers are not as ``ingest`` leaves them: overlaps and thicknesses are its matter.
    UserError
        When so many layers have a lithology that the catalogue does not know that it must be a
        matter of names; a few such layers are refused and their depths filled from other wells.
    """
    frame = _sound(layers[layers["well"].isin(wells["well"])])
    words = Vocabulary(catalogue, settings.lithologies, load_formations(settings.formations))
    frame, refused = _known(frame, words)
    default = _one_rock(words, catalogue, settings.default_lithology, "default_lithology")
    shares, kind = _shares(frame, words, catalogue, default, settings)
    used = np.unique(np.r_[np.flatnonzero(shares.any(axis=0)), default])
    lithologies = Lithologies(
        names=tuple(catalogue.names[i] for i in used),
        conductivity_w_mk=catalogue.conductivity_w_mk[used],
        std_ln=catalogue.std_ln[used],
        porosity_surface=catalogue.porosity_surface[used],
        compaction_per_m=catalogue.compaction_per_m[used],
        heat_production_w_m3=catalogue.heat_production_w_m3[used],
        law=catalogue.law[used],
        anisotropy=catalogue.anisotropy[used],
        sedimentary=catalogue.sedimentary[used],
    )
    measured = frame["conductivity_w_mk"].where(frame["conductivity_w_mk"] > 0.0)
    std_ln = (frame["conductivity_std_w_mk"] / measured).fillna(MEASURED_STD_LN)
    beds = Beds(
        well=pd.Index(wells["well"]).get_indexer(frame["well"]),
        top_m=frame["top_m"].to_numpy(float),
        base_m=frame["base_m"].to_numpy(float),
        mixture=kind,
        conductivity_w_mk=measured.to_numpy(float),
        std_ln=std_ln.to_numpy(float),
        porosity=frame["porosity"].where(frame["porosity"].between(0.0, 1.0)).to_numpy(float),
        heat_production_w_m3=frame["heat_production_uw_m3"].to_numpy(float) * 1e-6,
        dip_deg=frame["dip_deg"].fillna(0.0).to_numpy(float),
    )
    mixtures = Mixtures.of(shares[:, used])
    return _by_place(beds), mixtures, lithologies, int(np.searchsorted(used, default)), refused


def _words(frame: pd.DataFrame) -> pd.Series:
    """Return what each layer says of its rock: the lithology, else the formation."""
    lithology, formation = (_stripped(frame[name]) for name in ("lithology", "formation"))
    return lithology.where(lithology != "", formation).astype(object)


def _stripped(cells: pd.Series) -> pd.Series:
    """Return text without blanks around it; each word is looked at once, not each cell."""
    place, words = pd.factorize(cells.astype(object))
    plain = np.array([str(word).strip() for word in words] + [""], object)
    return pd.Series(plain[place], index=cells.index, dtype=object)


def _one_rock(words: Vocabulary, catalogue: Catalogue, name: str, setting: str) -> int:
    """Return the place of a setting's rock, which must be one lithology."""
    meaning = words.meaning(name)
    if meaning.code or len(meaning.shares) != 1:
        why = meaning.why or f"is a mixture; choose one of {', '.join(catalogue.names)}"
        raise UserError(f'conductivity.{setting}: "{name}" {why}')
    return meaning.shares[0][0]


def _shares(
    frame: pd.DataFrame,
    words: Vocabulary,
    catalogue: Catalogue,
    default: int,
    settings: Conductivity,
) -> tuple[NDArray[np.float64], NDArray[np.int64]]:
    """Return the mixtures that occur, (u, catalogue), and which of them each layer is, (l,)."""
    word, names = pd.factorize(_words(frame), sort=True)
    net = np.clip(frame["net_to_gross"].fillna(1.0).to_numpy(float), 0.0, 1.0).round(3)
    levels, level = np.unique(net, return_inverse=True)
    pairs, kind = np.unique(word * len(levels) + level, return_inverse=True)
    shares = np.zeros((len(names), len(catalogue.names)))
    for row, name in enumerate(names):
        meaning = words.meaning(name) if name else Meaning(((default, 1.0),))
        for place, share in meaning.shares:
            shares[row, place] = share
    mixed = shares[pairs // max(len(levels), 1)]
    if (net < 1.0).any():
        rest = _one_rock(words, catalogue, settings.non_net_lithology, "non_net_lithology")
        share = levels[pairs % len(levels)][:, None]
        mixed = share * mixed + (1.0 - share) * np.eye(len(catalogue.names))[rest]
    return mixed, kind.astype(np.int64)


def _known(frame: pd.DataFrame, vocabulary: Vocabulary) -> tuple[pd.DataFrame, pd.DataFrame]:
    """Split off layers of unknown rock; measured conductivity needs no known rock."""
    words = _words(frame)
    strange = {
        word: meaning
        for word, meaning in vocabulary.meanings(word for word in words.unique() if word).items()
        if meaning.code
    }
    here = words.isin(strange)
    lost = here & ~(frame["conductivity_w_mk"] > 0.0)
    if lost.mean() > MOST_UNKNOWN:
        raise UserError(
            [f'lithology "{word}" {strange[word].why}' for word in sorted({*words[lost]})],
            f"{lost.sum()} of {len(frame)} layers ({lost.mean():.0%}, more than {MOST_UNKNOWN:.0%} "
            "stops the run) have a lithology that the conductivity catalogue does not know. Name "
            "its rock under conductivity.lithologies (name in the layers: "
            "name in the catalogue), a formation's under conductivity.formations:",
        )
    named = frame.assign(lithology=words)[lost]
    codes = words[lost].map(lambda word: strange[word].code)
    refused = _refuse(
        named, codes.to_numpy(object), [_way_out(strange[word]) for word in words[lost]]
    )
    blank = {name: frame[name].mask(here, "") for name in ("lithology", "formation")}
    return frame.assign(**blank)[~lost].reset_index(drop=True), refused


def _way_out(meaning: Meaning) -> str:
    """Return why a word is not understood, and what to do."""
    if meaning.code == UNKNOWN:
        return f"{meaning.why}. Map it in conductivity.lithologies or conductivity.formations"
    return meaning.why


def _sound(layers: pd.DataFrame) -> pd.DataFrame:
    """Return the layers by well and top; ``ingest`` has refused what can't be."""
    order = ["well", "top_m", "base_m", "lithology"]
    frame = layers.sort_values(order, kind="stable", ignore_index=True)
    top, base = frame["top_m"].to_numpy(float), frame["base_m"].to_numpy(float)
    codes = pd.factorize(frame["well"])[0]
    rock = _words(frame).ne("") | (frame["conductivity_w_mk"] > 0.0)
    sound = (base > top) & (top >= 0.0) & rock.to_numpy() & ~overlapping(codes, top, base)
    if not sound.all():
        row = frame[~sound].iloc[0]
        raise RuntimeError(
            f"{(~sound).sum()} layers have no rock or no thickness, or lie over others: the first "
            f"of well {row['well']} from {row['top_m']:g} to {row['base_m']:g} m"
        )
    return frame


def _refuse(frame: pd.DataFrame, code: NDArray[np.object_], reasons: list[str]) -> pd.DataFrame:
    """Return the ledger's rows for layers."""
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
                "source_file": frame["source_file"].to_numpy(object),
                "source_line": frame["source_line"].to_numpy(),
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
