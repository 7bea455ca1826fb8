"""Input files, damaged in the ways of practice and of malice.

Whoever calls brings `below`: a function that returns a whole number from 0 to n - 1. So the same
generators serve hypothesis, which chooses and shrinks the numbers, and a fuzz run, which draws
them. All data are invented.
"""

from collections.abc import Callable
from dataclasses import dataclass, field

import yaml

Below = Callable[[int], int]
Row = list[str]
TABLES = ("wells", "readings", "layers", "surveys", "heat_flow", "decisions")

NUMBERS = (
    "0", "-0", "00012", "1e3", "1E308", "-1e308", "1e400", "1e-320", "nan", "NaN", "inf",
    "-Infinity", "12,5", "1.234,5", "1,234.5", "1'234", "1 234", "1\u00a0234", "--5", "+-5", "5-",
    ".5", "5.", ".", "<25", ">120", "~120", "ca. 120", "120 F", "120\u00b0C", "3500 ft", '12.25"',
    "12 1/4", "0x1F", "1_000", "\u0661\u0662", "\u00bd", "\u2212" "12", "9" * 400, "-999.25",
    "-9999.000", "99999999999", "1e", "e5", "50%", "1;2", "2000 m", "7:30", "7h30", "1430", "25:61",
    "293 K", "m", "1/0",
)  # fmt: skip
WORDS = (
    "", " ", "\t", "NA", "n/a", "null", "None", "-", "?", "nil:missing", "N01", "n 01", "N-01",
    "042", "42.0", "=1+1", "@SUM(A1)", "+N01", "-N01", "'=N01", "<script>alert(1)</script>",
    "../../etc/passwd", "C:\\wells\\1", 'a "quoted" word', '"', '""', "'", "two\nlines", "cr\rcell",
    "a,b;c|d", "\u202eN01", "\u200b", "\ufeffN01", "\x00", "N\x0001", "\x1a", "\x85", "\u2028",
    "\U0001f30b", "e\u0301", "N" * 10_000, "{well}", "{0}", "{written!r}", "%s", "\\", "\\n",
    "${HOME}", "bht", "DST", "estimated", "calc.", "equilibrium", "EPSG:4326", "NAD27", "4267", "F",
    "ft", "degC", "keep", "reject", "set", "shale", "unobtainium", "gas cut mud", "depth",
    "temperature", "wells.csv", "AB",
)  # fmt: skip
DATES = (
    "1984", "1984-06", "1984-06-04", "1984-06-04T14:30", "04.06.1984", "31.02.1984", "6/4/84",
    "13-DEC-86", "0000-00-00", "9999-99-99", "0001-01-01", "2999-12-31", "31113", "99999",
    "1984-02-30", "1984-06-04 25:00", "14:30", "2430", "24:00", "12:15 am", "-1984", "1e5",
)  # fmt: skip
HOSTILE = (*NUMBERS, *WORDS, *DATES)
ENCODINGS = (
    "utf-8", "utf-8-sig", "utf-16", "utf-16-le", "utf-32", "cp1252", "latin-1", "mac_roman",
)  # fmt: skip
DELIMITERS = (",", ";", "\t", "|")
ENDS = ("\n", "\r\n", "\r")


@dataclass
class Sheet:
    """A table of cells, and how it is to be written."""

    header: Row
    rows: list[Row]
    delimiter: str = ","
    end: str = "\n"
    encoding: str = "utf-8"

    def data(self) -> bytes:
        """The sheet as a well-formed file, or as near to it as its encoding can hold."""
        odd = (self.delimiter, '"', "\r", "\n")
        lines = [
            self.delimiter.join(
                f'"{cell.replace(chr(34), chr(34) * 2)}"' if any(c in cell for c in odd) else cell
                for cell in row
            )
            for row in [self.header, *self.rows]
        ]
        return "".join(line + self.end for line in lines).encode(self.encoding, "replace")


@dataclass
class Inputs:
    """Files by name, the config that names them, and the sheets they were written from.

    `raw` is YAML in place of the config.
    """

    files: dict[str, bytes]
    config: dict
    sheets: dict[str, Sheet] = field(default_factory=dict)
    raw: str = ""

    def text(self) -> str:
        """The config as YAML."""
        return self.raw or yaml.safe_dump(self.config, allow_unicode=True)


def pick(below: Below, items):
    """One of the items."""
    return items[below(len(items))]


