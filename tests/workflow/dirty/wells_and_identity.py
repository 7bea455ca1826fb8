"""Names of wells, rows of one well, readings twice, files that disagree, a ready-made schema."""

from .base import (
    case,
    good_readings,
    good_wells,
    inputs,
    plus,
    temperature_at,
    with_cell,
    with_columns,
)
from .model import ledger, rows

WELLS = good_wells()
READINGS = good_readings()
NORMALISED = {"inputs": {"well_names": "normalised"}}
US = {"inputs": {"well_names": "us_api"}}
MATCHED = ("well_name_matched",)


def named(*names: str, rest="30,35,1500") -> str:
    """Wells with further ones of these names, 1.2 km apart."""
    return plus(WELLS, *(f"{n},{642000 + 1200 * i},5748000,{rest}" for i, n in enumerate(names)))


def read(*names: str) -> str:
    """Readings with further ones at 1000 m and below, one per name (line 34 on)."""
    more = (
        f"{name},{1000 + 50 * i},{temperature_at(1000 + 50 * i):.2f},equilibrium,,"
        for i, name in enumerate(names)
    )
    return plus(READINGS, *more)


def of(wells: int, readings: int, *names: str, codes=None):
    """Wells kept, readings kept, and the wells whose readings were matched by another name."""
    flags = {("readings", name): MATCHED for name in names}
    return ledger(codes, wells, readings, flags)


NAMES = [
    case(
        "names_with_zeros_in_front",
        "0042 and 42 are wells of two operators, each with a reading.",
        of(18, 34),
        wells=named("0042", "42"),
        readings=read("0042", "42"),
    ),
    case(
        "names_that_lost_their_zeros",
        "A spreadsheet made the number 42 of the name 0042, and nothing says to join them.",
        of(17, 32, codes={("readings", "unknown_well", 34): 1}),
        wells=named("0042"),
        readings=read("42"),
    ),
    case(
        "names_that_lost_their_zeros_joined",
        "The same, and the config says that names are to be normalised.",
        of(17, 34, "0042"),
        wells=named("0042"),
        readings=read("42", "42.0"),
        config=NORMALISED,
    ),
    case(
        "names_in_another_case_not_joined",
        "Names are text: another case is another name.",
        of(16, 32, codes=rows("readings", "unknown_well", 34, 2)),
        readings=read("n03", "N-03"),
    ),
    case(
        "names_with_blanks_around",
        "A database pads its names to a fixed width.",
        ledger(readings=34),
        readings=read("N03   ", "  N04"),
    ),
    case(
        "names_with_other_marks_joined",
        "One office writes Oak-Hill_7, another OAK HILL 7 or Oak/Hill.7.",
        of(17, 37, "Oak-Hill_7"),
        wells=named("Oak-Hill_7"),
        readings=read("OAK HILL 7", "Oak/Hill.7", "oakhill7", "Oak-Hill_7", "O'ak Hill 7"),
        config=NORMALISED,
    ),
    case(
        "names_that_become_one_but_are_two",
        "A-1 and A1 are two wells, 1.2 km apart, and each has its reading.",
        ledger(
            wells=18,
            readings=34,
            flags={
                ("wells", "A-1"): ("well_name_ambiguous",),
                ("wells", "A1"): ("well_name_ambiguous",),
            },
        ),
        wells=named("A-1", "A1"),
        readings=read("A-1", "A1"),
        config=NORMALISED,
    ),
    case(
        "names_that_could_be_either_of_two",
        "The reading of 'a 1' might belong to A-1 or to A1: nobody may guess.",
        of(18, 32, codes={("readings", "unknown_well", 34): 1}),
        wells=named("A-1", "A1"),
        readings=read("a 1"),
        config=NORMALISED,
    ),
    case(
        "names_of_us_wells_in_three_lengths",
        "State agencies give well numbers of 10, 12 or 14 digits, with dashes or without.",
        of(19, 36, "4212345678", "42-123-45679-00", "42123456800000"),
        wells=named("4212345678", "42-123-45679-00", "42123456800000"),
        readings=read("42-123-45678-00-00", "42123456790000", "42-123-45680", "421234568000"),
        config=US,
    ),
    case(
        "names_of_us_wells_that_share_ten_digits",
        "Two numbers of 14 digits share their first ten, but the wells lie 1.2 km apart.",
        ledger(
            wells=18,
            readings=34,
            flags={
                ("wells", "42123456780000"): ("well_name_ambiguous",),
                ("wells", "42123456780100"): ("well_name_ambiguous",),
            },
        ),
        wells=named("42123456780000", "42123456780100"),
        readings=read("42123456780000", "42123456780100"),
        config=US,
    ),
    case(
        "names_of_us_wells_in_exponents",
        "A spreadsheet showed the number as 4.21235E+13, and saved it like that.",
        of(17, 32, codes={("readings", "unknown_well", 34): 1}),
        wells=named("42123456780000"),
        readings=read("4.21235E+13"),
        config=US,
    ),
    case(
        "names_as_decimals_not_joined",
        "A column of numbers with a gap became decimals: 1001.0.",
        of(17, 32, codes={("readings", "unknown_well", 34): 1}),
        wells=named("1001"),
        readings=read("1001.0"),
    ),
    case(
        "names_that_are_blank_among_wells",
        "A place was noted before the well had a name.",
        ledger(rows("wells", "no_well", 18, 2)),
        wells=named("", "unknown"),
    ),
    case(
        "names_that_stand_in_no_list",
        "Readings of a neighbouring licence were left in the file.",
        ledger(rows("readings", "unknown_well", 34, 3)),
        readings=read("Far 1", "Far 2", "Far 3"),
    ),
]

