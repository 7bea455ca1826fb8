"""What a reader must know before using a map: shown in README, report and raster tags."""

from __future__ import annotations

SHORT = (
    "Regional screening estimate, not a prediction for any well: not for equipment ratings, "
    "casing, cement, mud weight or well control. See README.txt."
)

CAUTIONS = (
    "These maps are regional screening estimates. They do not predict what a given well will meet. "
    "Do not set equipment temperature ratings, casing or cement designs, mud weights or "
    "well-control plans from them, and do not decide an investment on them alone.",
    "Plan with the uncertainty, not with the mapped value. For equipment and safety take the hot "
    "side (the 90 or 95 % quantile: mapped temperature plus 1.3 or 1.6 standard uncertainties, "
    "depth of an isotherm minus as many); for the yield of a resource take the cold side (the 10 % "
    "quantile: temperature minus 1.3, depth plus 1.3). Locally it can be hotter still: moving "
    "water, faults, salt, igneous bodies and overpressured rock are not resolved.",
    "Most readings were taken in mud-cooled holes and have been corrected. The corrections are "
    "uncertain by several kelvin in ways that many wells share, and that part does not shrink as "
    "wells are added. Places where hot water or steam rises lie outside the method, and so does "
    "pressure.",
    "Temperature says nothing about pressure, gas, hydrogen sulphide or whether rock lets water "
    "through. Before drilling, gather data of the site, follow the local codes, and have a "
    "licensed engineer review the plan.",
    "Blank means that there is no basis for an estimate. It does not mean cold. status.tif tells, "
    "cell by cell, what a value rests on.",
)
