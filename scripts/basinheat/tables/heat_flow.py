"""Surface heat flow of the wells."""

from basinheat.tables.contract import Table, number, text
from basinheat.tables.contract import count as whole


class HeatFlow(Table):
    """One row per well."""

    columns = {
        "well": text("well"),
        "heat_flow_mw_m2": number("mW/m2", "surface heat flow, positive up"),
        "heat_flow_std_mw_m2": number("mW/m2", "standard uncertainty, the well's own part"),
        "heat_flow_shared_std_mw_m2": number("mW/m2", "standard uncertainty, shared part"),
        "conductivity_w_mk": number("W/(m K)", "harmonic mean down to the deepest temperature"),
        "conductivity_std_w_mk": number("W/(m K)", "its standard uncertainty"),
        "n_points": whole("temperatures fitted"),
        "method": text("how heat flow was found"),
        "quality": text("origin of the conductivity and number of temperatures, in words"),
        "effects": text("corrections for climate, relief, sedimentation, ;-joined; none"),
    }
