"""Headers of well logs, invented: three versions of the standard, and broken ones."""

from .base import WELL_COLUMNS, case, good_wells, temperature_at, with_cell
from .model import Ledger, ledger, refused

MNEMONICS = {
    "well": ["WELL"],
    "x": ["XCOORD"],
    "y": ["YCOORD"],
    "ground_elevation": ["EGL"],
    "datum_elevation": ["EKB"],
    "total_depth": ["TDD"],
    "temperature": ["BHT", "MRT"],
    "depth": ["TDL"],
    "since_circulation": ["TSC"],
    "hole_diameter": ["BS"],
    "mud_temperature": ["MT"],
}
PLACE = {
    "XCOORD": ("M", "642000", "Easting"),
    "YCOORD": ("M", "5748000", "Northing"),
}
PARAMETERS = {
    "EGL": ("M", "31.0", "Ground level"),
    "EKB": ("M", "36.0", "Kelly bushing"),
    "TDD": ("M", "2010.0", "Depth driller"),
    "TDL": ("M", "2000.0", "Depth logger"),
    "BHT": ("DEGC", "65.0", "Bottom-hole temperature"),
    "TSC": ("HR", "8.5", "Time since circulation"),
    "BS": ("IN", "8.5", "Bit size"),
}
CURVES = "~Curve\nDEPT.M : Depth\nGR.GAPI : Gamma ray\n"
DATA = "~A DEPT GR\n1000.0 55.1\n1000.5 -999.25\n1001.0 61.8\n"


def line(mnemonic: str, unit: str, value: str, meaning: str) -> str:
    return f"{mnemonic}.{unit} {value} : {meaning}\n"


def log(name="Log 1", version="2.0", place=None, wrap="NO", data=DATA, **changed) -> str:
    """A log's text; parameters can be changed, or left out with None."""
    parameters = {k: v for k, v in (PARAMETERS | changed).items() if v is not None}
    well = {"STRT": ("M", "1000.0", "Start"), "STOP": ("M", "1001.0", "Stop")}
    well |= {"STEP": ("M", "0.5", "Step"), "NULL": ("", "-999.25", "Null")}
    where = {"WELL": ("", name, "Well")} | PLACE | (place or {})
    if version == "1.2":  # names and places stand behind the colon
        where = {key: (unit, meaning, value) for key, (unit, value, meaning) in where.items()}
    return (
        f"~Version\nVERS. {version} : Version\nWRAP. {wrap} : One line per depth step\n"
        + "~Well\n"
        + "".join(line(key, *value) for key, value in well.items())
        + "".join(line(key, *value) for key, value in where.items())
        + CURVES
        + "~Parameter\n"
        + "".join(line(key, *value) for key, value in parameters.items())
        + data
    )


def third_version() -> str:
    """Version 3.0: delimiter stated, data sections of their own names."""
    text = log("Log 3", "3.0").replace("WRAP.", "DLM. COMMA : Delimiter\nWRAP.")
    return (
        text.replace(DATA, "~Log_Data | Log_Definition\n1000.0,55.1\n1000.5,61.8\n")
        .replace("~Curve", "~Log_Definition")
        .replace("~Parameter", "~Log_Parameter")
    )


def logs(name, why, expected, files: dict, wells=None, **settings):
    table = {"file": "logs/*.las", "mnemonics": MNEMONICS, **settings}
    placed = {f"logs/{file}": content for file, content in files.items()}
    return case(name, why, expected, wells=wells, files=placed, config={"inputs": {"las": [table]}})


def refused_log(code: str, wells: int):
    """A row of the ledger for the file, and no reading."""
    return ledger({(None, code, None): 1}, wells, exact=False)


READ = ledger(
    wells=17,
    readings=33,
    values={
        ("Log 1", "temperature_degc"): 65.0,
        ("Log 1", "measured_depth_m"): 2000,
        ("Log 1", "since_circulation_h"): 8.5,
        ("Log 1", "hole_diameter_m"): 0.2159,
    },
    tolerance=0.001,
)
IMPERIAL = {
    "EGL": ("FT", "100", "Ground level"),
    "EKB": ("FT", "112", "Kelly bushing"),
    "TDD": ("F", "6600", "Depth driller"),
    "TDL": ("FT", "6561.7", "Depth logger"),
    "BHT": ("DEGF", "149", "Bottom-hole temperature"),
    "BS": ("INCHES", "8.5", "Bit size"),
}
MINUTES = {"TSC": ("MIN", "510", "Time since circulation")}
LOST = {"XCOORD": ("M", "", "Easting"), "YCOORD": ("M", "-999.25", "Northing")}
N02 = dict(zip(WELL_COLUMNS, good_wells().split("\n")[3].split(","), strict=True))
OF_N02 = log(
    "N02",
    place={"XCOORD": ("M", N02["x"], "Easting"), "YCOORD": ("M", N02["y"], "Northing")},
    EGL=("M", N02["ground_elevation"], "Ground level"),
    EKB=("M", N02["datum_elevation"], "Kelly bushing"),
    TDD=("M", "1160", "Depth driller"),
    TDL=("M", "1000", "Depth logger"),
    BHT=("DEGC", f"{temperature_at(1000) - 3:.1f}", "Bottom-hole temperature"),
)

