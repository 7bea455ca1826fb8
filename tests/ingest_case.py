"""Small inputs for the tests of ingest: a basin of ordinary wells, and what is added to it."""

from basinheat import ingest
from basinheat.settings.model import Settings

WELLS = "well,x,y,ground_elevation,datum_elevation,water_depth,total_depth\n"
READINGS = "well,depth,temperature,kind,since_circulation,circulation,hole_diameter,date,log_run\n"
GRADIENT = 30.0
SURFACE = 10.0
HEIGHT = 5.0


def ordinary_wells(count=16):
    """Return rows of wells on a square of 40 km around 500000, 6000000, ground at 100 m."""
    side = int(count**0.5)
    return "".join(
        f"N{i:02d},{500000 + 10000 * (i % side)},{6000000 + 10000 * (i // side)},100,105,,3005\n"
        for i in range(count)
    )


def degc(depth, gradient=GRADIENT):
    """Return the temperature at a depth below the rig floor."""
    return SURFACE + gradient * (depth - HEIGHT) / 1000.0


def ordinary_readings(count=16):
    """Return one reading for each ordinary well, gradients from 28.5 to 31.5 K/km."""
    return "".join(
        f"N{i:02d},{2005 + 50 * i},{degc(2005 + 50 * i, 28.5 + 0.2 * i):.2f},,,,,,\n"
        for i in range(count)
    )


def prepare(folder, wells="", readings="", base=True, **changes):
    """Return what ingest makes of rows of wells and readings beside the ordinary ones.

    ``changes`` replace sections of the config; ``wells_file``, ``readings_file`` its file entries.
    """
    head_w, head_r = changes.pop("well_header", WELLS), changes.pop("reading_header", READINGS)
    (folder / "wells.csv").write_text(
        head_w + (ordinary_wells() if base else "") + wells, encoding="utf-8"
    )
    (folder / "readings.csv").write_text(
        head_r + (ordinary_readings() if base else "") + readings, encoding="utf-8"
    )
    inputs = {
        "wells": [{"file": "wells.csv"} | changes.pop("wells_file", {})],
        "readings": [{"file": "readings.csv"} | changes.pop("readings_file", {})],
    }
    inputs |= changes.pop("inputs", {})
    config = {
        "run": "case",
        "crs": "EPSG:32631",
        "surface_temperature": {"model": "constant", "temperature_degc": SURFACE, "std_k": 1.5},
        "inputs": inputs,
    }
    return ingest.prepare(Settings.model_validate(config | changes), folder)


def codes(prepared, well=None, table=None):
    """Return the codes in the ledger, sorted, of one well or table where asked."""
    rows = prepared.rejected
    if well is not None:
        rows = rows[rows["well"] == well]
    if table is not None:
        rows = rows[rows["table"] == table]
    return sorted(rows["code"])


def flags(table, well):
    """Return the flags of the only row of a well."""
    (text,) = table.loc[table["well"] == well, "flags"]
    return set(text.split(";")) - {""}
