"""Formation temperatures."""

from basinheat.tables.contract import Table, number, text
from basinheat.tables.contract import count as whole


class Temperatures(Table):
    """One row per well and depth."""

    columns = {
        "well": text("well"),
        "depth_m": number("m", "true vertical, below ground or sea floor"),
        "temperature_degc": number("degC", "formation temperature"),
        "temperature_std_k": number("K", "independent part of the standard uncertainty"),
        "well_std_k": number("K", "part common to the well: same mud, same noted times"),
        "shared_std_k": number("K", "part common to all temperatures by this method"),
        "raw_temperature_degc": number("degC", "warmest reading of the set, uncorrected"),
        "correction_k": number("K", "formation temperature less the warmest reading"),
        "method": text("correction method"),
        "variance_class": text("readings whose stated variance is scaled together"),
        "n_readings": whole("readings used"),
        "reading_ids": text("readings used, ;-joined"),
        "passed_over": text("why earlier methods of the order did not apply, ;-joined"),
        "flags": text("codes of what the correction assumed or doubted, ;-joined"),
    }
