"""Where temperatures point to at the surface."""

from basinheat.tables.contract import Table, flag, number, text
from basinheat.tables.contract import count as whole


class Intercepts(Table):
    """One row per group of temperatures: its regional line, not tied to the surface."""

    columns = {
        "group": text("raw, method, class (of variance, where a method has several) or final"),
        "subject": text("name of the method or class"),
        "in_use": flag("temperatures of the group are in the maps"),
        "n_sets": whole("temperatures"),
        "n_wells": whole("wells"),
        "top_m": number("m", "shallowest temperature"),
        "base_m": number("m", "deepest temperature"),
        "slope_mw_m2": number("mW/m2", "slope of the line in the middle of the wells"),
        "intercept_k": number("K", "the line at the surface, less the surface temperature"),
        "intercept_std_k": number("K", "its standard uncertainty from the scatter between wells"),
        "expected_std_k": number("K", "what an unbiased method may show: scatter, rock, surface"),
        "alarm": text("what it means, where the intercept stands out; else empty"),
    }
