"""Temperature gradients of the wells."""

from basinheat.tables.contract import Table, number, text
from basinheat.tables.contract import count as whole


class Gradients(Table):
    """One row per well."""

    columns = {
        "well": text("well"),
        "gradient_k_km": number("K/km", "temperature gradient"),
        "gradient_std_k_km": number("K/km", "standard uncertainty, the well's own part"),
        "gradient_shared_std_k_km": number("K/km", "standard uncertainty, shared part"),
        "intercept_degc": number("degC", "temperature of the fitted line at the surface"),
        "n_points": whole("temperatures fitted"),
        "top_m": number("m", "shallowest temperature"),
        "base_m": number("m", "deepest temperature"),
        "method": text("correction methods behind the temperatures, ;-joined"),
    }
