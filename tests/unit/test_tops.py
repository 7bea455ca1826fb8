"""Formation tops: rows of tops, a column per formation, and depths from sea level."""

import pytest
from ingest_case import codes, prepare

# Wells of ingest_case: ground at 100 m, datum 5 m above it, 3005 m to the total depth.


def layers_of(folder, text, wells="", **settings):
    (folder / "l.csv").write_text(text, encoding="utf-8")
    return prepare(folder, wells=wells, inputs={"layers": [{"file": "l.csv", **settings}]})


def spans(out):
    rows = out.layers.sort_values(["well", "top_m"])
    return list(zip(rows["lithology"], rows["top_m"], rows["base_m"], strict=True))


def test_each_top_ends_where_the_next_begins(tmp_path):
    text = "well,top,lithology\nN00,1005,sandstone\nN00,5,shale\nN00,2005,granite\n"
    out = layers_of(tmp_path, text, shape="tops")
    assert spans(out) == [
        ("shale", 0.0, 1000.0),
        ("sandstone", 1000.0, 2000.0),
        ("granite", 2000.0, 3000.0),
    ]
    assert codes(out) == []
    assert out.layers["source_line"].tolist() == [3, 2, 4]
    assert (out.layers["source_file"] == "l.csv").all()


def test_the_deepest_top_needs_a_total_depth_below_it(tmp_path):
    text = (
        "well,top,lithology\nNOTD,5,shale\nNOTD,1005,salt\nN00,5,shale\nN00,3205,salt\nN00,x,salt\n"
    )
    out = layers_of(tmp_path, text, wells="NOTD,515000,6015000,100,105,,\n", shape="tops")
    told = out.rejected.set_index("source_line")["code"].to_dict()
    assert told == {3: "no_base", 5: "no_base", 6: "not_a_number"}
    assert out.layers.set_index("well")["base_m"].to_dict() == {"N00": 3200.0, "NOTD": 1000.0}


def test_two_tops_at_one_depth(tmp_path):
    text = "well,top,lithology\nN00,5,shale\nN00,5,salt\n"
    out = layers_of(tmp_path, text, shape="tops")
    assert codes(out) == ["no_thickness"]
    assert [span[1:] for span in spans(out)] == [(0.0, 3000.0)]


WIDE = "API,Top Chalk,Top Salt,Top Base\nN00,1005,2005,5\nN01,,1505,0\nN02,0,,\nN03,deep,1505,5\n"
FORMATIONS = {"Top Chalk": "limestone", "Top Base": "shale", "Top Salt": "salt"}


def test_a_column_per_formation(tmp_path):
    columns = {"well": "API"}
    out = layers_of(tmp_path, WIDE, shape="wide", tops=FORMATIONS, columns=columns)
    by_well = out.layers.groupby("well")["lithology"].agg(list).to_dict()
    assert by_well == {
        "N00": ["shale", "limestone", "salt"],
        "N01": ["salt"],
        "N03": ["shale", "salt"],
    }
    (told,) = out.rejected.itertuples()
    assert (told.code, told.source_line) == ("not_a_number", 5)
    assert (told.column, told.value) == ("Top Chalk", "deep")


def test_zero_is_a_depth_where_the_file_says_so(tmp_path):
    out = layers_of(
        tmp_path,
        "well,A,B\nN00,0,1005\n",
        shape="wide",
        tops={"A": "shale", "B": "salt"},
        zero_is_missing=[],
    )
    assert spans(out) == [("shale", 0.0, 1000.0), ("salt", 1000.0, 3000.0)]


def test_a_wide_file_in_feet_tells_broken_lines_once(tmp_path):
    text = "well,A,B\nN00,16.4042,3297.244\nN01,1\n"
    out = layers_of(
        tmp_path, text, shape="wide", tops={"A": "shale", "B": "salt"}, units={"top": "ft"}
    )
    assert codes(out) == ["wrong_number_of_cells"]
    assert spans(out)[0][1:] == pytest.approx((0.0, 1000.0), abs=1e-3)


@pytest.mark.parametrize(
    ("reference", "top", "base"), [("subsea_depth", 900, 1900), ("subsea_elevation", -900, -1900)]
)
def test_depths_from_sea_level(tmp_path, reference, top, base):
    """Ground at 100 m: 900 m below sea level is 1000 m below ground."""
    text = f"well,top,base,lithology\nN00,{top},{base},salt\nHIGH,{top},{base},salt\n"
    out = layers_of(tmp_path, text, wells="HIGH,515000,6015000,,,,\n", depth_reference=reference)
    assert spans(out) == [("salt", 1000.0, 2000.0)]
    assert codes(out) == ["no_depth"]  # HIGH has no elevation


def test_tops_from_sea_level_down_to_the_total_depth(tmp_path):
    text = "well,top,lithology\nN00,900,salt\nN00,-100,shale\n"
    out = layers_of(tmp_path, text, shape="tops", depth_reference="subsea_depth")
    assert spans(out) == [("shale", 0.0, 1000.0), ("salt", 1000.0, 3000.0)]


def test_what_is_left_of_overlaps_is_rounding(tmp_path):
    """Layers as the tables hold them never overlap, so that no later stage judges them anew."""
    text = "well,top,base,lithology\nN00,5,1005.4,shale\nN00,1005,2005,salt\n"
    out = layers_of(tmp_path, text)
    assert spans(out) == [("shale", 0.0, 1000.0), ("salt", 1000.0, 2000.0)]


def test_faults_of_the_settings(tmp_path):
    from basinheat.settings.load import load_config

    (tmp_path / "w.csv").write_text("well,x,y\nN,1,1\n")
    (tmp_path / "r.csv").write_text("well,depth,temperature\nN,1,1\n")
    (tmp_path / "l.csv").write_text("well,A\nN,5\n")
    wide = {"file": "l.csv", "shape": "wide"}
    config = {"run": "t", "crs": "EPSG:32631", "inputs": {}}
    for layers, part in (
        (wide, "tops"),
        (wide | {"tops": {"B": "salt"}}, '"B"'),
        ({"file": "l.csv", "tops": {"A": "salt"}}, "shape: wide"),
    ):
        files = {"wells": [{"file": "w.csv"}], "readings": [{"file": "r.csv"}], "layers": [layers]}
        with pytest.raises(Exception, match=part):
            load_config(config | {"inputs": files}, "t.yaml", tmp_path)
    files["layers"] = [wide | {"tops": {"A": "salt"}, "units": {"top": "ft"}}]
    assert load_config(config | {"inputs": files}, "t.yaml", tmp_path)
