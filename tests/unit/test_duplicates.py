"""The same well or reading written down more than once."""

import numpy as np
import pandas as pd
from hypothesis import given, settings
from hypothesis import strategies as st
from ingest_case import codes, degc, flags, prepare

from basinheat.duplicates import reading_ids
from basinheat.settings.columns import INPUT_COLUMNS

T = degc(2005)


def test_rows_of_one_well_are_merged_and_complete_each_other(tmp_path):
    out = prepare(
        tmp_path,
        wells="TWO,515000,6015000,100,,,3000\nTWO,515010,6015000,100,106,,\n"
        "TWO,515000,6015000,100,,,3000\n",
    )
    assert codes(out, "TWO") == ["merged", "merged"]
    row = out.wells.set_index("well").loc["TWO"]
    assert (row["total_depth_m"], row["datum_elevation_m"]) == (3000.0, 106.0)
    assert "well_conflict" not in row["flags"]


def test_rows_that_differ_are_told(tmp_path):
    out = prepare(tmp_path, wells="TWO,515000,6015000,100,105,,\nTWO,515000,6015000,120,125,,\n")
    assert "well_conflict" in flags(out.wells, "TWO")
    assert codes(out, "TWO") == ["well_conflict"]


def test_rows_in_two_places_refuse_the_well_and_show_both(tmp_path):
    out = prepare(
        tmp_path,
        wells="TWO,515000,6015000,100,105,,\nTWO,515600,6015000,100,105,,\n",
        readings=f"TWO,2005,{T},,,,,,\n",
    )
    both = out.rejected[out.rejected["code"] == "well_location_conflict"]
    assert both["source_line"].tolist() == [18, 19]
    assert "line 18" in both["sentence"].iloc[1] and "line 19" in both["sentence"].iloc[0]
    assert codes(out, "TWO", "readings") == ["well_rejected"]


def test_the_threshold_is_a_setting(tmp_path):
    wells = "TWO,515000,6015000,100,105,,\nTWO,515600,6015000,100,105,,\n"
    out = prepare(tmp_path, wells=wells, screening={"same_well_distance_m": 700})
    assert codes(out, "TWO") == ["merged"]


def test_a_majority_does_not_decide_where_a_well_lies(tmp_path):
    """Copies of one list agree with each other and not with the truth."""
    out = prepare(
        tmp_path,
        wells="TWO,515000,6015000,100,105,,\nTWO,515001,6015000,100,105,,\n"
        "TWO,520000,6015000,100,105,,\n",
    )
    assert codes(out, "TWO") == ["well_location_conflict"] * 3
    assert "TWO" not in set(out.wells["well"])


def test_copies_and_poorer_copies_of_a_reading(tmp_path):
    out = prepare(
        tmp_path,
        readings=f"N00,1505,{T},,8,4,,1984,\nN00,1505,{T},,8,4,,1984,\nN00,1505,{T},,,,,,\n"
        f"N00,1505,{T},dst,,,,,\n",
    )
    assert codes(out) == ["merged", "merged"]
    rows = out.readings[out.readings["measured_depth_m"] == 1505]
    assert sorted(rows["kind"]) == ["bht", "dst"]
    assert rows["since_circulation_h"].tolist()[0] == 8.0


numbers = st.one_of(st.none(), st.floats(0, 5000))


@settings(max_examples=30, deadline=None)
@given(
    st.lists(st.tuples(st.sampled_from("AB"), numbers, numbers, numbers), max_size=12), st.randoms()
)
def test_identity_is_made_of_content(rows, random):
    """Equal content, equal identity; other content, another; the order of rows does not matter."""

    def ids(rows):
        frame = pd.DataFrame({"well": [r[0] for r in rows], "n": range(len(rows))})
        names = ("depth", "temperature", "since_circulation")
        for name, column in INPUT_COLUMNS["readings"].items():
            if column.text:
                frame[name] = frame.get(name, "")
                continue
            place = names.index(name) + 1 if name in names else None
            frame[name] = np.array([np.nan if place is None else r[place] for r in rows], float)
            frame[f"wrong:{name}"], frame[f"as_written:{name}"] = False, ""
        return reading_ids(frame).tolist()

    plain = [
        tuple(None if v is None else round(v, 6) if not isinstance(v, str) else v for v in r)
        for r in rows
    ]
    found = ids(plain)
    assert len(set(found)) == len(set(plain))
    mixed = list(enumerate(plain))
    random.shuffle(mixed)
    assert ids([row for _, row in mixed]) == [found[i] for i, _ in mixed]