MORE = "well,x,y,ground_elevation,datum_elevation,total_depth\n"
TWO_FILES = inputs(wells=[{"file": "wells.csv"}, {"file": "more.csv"}])
TWICE = inputs(readings=[{"file": "readings.csv"}, {"file": "more.csv"}])
DATED = with_columns(READINGS, "date", "log_run")
RUN = "N15,2500,78,bht,10,4,1985-03-07,2"


def second(text: str) -> dict:
    return {"files": {"more.csv": text}}


SAME = [
    case(
        "well_twice_the_same",
        "Two exports were pasted together.",
        ledger({("wells", "merged", None): 1}),
        wells=plus(WELLS, WELLS.split("\n")[5]),
    ),
    case(
        "well_twice_with_blanks_filled",
        "One file knows the total depth, the other the elevations.",
        ledger(
            {("wells", "merged", None): 1},
            values={("N02", "total_depth_m"): 1160, ("N02", "ground_elevation_m"): 26},
        ),
        wells=with_cell(WELLS, 4, "total_depth", ""),
        config=TWO_FILES,
        **second(MORE + "N02,640800,5700100,,,1160\n"),
    ),
    case(
        "well_twice_at_places_300_m_apart",
        "Surface and bottom of the hole, or two surveys of one place.",
        ledger({("wells", "merged|well_conflict", None): None}, exact=False),
        wells=plus(WELLS, "N02,641100,5700100,26,31,1160"),
    ),
    case(
        "well_twice_with_other_values",
        "Two files disagree on the total depth; the first in the config counts.",
        ledger(
            {("wells", "well_conflict", None): None},
            values={("N02", "total_depth_m"): 1160},
            exact=False,
        ),
        config=TWO_FILES,
        **second(MORE + "N02,640800,5700100,26,31,1260\n"),
    ),
    case(
        "well_twice_at_places_far_apart",
        "Two wells have one name, or one of two places is wrong.",
        ledger(
            {
                ("wells", "well_location_conflict", None): None,
                ("readings", "well_rejected", None): 2,
            },
            15,
            30,
        ),
        wells=plus(WELLS, "N02,643800,5700100,26,31,1160"),
    ),
    case(
        "reading_twice_the_same",
        "A reading stands in the files of two surveys.",
        ledger({("readings", "merged", None): 1}, readings=33),
        readings=plus(DATED, RUN),
        config=TWICE,
        **second(DATED.split("\n")[0] + f"\n{RUN}\n"),
    ),
    case(
        "reading_twice_with_another_temperature",
        "One run of one date has two temperatures in two files; the first counts.",
        ledger(
            {("readings", "reading_conflict", None): None},
            readings=33,
            values={("N15", "temperature_degc"): 78},
            exact=False,
        ),
        readings=plus(DATED, RUN),
        config=TWICE,
        **second(DATED.split("\n")[0] + f"\n{RUN.replace(',78,', ',81,')}\n"),
    ),
    case(
        "reading_twice_without_date_or_run",
        "Two temperatures of one depth may be two runs: both are kept.",
        ledger(readings=34),
        readings=plus(READINGS, "N15,2500,78,bht,,"),
        config=TWICE,
        **second(READINGS.split("\n")[0] + "\nN15,2500,80,bht,,\n"),
    ),
]

CASES = [*NAMES, *SAME]
