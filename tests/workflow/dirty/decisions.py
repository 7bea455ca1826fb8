"""A reviewer's lines: what they do, and which of them can't be."""

from .base import case, good_readings, good_wells, plus, with_cell
from .model import Ledger, ledger, refused

HEADERS = "well,reading,action,column,value,reason,initials,date"
END = "checked against the file,AB,2024-05-06"
APPLIED = {("decisions", "decision_applied", 2): 1}
REFUSED_WELL = with_cell(with_cell(good_wells(), 4, "x", "0"), 4, "y", "0")
CHANGED = {"inputs": {"decisions": "decisions.csv"}}


def decided(name, why, expected, *lines: str, headers=HEADERS, **files):
    text = plus(headers + "\n", *lines)
    return case(name, why, expected, files={"decisions.csv": text}, config=CHANGED, **files)


def invalid(number: int):
    """The first lines of the file are invalid, and nothing else changes."""
    return ledger({("decisions", "decision_invalid", line): 1 for line in range(2, 2 + number)})


def without_effect(number: int):
    codes = {("decisions", "decision_without_effect", n): 1 for n in range(2, 2 + number)}
    return ledger(codes)


CASES = [
    decided(
        "decision_sets_a_value",
        "A reviewer read the elevation again from the scanned file.",
        ledger(
            APPLIED,
            flags={("wells", "N02"): ("reviewed_set",)},
            values={("N02", "ground_elevation_m"): 21.5},
        ),
        f"N02,,set,ground_elevation,21.5,{END}",
    ),
    decided(
        "decision_gives_a_lost_well_its_place",
        "A well at 0, 0 gets the place that the reviewer found; then it passes the rules.",
        ledger(
            {("decisions", "decision_applied", line): 1 for line in (2, 3)},
            flags={("wells", "N02"): ("reviewed_set",)},
            values={("N02", "easting_m"): 640800},
        ),
        f"N02,,set,x,640800,{END}",
        f"N02,,set,y,5700100,{END}",
        wells=REFUSED_WELL,
    ),
    decided(
        "decision_sets_a_value_that_can_not_be",
        "The reviewer's own value is refused like any other.",
        ledger(
            APPLIED
            | {("wells", "coordinates_impossible", 4): 1, ("readings", "well_rejected", None): 2},
            15,
            30,
        ),
        f"N02,,set,x,9e12,{END}",
    ),
    decided(
        "decision_keeps_a_far_well",
        "The well lies far from all others because it does: an island.",
        ledger(
            APPLIED,
            flags={("wells", "N02"): ("coordinates_suspect", "reviewed_keep")},
            values={("N02", "northing_m"): 6900100},
        ),
        f"N02,,keep,,,{END}",
        wells=with_cell(good_wells(), 4, "y", "6900100"),
    ),
    decided(
        "decision_rejects_a_well",
        "The reviewer trusts nothing of this well.",
        Ledger(
            APPLIED | {("readings", "well_rejected", None): 2},
            {"wells": 15, "readings": 30},
            exact=False,
        ),
        f"N02,,reject,,,{END}",
    ),
    decided(
        "decision_regrades_all_readings_of_a_well",
        "What passed for equilibrium was read during a test.",
        ledger(
            APPLIED,
            flags={("readings", "N02"): ("reviewed_regrade",)},
            values={("N02", "kind"): "dst"},
        ),
        f"N02,,regrade,,dst,{END}",
    ),
    decided(
        "decision_of_records_that_are_not_there",
        "The reviewer's list is older than the data: neither well nor reading exists.",
        without_effect(2),
        f"Far 1,,reject,,,{END}",
        f",no-such-reading,reject,,,{END}",
    ),
    decided(
        "decision_with_nothing_to_change",
        "The value is what it was, and the well was not refused.",
        without_effect(2),
        f"N02,,set,ground_elevation,26,{END}",
        f"N03,,keep,,,{END}",
    ),
    decided(
        "decision_without_reason_initials_or_date",
        "The reviewer was in a hurry.",
        invalid(3),
        "N02,,reject,,,,AB,2024-05-06",
        "N03,,reject,,,bad log,,2024-05-06",
        "N04,,reject,,,bad log,AB,",
    ),
    decided(
        "decision_of_no_known_action",
        "The action is a word of the reviewer's, or blank.",
        invalid(2),
        f"N02,,delete,,,{END}",
        f"N03,,,,,{END}",
    ),
    decided(
        "decision_that_lacks_what_its_action_needs",
        "Columns or values were left out, are of no table, or are no number or kind.",
        invalid(6),
        f"N02,,set,,21,{END}",
        f"N03,,set,ground_elevation,,{END}",
        f"N04,,set,grund_elevation,21,{END}",
        f"N05,,set,ground_elevation,high,{END}",
        f"N06,,regrade,,,{END}",
        f"N07,,regrade,,warm,{END}",
    ),
    decided(
        "decision_that_names_no_record",
        "Neither a well nor a reading is named.",
        invalid(1),
        f",,reject,,,{END}",
    ),
    decided(
        "decision_with_a_date_that_can_not_be",
        "The date of the decision has a slip of the pen.",
        invalid(1),
        "N02,,reject,,,bad log,AB,2024-13-45",
    ),
    decided(
        "decision_line_cut_off",
        "The last line was not finished.",
        ledger(
            APPLIED | {("decisions", "decision_invalid|wrong_number_of_cells", 3): 1},
            values={("N02", "ground_elevation_m"): 21.5},
        ),
        f"N02,,set,ground_elevation,21.5,{END}",
        "N03,,rej",
    ),
    decided(
        "decision_file_without_a_column",
        "The reviewer's sheet has no column of reasons.",
        refused("decisions.csv", "reason"),
        "N02,,reject,,,AB,2024-05-06",
        headers="well,reading,action,column,value,initials,date",
    ),
    decided(
        "decision_file_empty_but_for_headers",
        "The reviewer had nothing to say yet.",
        ledger(),
    ),
    case(
        "decision_file_of_a_european_spreadsheet",
        "The reviewer's sheet was saved with semicolons, a byte order mark and DOS lines.",
        ledger(
            APPLIED,
            flags={("wells", "N02"): ("reviewed_set",)},
            values={("N02", "ground_elevation_m"): 21.5},
        ),
        readings=good_readings(),
        files={
            "decisions.csv": "\ufeff"
            + plus(HEADERS + "\n", f"N02,,set,ground_elevation,21.5,{END}")
            .replace(",", ";")
            .replace("\n", "\r\n")
        },
        config=CHANGED,
    ),
    case(
        "decision_file_is_not_there",
        "The config names a file that the reviewer has not sent.",
        refused("inputs.decisions", "decisions.csv"),
        config=CHANGED,
    ),
]
