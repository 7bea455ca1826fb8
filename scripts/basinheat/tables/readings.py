"""Temperature readings that can be used."""

from basinheat.tables.contract import Table, number, text
from basinheat.tables.contract import count as whole


class Readings(Table):
    """One row per reading."""

    columns = {
        "reading_id": text("identity made from the reading's own content"),
        "well": text("well of the reading"),
        "measured_depth_m": number("m", "along the hole, below the depth datum"),
        "depth_m": number("m", "true vertical, below ground or sea floor"),
        "depth_std_m": number("m", "standard uncertainty of depth_m"),
        "temperature_degc": number("degC", "as read"),
        "temperature_std_k": number("K", "thermometer and rounding"),
        "kind": text("bht, dst, equilibrium or corrected"),
        "since_circulation_h": number("h", "time since circulation stopped"),
        "circulation_h": number("h", "how long mud circulated before"),
        "drilling_h": number("h", "from the bit's passing this depth to the last circulation"),
        "hole_radius_m": number("m", "radius of the hole at the reading"),
        "mud_temperature_degc": number("degC", "mud temperature at hole bottom"),
        "log_run": text("log run"),
        "date": text("date of the reading, ISO 8601"),
        "flags": text("codes of what was assumed or doubted, ;-joined"),
        "source_file": text("input file"),
        "source_line": whole("line in the input file"),
    }
