"""Mud-cooled readings held against direct temperatures."""

from basinheat.tables.contract import Table, flag, number, text


class Calibration(Table):
    """One row per pair of a mud-cooled set and an anchor, and method of the order that applies."""

    columns = {
        "well": text("well of the mud-cooled reading"),
        "depth_m": number("m", "its true vertical depth, below ground or sea floor"),
        "anchor_well": text("well of the direct temperature"),
        "anchor_depth_m": number("m", "depth of the anchor nearest to the reading"),
        "anchor_kind": text("equilibrium or dst"),
        "distance_m": number("m", "distance of the wells, 0 in the same well"),
        "anchor_temperature_degc": number("degC", "anchor carried to the depth of the reading"),
        "anchor_std_k": number("K", "its standard uncertainty there, way and distance included"),
        "since_circulation_h": number("h", "of the set's latest reading, NaN where unknown"),
        "raw_temperature_degc": number("degC", "warmest reading of the set, at one depth"),
        "method": text("method of the order; local_calibration predicts from the other wells"),
        "chosen": flag("the method that counts at this place"),
        "taught": flag("the pair teaches the calibration; pairs of wells held out do not"),
        "estimate_degc": number("degC", "formation temperature by the method"),
        "residual_k": number("K", "estimate less anchor"),
        "residual_std_k": number("K", "its standard uncertainty, all parts and the anchor's"),
    }