def good_sheets() -> dict[str, Sheet]:
    """Sixteen wells 10 km apart with all that can be told of them, 30 K/km, nothing wrong."""
    names = [f"N{i:02}" for i in range(16)]
    wells = [
        [
            w,
            f"{500000 + 10000 * (i % 4)}",
            f"{6000000 + 10000 * (i // 4)}",
            "100",
            "105",
            "",
            "3105",
            "10",
        ]
        for i, w in enumerate(names)
    ]
    readings, layers, surveys, flows = [], [], [], []
    for i, w in enumerate(names):
        for run, depth in ((1, 1505 + 20 * i), (2, 2505 + 20 * i)):
            degc = 10 + 0.03 * (depth - 5) - (4 if run == 2 else 0)
            readings.append(
                [w, str(depth), "", f"{degc:.1f}", ("dst", "bht")[run - 1], "1", f"{5 + i / 4:g}",
                 "3", "6", "0.216", "30", f"1984-{1 + i % 12:02}-04", str(run), "", "", "500", ""]
            )  # fmt: skip
        layers += [
            [w, "5", "1500", "shale", "", "", "0.2", "", ""],
            [w, "1500", "3105", "sandstone", "3.1", "0.3", "", "1.0", "60"],
        ]
        surveys += [[w, str(z), str(inc), "45"] for z, inc in ((0, 0), (1000, 0), (2000, 12))]
        flows.append([f"H{i:02}", "", *wells[i][1:3], f"{60 + i}", "5", "30", "2.1", "2010"])
    return {
        "wells": Sheet(
            ["well", "x", "y", "ground_elevation", "datum_elevation", "water_depth", "total_depth",
             "surface_temperature"], wells,
        ),
        "readings": Sheet(
            ["well", "depth", "vertical_depth", "temperature", "kind", "temperature_std",
             "since_circulation", "circulation", "drilling", "hole_diameter", "mud_temperature",
             "date", "log_run", "circulation_stopped", "logger_on_bottom", "casing_shoe",
             "remarks"], readings,
        ),
        "layers": Sheet(
            ["well", "top", "base", "lithology", "conductivity", "conductivity_std", "porosity",
             "heat_production", "gamma_ray"], layers,
        ),
        "surveys": Sheet(["well", "depth", "inclination", "azimuth"], surveys),
        "heat_flow": Sheet(
            ["well", "site", "x", "y", "heat_flow", "heat_flow_std", "gradient", "conductivity",
             "date"], flows,
        ),
        "decisions": Sheet(
            ["well", "reading", "action", "column", "value", "reason", "initials", "date"],
            [["N03", "", "set", "ground_elevation", "101", "scanned anew", "AB", "2026-01-01"],
             ["N04", "", "reject", "", "", "no core", "AB", "2026-01-02"],
             ["N05", "", "regrade", "", "dst", "file 7", "CD", "2026-01-03"],
             ["N06", "", "keep", "", "", "seen", "CD", "2026-01-03"]],
        ),
    }  # fmt: skip


def plain_config(tables=TABLES) -> dict:
    """The shortest config of the sheets."""
    inputs = {name: [{"file": f"{name}.csv"}] for name in tables if name != "decisions"}
    if "decisions" in tables:
        inputs["decisions"] = "decisions.csv"
    return {
        "run": "damaged",
        "crs": "EPSG:32631",
        "inputs": inputs,
        "surface_temperature": {"model": "constant", "temperature_degc": 10},
    }


def read_otherwise(below: Below, config: dict) -> None:
    """Let the config read the same files in another way: units, decimal mark, names, kinds."""
    inputs = config["inputs"]
    wells, readings = inputs["wells"][0], inputs["readings"][0]
    entries = [entry for value in inputs.values() if isinstance(value, list) for entry in value]
    for _ in range(below(4)):
        entry = pick(below, entries)
        key, value = pick(
            below,
            [
                ("decimal", ","), ("thousands", ","), ("thousands", "'"), ("encoding", "utf-16"),
                ("encoding", "ascii"), ("delimiter", pick(below, (*DELIMITERS, " ", "^"))),
                ("skip_lines", below(4)), ("missing", ["0", "N01", ""]),
                ("zero_is_missing", ["depth"]),
            ],
        )  # fmt: skip
        entry[key] = value
    more = [
        lambda: inputs.update(well_names=pick(below, ("normalised", "us_api"))),
        lambda: readings.update(kinds={"DST": "dst", "=1+1": "bht"}, kind="equilibrium"),
        lambda: readings.update(date_format=pick(below, ("%m/%d/%Y", "%d-%b-%y", "%", "x"))),
        lambda: readings.update(unit_columns={"temperature": "remarks"}),
        lambda: wells.update(crs_column="water_depth"),
        lambda: wells.update(units={"ground_elevation": "ft", "total_depth": "km"}),
        lambda: inputs["readings"].append({"file": "readings.csv", "units": {"depth": "ft"}}),
        lambda: inputs["wells"].append({"file": "w*.csv"}),
        lambda: config.update(surface_temperature={"model": "column"}),
    ]
    for _ in range(below(3)):
        pick(below, more)()


def damage_cells(below: Below, sheet: Sheet, columns=None) -> None:
    """Put hostile cells into a sheet; columns limits where."""
    places = range(len(sheet.header)) if columns is None else columns
    for _ in range(1 + below(8)):
        if sheet.rows:
            pick(below, sheet.rows)[pick(below, places)] = pick(below, HOSTILE)


