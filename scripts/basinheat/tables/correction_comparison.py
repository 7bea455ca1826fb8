"""Every correction method beside the others."""

from basinheat.tables.contract import Table, flag, number, text
from basinheat.tables.contract import count as whole


class CorrectionComparison(Table):
    """One row per method and mud-cooled set (well and depth), by method, well and depth."""

    columns = {
        "well": text("well"),
        "depth_m": number("m", "true vertical, below ground or sea floor"),
        "method": text("correction method"),
        "applies": flag("the method can treat the set"),
        "reason": text("why it can not"),
        "chosen": flag("the method of correction.order that counts here"),
        "temperature_degc": number("degC", "formation temperature by this method"),
        "correction_k": number("K", "temperature less the warmest reading"),
        "raw_temperature_degc": number("degC", "warmest reading of the set, uncorrected"),
        "temperature_std_k": number("K", "independent part of the standard uncertainty"),
        "well_std_k": number("K", "part common to the well"),
        "shared_std_k": number("K", "part common to all temperatures by this method"),
        "total_std_k": number("K", "standard uncertainty, all parts"),
        "n_readings": whole("readings of the set"),
        "n_timed": whole("readings with a time since circulation"),
        "since_circulation_h": number("h", "that of the latest reading, NaN where none is timed"),
        "final_temperature_degc": number(
            "degC", "in temperatures: chosen, shared errors taken out"
        ),
    }


class CorrectionSummary(Table):
    """One row per method, choice of sets and depth interval."""

    columns = {
        "method": text("correction method; chosen: whichever counts"),
        "sets": text("own: all sets the method treats; common: those every compared method treats"),
        "top_m": number("m", "top of the depth interval, NaN for all depths"),
        "base_m": number("m", "base of the depth interval, NaN for all depths"),
        "n_sets": whole("mud-cooled sets there"),
        "n_treated": whole("sets counted here: own or common"),
        "share_treated": number("", "n_treated / n_sets"),
        "correction_k": number("K", "median correction"),
        "correction_low_k": number("K", "its lower quartile"),
        "correction_high_k": number("K", "its upper quartile"),
        "difference_k": number("K", "median of method less chosen method, on the same sets"),
        "total_std_k": number("K", "median standard uncertainty, all parts"),
    }


class AnchorDifferences(Table):
    """One row per method and kind of anchor: formation temperatures measured near mud-cooled sets.

    Wells held out are not in it.
    """

    columns = {
        "method": text("correction method"),
        "anchor": text("equilibrium or dst"),
        "n_pairs": whole("mud-cooled sets with an anchor within 50 m in the same well"),
        "n_wells": whole("their wells"),
        "difference_k": number("K", "median of method less anchor, by wells"),
        "difference_std_k": number("K", "standard uncertainty of the median, wells independent"),
        "spread_k": number("K", "robust spread of the differences, 1.4826 x median deviation"),
        "chosen_difference_k": number("K", "the same for the chosen methods, on the same sets"),
    }
