"""How well the maps predict what they have not seen."""

from basinheat.tables.contract import Table, number, text
from basinheat.tables.contract import count as whole


class CrossValidation(Table):
    """One row per well left out."""

    columns = {
        "well": text("well left out"),
        "value": number("", "value of the well, in the quantity's unit"),
        "value_std": number("", "its own standard uncertainty"),
        "predicted": number("", "predicted from the other wells"),
        "predicted_std": number("", "standard uncertainty of value less predicted"),
        "z_score": number("", "(value - predicted) / predicted_std"),
        "fold": whole("fold left out together"),
    }


class Closure(Table):
    """One row per used temperature: what the rebuilt column says at it."""

    columns = {
        "well": text("well"),
        "depth_m": number("m", "true vertical, below ground or sea floor"),
        "temperature_degc": number("degC", "formation temperature"),
        "temperature_std_k": number("K", "its standard uncertainty, all parts"),
        "rebuilt_degc": number("degC", "temperature of the rebuilt column there"),
        "residual_k": number("K", "rebuilt less formation temperature"),
        "residual_std_k": number("K", "standard uncertainty of the residual, were it independent"),
        "predicted_degc": number("degC", "the same with the well left out of all maps"),
        "left_out_k": number("K", "predicted less formation temperature"),
        "left_out_std_k": number("K", "standard uncertainty of that difference"),
        "method": text("correction method"),
    }


class WellColumns(Table):
    """Rebuilt temperature columns of the wells, by well and depth, to below the deepest reading."""

    columns = {
        "well": text("well"),
        "depth_m": number("m", "true vertical, below ground or sea floor"),
        "rebuilt_degc": number("degC", "temperature of the rebuilt column, the well in the maps"),
        "rebuilt_std_k": number("K", "its standard uncertainty, all parts"),
        "predicted_degc": number("degC", "the same with the well left out of all maps"),
        "predicted_std_k": number("K", "its standard uncertainty, all parts"),
    }