VERSIONS = [
    logs(
        "log_of_three_versions",
        "A folder of logs holds thirty years of the standard.",
        ledger(wells=19, readings=35, values={("Log 2", "temperature_degc"): 65.0}),
        {
            "a.las": log("Log 1", "1.2"),
            "b.las": log("Log 2", "2.0"),
            "c.las": third_version(),
        },
    ),
    logs("log_as_it_should_be", "Nothing to tell.", READ, {"a.las": log()}),
    logs(
        "log_in_feet_and_fahrenheit",
        "American logs state their units in the header.",
        ledger(
            wells=17,
            readings=33,
            values={
                ("Log 1", "temperature_degc"): 65.0,
                ("Log 1", "measured_depth_m"): 2000,
                ("Log 1", "since_circulation_h"): 8.5,
            },
            tolerance=0.05,
        ),
        {"a.las": log(**IMPERIAL, **MINUTES)},
    ),
    logs(
        "log_with_dos_lines_and_western_letters",
        "A logging truck of the nineties wrote DOS lines and a western 8-bit encoding.",
        ledger(wells=17, readings=33, values={("Høg 1", "temperature_degc"): 65.0}),
        {"a.las": log("Høg 1").replace("\n", "\r\n").encode("cp1252")},
    ),
    logs(
        "log_with_wrapped_and_garbled_data",
        "The curves are of no use here: wrapped, cut off, full of letters.",
        READ,
        {"a.las": log(wrap="YES", data="~A\n1000.0\n55.1 x y z\n**** 1.#QNAN\n10")},
    ),
    logs(
        "log_with_comments_and_blank_lines",
        "The header was edited by hand, with comments and blank lines between.",
        READ,
        {"a.las": log().replace("~Parameter\n", "#\n# of run 1: checked\n\n~Parameter\n#---\n")},
    ),
    logs(
        "log_with_a_clock_time_and_colons",
        "Values hold colons, which part the value from its meaning elsewhere.",
        ledger(
            wells=17, readings=33, values={("Log 1", "since_circulation_h"): 8.5}, tolerance=0.001
        ),
        {"a.las": log(TSC=("HR", "8:30", "Time since circulation"))},
    ),
]

GAPS = [
    logs(
        "log_without_temperature",
        "The temperature was not noted in the header.",
        refused_log("no_temperature", 17),
        {"a.las": log(BHT=None)},
    ),
    logs(
        "log_with_a_null_for_its_temperature",
        "The header holds the file's null value.",
        refused_log("no_temperature", 17),
        {"a.las": log(BHT=("DEGC", "-999.2500", "Bottom-hole temperature"))},
    ),
    logs(
        "log_without_depth",
        "The temperature has no depth.",
        refused_log("no_depth", 17),
        {"a.las": log(TDL=("M", "", "Depth logger"))},
    ),
    logs(
        "log_without_well",
        "The name of the well was left blank.",
        refused_log("no_well", 16),
        {"a.las": log("")},
    ),
    logs(
        "log_without_place",
        "The place is blank: the well can't be mapped, and is in no other file.",
        refused_log("no_coordinates", 16),
        {"a.las": log(place=LOST)},
    ),
    logs(
        "log_that_is_none",
        "A picture, a letter and an empty file were saved under the suffix.",
        ledger({("las", "unreadable_file", None): 3}, 17, 33),
        {
            "a.las": log(),
            "b.las": b"II*\x00" + bytes(range(256)) * 20,
            "c.las": "Dear colleague,\nplease find the log enclosed.\n",
            "d.las": "",
        },
    ),
    logs(
        "log_cut_off_within_its_header",
        "The copy broke off before the parameters: name and place are there, no temperature.",
        Ledger({(None, "no_temperature|unreadable_file", None): 1}, {"readings": 32}, exact=False),
        {"a.las": log().split("~Parameter")[0] + "~Para"},
    ),
]

TOGETHER = [
    logs(
        "log_of_a_well_that_stands_in_the_list",
        "The log's header knows the total depth that the list lacks.",
        Ledger(
            {},
            {"wells": 16, "readings": 33},
            values={("N02", "total_depth_m"): 1160},
            exact=False,
        ),
        {"a.las": OF_N02},
        wells=with_cell(good_wells(), 4, "total_depth", ""),
    ),
    logs(
        "log_that_stands_in_two_folders",
        "The same log was delivered twice.",
        Ledger({(None, "merged", None): None}, {"wells": 17, "readings": 33}, exact=False),
        {"a.las": log(), "copy of a.las": log()},
    ),
    logs(
        "log_with_names_of_ones_own",
        "A contractor has its own mnemonic for the maximum temperature.",
        READ,
        {"a.las": log(BHT=None, MRT=("DEGC", "65.0", "Maximum recorded temperature"))},
    ),
    case(
        "log_among_the_wells",
        "The config names logs under wells rather than under las.",
        refused("inputs.wells", "a.las", "inputs.las"),
        files={"a.las": log()},
        config={"inputs": {"wells": [{"file": "a.las"}]}},
    ),
    case(
        "log_glob_that_finds_nothing",
        "The folder of the logs was renamed.",
        refused("inputs.las", "logs/*.las"),
        config={"inputs": {"las": [{"file": "logs/*.las"}]}},
    ),
]

CASES = [*VERSIONS, *GAPS, *TOGETHER]
