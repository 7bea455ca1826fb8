"""How rocks are drawn in the strip beside a well: a colour and a pattern that lives without it."""

from __future__ import annotations

from collections.abc import Mapping

from basinheat.conductivity.catalogue import Catalogue
from basinheat.conductivity.mixtures import Vocabulary

UNKNOWN = "unknown"
# Patterns in the manner of geological sections (dots for sand, dashes for clay, bricks for
# limestone; common practice), each rock of the catalogue by one of them.
PATTERNS = {
    "dots": ("sandstone", "sand", "quartzite"),
    "dots_dashes": ("shaly_sandstone", "siltstone"),
    "dashes": ("claystone",),
    "lines": ("shale",),
    "bricks_dashes": ("marl",),
    "bricks": ("limestone", "marble"),
    "thin_bricks": ("chalk",),
    "slant": ("dolomite",),
    "hatch": ("anhydrite",),
    "crosses": ("halite",),
    "rings": ("conglomerate",),
    "black": ("coal",),
    "vees": ("tuff", "basalt", "gabbro"),
    "plus": ("granite",),
    "waves": ("gneiss",),
    "plain": ("sediment",),
}
_PATTERN = {rock: pattern for pattern, rocks in PATTERNS.items() for rock in rocks}


def pattern(
    rock: str,
    rocks: Catalogue,
    lithologies: Mapping[str, str],
    formations: Mapping[str, Mapping[str, float]] | None = None,
) -> str:
    """Return the pattern of a rock as the layers name it, of a mixture that of its main part.

    Parameters
    ----------
    rock : str
        Lithology, mixture or formation, as in the table of layers.
    rocks : Catalogue
        Names and aliases.
    lithologies, formations : mapping
        Settings of these names in ``conductivity``.

    Returns
    -------
    str
        A key of PATTERNS, or ``unknown``.
    """
    shares = Vocabulary(rocks, lithologies, formations or {}).meaning(rock).shares
    if not shares:
        return UNKNOWN
    main, _ = max(shares, key=lambda part: part[1])
    return _PATTERN.get(rocks.names[main], UNKNOWN)