def damage_rows(below: Below, sheet: Sheet) -> None:
    """Double, drop, swap, empty or cut rows; all stay rows of as many cells."""
    for _ in range(1 + below(4)):
        if not sheet.rows:
            return
        at = below(len(sheet.rows))
        how = below(6)
        if how == 0:
            sheet.rows.insert(below(len(sheet.rows) + 1), list(sheet.rows[at]))
        elif how == 1:
            del sheet.rows[at]
        elif how == 2:
            other = below(len(sheet.rows))
            sheet.rows[at], sheet.rows[other] = sheet.rows[other], sheet.rows[at]
        elif how == 3:
            sheet.rows[at] = [""] * len(sheet.header)
        elif how == 4:
            sheet.rows[at] = [pick(below, HOSTILE) for _ in sheet.header]
        else:
            del sheet.rows[at:]


def shuffled(below: Below, items: list) -> list:
    """The items in another order."""
    left, out = list(items), []
    while left:
        out.append(left.pop(below(len(left))))
    return out


def with_columns(sheet: Sheet, order: list[int]) -> Sheet:
    """The sheet with its columns in another order."""
    return Sheet(
        [sheet.header[i] for i in order], [[row[i] for i in order] for row in sheet.rows],
        sheet.delimiter, sheet.end, sheet.encoding,
    )  # fmt: skip


def inputs_of(sheets: dict[str, Sheet]) -> Inputs:
    """The sheets as files, named by the shortest config."""
    files = {f"{name}.csv": sheet.data() for name, sheet in sheets.items()}
    return Inputs(files, plain_config(tuple(sheets)), sheets)


def good_inputs() -> Inputs:
    """All good sheets."""
    return inputs_of(good_sheets())


def well_formed(below: Below, without=()) -> Inputs:
    """Files with hostile cells and odd rows, each still a table that any reader can split."""
    sheets = {
        name: sheet
        for name, sheet in good_sheets().items()
        if name not in without and (name in ("wells", "readings") or below(2))
    }
    for _ in range(1 + below(3)):
        sheet = sheets[pick(below, list(sheets))]
        damage_cells(below, sheet)
        if below(2):
            damage_rows(below, sheet)
        if below(3) == 0:
            sheet.delimiter, sheet.end = pick(below, DELIMITERS), pick(below, ENDS)
    return inputs_of(sheets)


def malformed(below: Below) -> Inputs:
    """Files of which bytes, lines, headers, quotes or encodings are damaged too; or no tables."""
    made = well_formed(below)
    if below(2):
        read_otherwise(below, made.config)
    for _ in range(1 + below(2)):
        name = pick(below, list(made.sheets))
        made.files[f"{name}.csv"] = damaged_bytes(below, made.sheets[name])
    return Inputs(made.files, made.config)


def damaged_bytes(below: Below, sheet: Sheet) -> bytes:
    """One file with damage below the level of cells."""
    how = below(9)
    if how == 0:
        return raw_bytes(below)
    if how == 1:
        sheet.encoding = pick(below, ENCODINGS)
    elif how == 2:
        sheet.header[below(len(sheet.header))] = pick(below, (*HOSTILE, *sheet.header))
    elif how == 3:
        sheet.header = shuffled(below, sheet.header)
    elif how == 4:
        titles = [[pick(below, HOSTILE)] for _ in range(1 + below(60))]
        sheet.rows, sheet.header = [*titles, sheet.header, *sheet.rows], ["A title"]
    elif how == 5:
        sheet.rows = [row[: below(len(row) + 3)] + [""] * below(2) for row in sheet.rows]
    data = sheet.data()
    if how >= 6:
        for _ in range(1 + below(6)):
            data = cut_or_inserted(below, data)
    return data


def raw_bytes(below: Below) -> bytes:
    """Bytes without a plan, some behind a magic number or a byte-order mark."""
    start = pick(
        below,
        (b"", b"\xef\xbb\xbf", b"\xff\xfe", b"\xfe\xff", b"\xff\xfe\x00\x00", b"PK\x03\x04",
         b"%PDF", b"PAR1", b"\x1f\x8b", b"<html>", b"well,x,y\n", b"well,depth,temperature\n",
         b"\n\n\n"),
    )  # fmt: skip
    likely = b'\x00\x0a\x0d",;\t|\x1a\xff\xfe\x80well,xy0123.9 '
    size = below(120)
    return start + bytes(pick(below, likely) if below(2) else below(256) for _ in range(size))


def cut_or_inserted(below: Below, data: bytes) -> bytes:
    """The bytes with a few of them cut out, overwritten, put in or doubled."""
    at = below(len(data) + 1)
    some = pick(
        below,
        (b'"', b"\x00", b"\r", b"\n", b"\xff", b"\xc3", b"\xef\xbb\xbf", b",", b";", b"\x1a", b'""',
         b"\xe2\x80\xa8", b"\xf0\x9f", b'"' * 50, b"," * 1200, b"\n" * 30, b"9" * 120_000),
    )  # fmt: skip
    how = below(4)
    if how == 0:
        return data[:at] + data[at + 1 + below(40) :]
    if how == 1:
        return data[:at] + some + data[at + len(some) :]
    if how == 2:
        return data[:at] + some + data[at:]
    return data[:at] + data[max(0, at - 60) :]
