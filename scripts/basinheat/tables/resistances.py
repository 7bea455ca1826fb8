"""Thermal resistance of the rock above each temperature."""

from basinheat.tables.contract import Table, number, text


class Resistances(Table):
    """One row per row of ``estimates``, in its order."""

    columns = {
        "well": text("well"),
        "depth_m": number("m", "true vertical, below ground or sea floor"),
        "resistance_m2k_w": number("m2 K/W", "integral of dz/k from the surface"),
        "resistance_std_m2k_w": number("m2 K/W", "independent part of its standard uncertainty"),
        "radiogenic_k": number("K", "cooling by heat produced above: integral of (1/k) integral A"),
        "conductivity_w_mk": number("W/(m K)", "harmonic mean conductivity from the surface"),
        "origin": text("measured, catalogue, basin_mean or assumed: what it mostly rests on"),
    }
    open_columns = {
        "resistance_": number("m2 K/W", "part of the resistance in one lithology"),
        "radiogenic_": number("K", "part of the radiogenic term in one lithology"),
        "change_": number("m2 K/W", "change of resistance per unit amplitude of a source"),
    }
